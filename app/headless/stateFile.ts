/** A run's state as the text of a file, together with the design that reached it. */
import { checkDesign, type Design, differences, type Outcome } from '../../sim-core/index.ts';
import type { RunState } from '../../sim-core/solve.ts';

/** Longest state file that is read, bytes; the largest stack needs a fifth. */
export const MOST_BYTES = 1024 * 1024;

const FORMAT = 'kilostack-state';
const VERSION = 1;

/** Latest time of a state, seconds: beyond it a double can no longer count the shortest steps. */
const LATEST = 10_000;

/** What a state file holds. */
export interface SavedState {
  readonly design: Design;
  readonly state: RunState;
}

/** The text of a state's file. */
export function writeState({ design, state }: SavedState): string {
  const data = { format: FORMAT, version: VERSION, design: differences(design), state };
  return `${JSON.stringify(data, null, 1)}\n`;
}

const refuse = (message: string): Outcome<never> => ({
  ok: false,
  problem: { place: '', message },
});

const damaged = (what: string): Outcome<never> => refuse(`The state file is damaged: ${what}.`);

type Plain = Readonly<Record<string, unknown>>;

function isPlain(value: unknown): value is Plain {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

/** Finite numbers by name; null if `raw` is anything else. */
function readNumbers(raw: unknown): Readonly<Record<string, number>> | null {
  if (!isPlain(raw)) return null;
  const entries = Object.entries(raw);
  const finite = (entry: [string, unknown]): entry is [string, number] => Number.isFinite(entry[1]);
  return entries.every(finite) ? Object.fromEntries(entries) : null;
}

/** The state in untrusted text, or the sentence that refuses it. Never throws. */
export function readState(text: string): Outcome<SavedState> {
  let data: unknown;
  try {
    data = JSON.parse(text);
  } catch {
    return damaged('it is not JSON');
  }
  if (!isPlain(data) || data.format !== FORMAT) {
    return refuse(`The file holds no state of a run: its “format” must be “${FORMAT}”.`);
  }
  if (typeof data.version === 'number' && data.version > VERSION) {
    return refuse('The state was saved by a newer version of this program; continue it there.');
  }
  if (data.version !== VERSION) return damaged(`its “version” must be ${VERSION}`);
  const design = checkDesign(data.design);
  if (!design.ok) {
    const { place, message } = design.problem;
    return refuse(
      `The state file's design is refused: ${place === '' ? '' : `${place}: `}${message}`,
    );
  }
  const { state } = data;
  if (!isPlain(state)) return damaged('it has no “state”');
  const { time, phase } = state;
  if (typeof time !== 'number' || !(time >= 0 && time <= LATEST)) {
    return damaged(`its time must be a number of seconds from 0 to ${LATEST}`);
  }
  if (typeof phase !== 'number' || !(phase >= 0 && phase < 1)) {
    return damaged('its phase must be a number from 0 to below 1');
  }
  const charge = readNumbers(state.charge);
  if (charge === null) return damaged('its “charge” must hold finite numbers by name');
  const fluxLinkage = readNumbers(state.fluxLinkage);
  if (fluxLinkage === null) return damaged('its “fluxLinkage” must hold finite numbers by name');
  return { ok: true, value: { design: design.value, state: { time, phase, charge, fluxLinkage } } };
}

/** The parts of which one state tells and the other does not. */
export function partsOnlyIn(state: RunState, other: RunState): readonly string[] {
  const missing = (from: Readonly<Record<string, number>>, there: object) =>
    Object.keys(from).filter((name) => !Object.hasOwn(there, name));
  return [...missing(state.charge, other.charge), ...missing(state.fluxLinkage, other.fluxLinkage)];
}
