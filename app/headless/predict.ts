/**
 * The command line: predicts what a design does with the same engine as the page. Readings go to
 * standard output as JSON, problems to standard error, one sentence each, with exit code 2.
 */
import { accessSync, constants, statSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import {
  type Design,
  type Outcome,
  type Problem,
  READINGS,
  type ReadingName,
} from '../../sim-core/index.ts';
import { Run, SETTLED_DISTANCE } from '../../sim-core/solve.ts';
import { MOST_CHARACTERS, readDesign } from '../document/file.ts';
import { decodeLink } from '../document/link.ts';
import { carryOut } from './carryOut.ts';
import { type Request, readRequest, USAGE } from './request.ts';
import { MOST_BYTES, partsOnlyIn, readState, type SavedState, writeState } from './stateFile.ts';
import { fileProblem, readText } from './textFile.ts';
import { findSignals, WaveformTable } from './waveformTable.ts';

/** A sentence on standard error; what came from a file must not steer the terminal. */
function say(sentence: string): void {
  process.stderr.write(`${sentence.replace(/[\p{C}\p{Zl}\p{Zp}]/gu, '\uFFFD')}\n`);
}

function report({ place, message }: Problem): void {
  say(place === '' ? message : `${place}: ${message}`);
  process.exitCode = 2;
}

/** Whether a word is meant as a share link and not as a file. */
const isLink = (word: string): boolean => /^https?:|(^|#)d=\d/.test(word);

/** Say in which file the problem lies, where it does not lie in a value of the design. */
const inFile = <T>(path: string, outcome: Outcome<T>): Outcome<T> =>
  outcome.ok || outcome.problem.place !== ''
    ? outcome
    : { ok: false, problem: { ...outcome.problem, place: path } };

async function loadDesign(word: string): Promise<Outcome<Design>> {
  if (isLink(word)) return decodeLink(word);
  // A character takes at most three bytes for each of its 16-bit units.
  const text = readText(word, 3 * MOST_CHARACTERS);
  return text.ok ? inFile(word, readDesign(text.value)) : text;
}

function loadState(path: string): Outcome<SavedState> {
  const text = readText(path, MOST_BYTES);
  return text.ok ? inFile(path, readState(text.value)) : text;
}

/** Found out before the run rather than after it: whether a file can be written here. */
function checkWritable(path: string): Problem | null {
  try {
    const present = statSync(path, { throwIfNoEntry: false });
    if (present?.isDirectory()) return { place: path, message: 'This is a folder, not a file.' };
    accessSync(present ? path : dirname(path), constants.W_OK);
    return null;
  } catch (error) {
    return fileProblem(path, error);
  }
}

const few = (names: readonly string[]): string =>
  names.length > 4
    ? `${names.slice(0, 4).join(', ')} and ${names.length - 4} more`
    : names.join(', ');

/** A saved state may come from another design: say what of it has no meaning in this one. */
function noteStrangers(run: Run, saved: SavedState): void {
  const here = run.state();
  const strangers = partsOnlyIn(saved.state, here);
  const fresh = partsOnlyIn(here, saved.state);
  if (strangers.length > 0)
    say(`Note: the design has no ${few(strangers)}; left out of the state.`);
  if (fresh.length > 0) say(`Note: the state tells nothing of ${few(fresh)}; taken as empty.`);
}

/** The design and, where one is asked for, the state that a request names. */
async function load(
  request: Request,
): Promise<Outcome<{ readonly design: Design; readonly saved: SavedState | null }>> {
  let saved: SavedState | null = null;
  if (request.state !== null) {
    const loaded = loadState(request.state);
    if (!loaded.ok) return loaded;
    saved = loaded.value;
  }
  if (request.design === null) {
    // A request without a design names a state: readRequest has seen to it.
    return { ok: true, value: { design: (saved as SavedState).design, saved } };
  }
  const design = await loadDesign(request.design);
  return design.ok ? { ok: true, value: { design: design.value, saved } } : design;
}

/** The sentence for a run that was to settle and has not. */
function unsettled(run: Run, since: number): Problem {
  const { settledDistance } = run.readings();
  const left = settledDistance === null ? 'not yet known' : `${settledDistance.toPrecision(3)} %`;
  const seconds = Number((run.time - since).toPrecision(4));
  const message = `The run has not settled within ${seconds} s: its distance from steady is ${left}, and counts as settled below ${SETTLED_DISTANCE * 100} %. To go on from here, use --save-state, then --state.`;
  return { place: '--until-settled', message };
}

async function predict(request: Request): Promise<void> {
  const loaded = await load(request);
  if (!loaded.ok) return report(loaded.problem);
  const { design, saved } = loaded.value;
  const opened = Run.open(design, saved?.state);
  if (!opened.ok) return report(opened.problem);
  const run = opened.value;
  if (saved) noteStrangers(run, saved);

  const { csv, saveState, duration } = request;
  const unwritable = saveState === null ? null : checkWritable(saveState);
  if (unwritable) return report(unwritable);
  let table: WaveformTable | null = null;
  const begun = run.time;
  let state: SavedState['state'];
  try {
    if (csv) {
      const signals = findSignals(run, csv.signals);
      if (!signals.ok) return report(signals.problem);
      table = new WaveformTable(csv.file, run, signals.value);
    }
    state = carryOut(run, duration, () => table?.add(run));
    table?.close();
  } catch (error) {
    return report(fileProblem(csv?.file ?? '', error));
  }
  if (run.failed) return report(run.failed);

  if (saveState !== null) {
    try {
      writeFileSync(saveState, writeState({ design, state }));
    } catch (error) {
      // The readings are none the worse for it.
      report(fileProblem(saveState, error));
    }
  }
  if (duration === null && !run.settled) report(unsettled(run, begun));
  const readings = run.readings();
  const names = Object.keys(READINGS) as ReadingName[];
  const prediction = {
    design: design.name,
    time: state.time,
    periods: run.periods,
    settled: run.settled,
    readings: Object.fromEntries(names.map((name) => [name, readings[name]])),
    units: Object.fromEntries(names.map((name) => [name, READINGS[name].unit])),
    joints: run.joints(),
    work: run.work(),
  };
  process.stdout.write(`${JSON.stringify(prediction, null, 2)}\n`);
}

const request = readRequest(process.argv.slice(2));
if (!request.ok) report(request.problem);
else if (request.value === null) process.stdout.write(USAGE);
else await predict(request.value);
