/** What a hand has put into a field and what became of it, beside the value in force. */
import { useState } from 'react';

/** Takes a value; null when it is in force now, else the sentence that refuses it. */
export type Take<T> = (value: T) => string | null;

/** A field's text and refusal. */
export interface Attempt {
  /** Text to show: what was typed, else the value in force. */
  readonly text: string;
  /** Text that was typed and is not in force (yet), else null. */
  readonly typed: string | null;
  /** Why the last try was refused, else null. */
  readonly problem: string | null;
  type(text: string): void;
  /** Record what became of a try: null clears text and refusal. */
  finish(refusal: string | null): void;
}

/**
 * Hold what is typed over `shown`, the text of the value in force. When that changes by other
 * means (undo, another field), what was typed is dropped: it answered an older question.
 */
export function useAttempt(shown: string): Attempt {
  const [state, setState] = useState<{
    basis: string;
    typed: string | null;
    problem: string | null;
  } | null>(null);
  const live = state?.basis === shown ? state : null;
  const typed = live?.typed ?? null;
  const problem = live?.problem ?? null;
  return {
    text: typed ?? shown,
    typed,
    problem,
    type: (text) => setState({ basis: shown, typed: text, problem }),
    finish: (refusal) =>
      setState(refusal === null ? null : { basis: shown, typed, problem: refusal }),
  };
}
