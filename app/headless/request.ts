/** What a command line asks of a prediction: from words to a checked request. */
import { parseArgs } from 'node:util';
import type { Outcome } from '../../sim-core/index.ts';
import { parseQuantity } from '../quantity/parse.ts';

/** Longest time that may be asked for, seconds of simulated time. */
const MOST_SECONDS = 1000;

/** When a run that is to settle is given up: simulated seconds and drive periods. */
export const GIVEN_UP_AFTER = { seconds: 10, periods: 1_000_000 } as const;

/** Signals in a table that names none. */
const USUAL_SIGNALS = ['bridge voltage', 'primary current', 'flux linkage', 'output voltage'];

/** A checked wish. */
export interface Request {
  /** Path of a design's file, or a share link; null: the design in the state file. */
  readonly design: string | null;
  /** Seconds to run for; null: until settled. */
  readonly duration: number | null;
  /** Path of a state to take up; null: from rest. */
  readonly state: string | null;
  readonly saveState: string | null;
  readonly csv: { readonly file: string; readonly signals: readonly string[] } | null;
}

export const USAGE = `Predict what a supply does: the same engine as the page, without the page.

  npm run --silent predict -- <design> [options]

<design>            a design file, or a share link (whole, or from its # on)
--for <time>        run for this long, e.g. 20ms; at most ${MOST_SECONDS} s
--until-settled     run until settled (the default); given up after ${GIVEN_UP_AFTER.seconds} s of simulated
                    time or ${GIVEN_UP_AFTER.periods} drive periods, with exit code 2
--from-rest         start from rest (the default)
--state <file>      take up a saved state; without <design>, also the design saved with it
--save-state <file> save the state reached
--csv <file>        write every step to a table; its first column is the time
--signals "a, b"    its other columns (else ${USUAL_SIGNALS.join(', ')})
--help              this text

The readings go to standard output as JSON, in SI units; "units" names each. Those of a period
are taken over the last whole drive period, and null before there is one. Problems go to standard
error, with exit code 2. sim-core/REFERENCE.md lists the fields of a design, the readings and the
signals. Quote a link: the shell takes a bare # for a comment.
`;

const OPTIONS = {
  for: { type: 'string' },
  'until-settled': { type: 'boolean' },
  'from-rest': { type: 'boolean' },
  state: { type: 'string' },
  'save-state': { type: 'string' },
  csv: { type: 'string' },
  signals: { type: 'string' },
  help: { type: 'boolean', short: 'h' },
} as const;

const refuse = (place: string, message: string): Outcome<never> => ({
  ok: false,
  problem: { place, message },
});

function readWords(words: readonly string[]) {
  return parseArgs({
    args: [...words],
    options: OPTIONS,
    allowPositionals: true,
    tokens: true,
  });
}

function readDuration(text: string): Outcome<number> {
  const read = parseQuantity(text, 's');
  if (read === null) return refuse('--for', 'A time must follow, for example 20ms.');
  if (typeof read !== 'number') return refuse('--for', read.problem);
  if (read > 0 && read <= MOST_SECONDS) return { ok: true, value: read };
  return refuse(
    '--for',
    `The time must be above 0 and at most ${MOST_SECONDS} s; ${read} s was given.`,
  );
}

/** The request that the words of a command line make, null for a call for help, or a refusal. */
export function readRequest(words: readonly string[]): Outcome<Request | null> {
  let read: ReturnType<typeof readWords>;
  try {
    read = readWords(words);
  } catch (error) {
    // Node's own words for an unknown option or a missing value: their first sentence.
    const [said] = (error instanceof Error ? error.message : '').split(/\.\s|\n|\. /);
    return refuse('', `${said.replace(/\.$/, '')}; --help lists the options.`);
  }
  const { values, positionals, tokens } = read;
  if (values.help) return { ok: true, value: null };

  const seen = new Set<string>();
  for (const token of tokens) {
    if (token.kind !== 'option') continue;
    if (seen.has(token.name)) return refuse(token.rawName, 'The option is given twice.');
    seen.add(token.name);
    if (token.value?.trim() === '') return refuse(token.rawName, 'Something must follow.');
  }
  if (positionals.length > 1) {
    return refuse('', `One design is predicted at a time; ${positionals.length} were given.`);
  }
  const design = positionals[0] ?? null;
  const state = values.state ?? null;
  if (design === null && state === null) {
    return refuse('', 'Which design? Name its file or give its link; --help tells more.');
  }
  if (state !== null && values['from-rest']) {
    return refuse('--from-rest', 'A run starts either from rest or from --state, not from both.');
  }
  if (values.for !== undefined && values['until-settled']) {
    return refuse('--until-settled', 'A run ends either so or after --for, not both.');
  }
  let duration: number | null = null;
  if (values.for !== undefined) {
    const asked = readDuration(values.for);
    if (!asked.ok) return asked;
    duration = asked.value;
  }
  if (values.signals !== undefined && values.csv === undefined) {
    return refuse('--signals', 'These are the columns of a table: name its file with --csv.');
  }
  const signals = values.signals
    ?.split(',')
    .map((name) => name.trim())
    .filter((name) => name !== '');
  if (signals?.length === 0) return refuse('--signals', 'No signal is named.');
  const csv =
    values.csv === undefined
      ? null
      : { file: values.csv, signals: [...new Set(signals ?? USUAL_SIGNALS)] };
  return {
    ok: true,
    value: { design, duration, state, saveState: values['save-state'] ?? null, csv },
  };
}
