/** The design that the page shows, and what can be undone and redone. */
import { create } from 'zustand';
import { type Design, EXAMPLES, type Outcome, placesThatDiffer } from '../../sim-core/index.ts';

/** Edits of one and the same place that follow each other this fast are one step of undo, ms. */
const MERGE_WITHIN = 600;
/** Steps of undo that are kept. */
const MOST_STEPS = 200;

/** The document store. Its designs are checked ones: see `checkDesign` and the actions. */
export interface DocumentState {
  readonly design: Design;
  /** Earlier designs, oldest first. */
  readonly past: readonly Design[];
  /** Undone designs, the next to redo last. */
  readonly future: readonly Design[];
  /** Take a changed design as one step; rapid changes of the same single place are one step. */
  edit(next: Design): void;
  /** Begin with a design, without a past. */
  begin(design: Design): void;
  undo(): void;
  redo(): void;
}

/** The last edit: the one place it changed (null when several) and its time in ms. */
interface LastEdit {
  readonly place: string;
  readonly time: number;
}

export const useDocument = create<DocumentState>((set, get) => {
  let last: LastEdit | null = null;
  return {
    design: EXAMPLES[0].design,
    past: [],
    future: [],
    edit(next) {
      const { design, past } = get();
      const places = placesThatDiffer(design, next);
      if (places.length === 0) return;
      const time = Date.now();
      const place = places.length === 1 ? places[0] : null;
      const merges =
        last !== null && past.length > 0 && place === last.place && time - last.time < MERGE_WITHIN;
      last = place === null ? null : { place, time };
      set({
        design: next,
        past: merges ? past : [...past, design].slice(-MOST_STEPS),
        future: [],
      });
    },
    begin(design) {
      last = null;
      set({ design, past: [], future: [] });
    },
    undo() {
      const { design, past, future } = get();
      if (past.length === 0) return;
      last = null;
      set({ design: past[past.length - 1], past: past.slice(0, -1), future: [...future, design] });
    },
    redo() {
      const { design, past, future } = get();
      if (future.length === 0) return;
      last = null;
      set({
        design: future[future.length - 1],
        past: [...past, design],
        future: future.slice(0, -1),
      });
    },
  };
});

/**
 * Put the outcome of an action into the store: null when it was taken, else the sentence that
 * refuses it, with the document as it was.
 */
export function applyEdit(outcome: Outcome<Design>): string | null {
  if (!outcome.ok) return outcome.problem.message;
  useDocument.getState().edit(outcome.value);
  return null;
}
