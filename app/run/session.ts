/**
 * The session: a plain subscriber to the document, outside React. It sends designs to the worker,
 * pulls what the worker computes, and writes it to the run store and the lanes' columns.
 */
import { type Remote, wrap } from 'comlink';
import {
  type Design,
  fieldOf,
  formatQuantity,
  GROUPS,
  type GroupName,
  placesThatDiffer,
} from '../../sim-core/index.ts';
import { useDocument } from '../document/store.ts';
import { appendHistory, clearColumns, markHistory, setDetail } from '../lanes/columns.ts';
import type { Chunk, HistoryColumns } from './messages.ts';
import { useRun } from './store.ts';
import type { Solver } from './worker.ts';

/** What the worker still has to be told, the latest wish of each kind only. */
interface Wishes {
  open: Design | null;
  change: Design | null;
  watch: readonly string[] | null;
}

/** The lanes are drawn no more often than this, ms: a person sees no more, and drawing costs. */
const DRAW_EVERY = 40;
/** Figures change no more often than this, ms: faster ones cannot be read. */
const WRITE_EVERY = 150;

let solver: Remote<Solver> | null = null;
const wishes: Wishes = { open: null, change: null, watch: null };
let held = false;
/** Whether wishes are being told, and whether the loop of pulls is under way. */
let telling = false;
/** Whether the worker has yet to answer the wish for a new run. */
let opening = false;
let pulling = false;
/** Whether there is anything to compute: not settled, not failed. */
let awake = true;
/** Time of the run at the last change, seconds. */
let changedAt = 0;
/** When the lanes and the figures were last brought up to date, ms. */
let drawnAt = 0;
let writtenAt = 0;
/** Periods that the history strip does not show yet. */
const undrawn: HistoryColumns[] = [];

const watched = (section: number): readonly string[] => [
  'bridge voltage',
  'primary current',
  'flux linkage',
  `section ${section} winding voltage`,
  `section ${section} winding current`,
  'output voltage',
];

/** What a change was, for the history strip: "Bus voltage 310 V → 320 V". */
function describeChange(before: Design, after: Design): string {
  const places = placesThatDiffer(before, after);
  if (places.length !== 1) return `${places.length} values changed`;
  const [group, name] = places[0].split('.') as [GroupName, string];
  const field = Object.hasOwn(GROUPS, group) ? fieldOf(group, name) : undefined;
  if (!field) return 'a section changed';
  const print = (design: Design): string => {
    const value = (design[group] as Readonly<Record<string, unknown>>)[name];
    if (typeof value === 'number') {
      return formatQuantity(value, field.kind === 'quantity' ? field.unit : '');
    }
    if (field.kind === 'choice') {
      return field.options.find((option) => option.value === value)?.label ?? '';
    }
    if (field.kind === 'quantity') return field.absent;
    return value ? 'yes' : 'no';
  };
  return `${field.label} ${print(before)} → ${print(after)}`;
}

/** Whether anything that the plant is built from differs (not just the name or the notes). */
function plantDiffers(before: Design, after: Design): boolean {
  return placesThatDiffer(before, after).some((place) => place !== 'name' && place !== 'notes');
}

function takeChunk(chunk: Chunk): void {
  const now = performance.now();
  awake = chunk.status === 'running';
  // What comes last stays on the page: nothing of it may wait for a next time.
  const last = !awake || held;
  undrawn.push(chunk.history);
  if (last || now - drawnAt >= DRAW_EVERY) {
    drawnAt = now;
    for (const history of undrawn) appendHistory(history);
    undrawn.length = 0;
    if (chunk.detail) setDetail(chunk.detail);
  }
  if (!last && now - writtenAt < WRITE_EVERY) return;
  writtenAt = now;
  const { settledAfter } = useRun.getState();
  useRun.setState({
    // Held while this slice was still being computed.
    state: held && awake ? 'held' : chunk.status,
    ...(chunk.problem ? { problem: chunk.problem } : {}),
    time: chunk.time,
    settledAfter: chunk.status === 'settled' ? (settledAfter ?? chunk.time - changedAt) : null,
    readings: chunk.readings,
    joints: chunk.joints,
    effort: chunk.effort,
  });
}

/**
 * Tell the worker what is wished, at once and not after the slice it is computing: it takes
 * messages in their order, so that the next slice is already the new design's.
 */
async function tell(): Promise<void> {
  if (telling || !solver) return;
  telling = true;
  try {
    for (;;) {
      const { open, change, watch } = wishes;
      wishes.open = wishes.change = wishes.watch = null;
      if (!open && !change && !watch) break;
      // The lanes may show another signal: compute on, if only for two periods.
      if (watch) await solver.watch(watch);
      awake = true;
      if (open || change) {
        opening = open !== null;
        const opened = await (open ? solver.open(change ?? open) : solver.change(change as Design));
        opening = false;
        // The first samples of the new design are drawn as soon as they are there; its figures
        // follow, so that writing them does not hold up the lanes.
        drawnAt = 0;
        writtenAt = performance.now();
        if (opened.ok) {
          if (open) {
            undrawn.length = 0;
            clearColumns();
          }
          changedAt = open ? 0 : useRun.getState().time;
          useRun.setState({
            problem: null,
            signals: opened.signals,
            settledAfter: null,
            ...(open ? { time: 0, readings: null, joints: null, effort: null } : {}),
            state: held ? 'held' : 'running',
          });
        } else {
          // What the page shows cannot run; what did run is no longer what the page shows.
          awake = false;
          useRun.setState({ state: 'failed', problem: opened.problem });
        }
      }
      void pull();
    }
  } finally {
    telling = false;
  }
}

/** Pull slices until the run is held, settled or failed. */
async function pull(): Promise<void> {
  if (pulling || !solver) return;
  pulling = true;
  try {
    while (!held && awake) {
      const chunk = await solver.next();
      if (!chunk) break;
      // A new run is on its way: nothing of the old one belongs before it.
      if (!opening) takeChunk(chunk);
    }
  } finally {
    pulling = false;
  }
}

/** Start the worker and follow the document from now on. Call once. */
export function openSession(): void {
  const worker = new Worker(new URL('./worker.ts', import.meta.url), { type: 'module' });
  worker.addEventListener('error', () => {
    useRun.setState({
      state: 'failed',
      problem: { place: '', message: 'The solver stopped unexpectedly. Reload the page.' },
    });
  });
  solver = wrap<Solver>(worker);
  wishes.watch = watched(useRun.getState().section);
  wishes.open = useDocument.getState().design;
  useDocument.subscribe(({ design, past, future }, before) => {
    if (design === before.design || !plantDiffers(before.design, design)) return;
    const begun = past.length === 0 && future.length === 0;
    if (begun || design.name !== before.design.name) {
      // Another design was opened: it starts from rest.
      wishes.open = design;
      wishes.change = null;
      showSection(Math.min(useRun.getState().section, design.sections.count));
    } else {
      // An edit that undo takes for one with the last is one turn of one value.
      markHistory(describeChange(before.design, design), past === before.past);
      wishes.change = design;
    }
    void tell();
  });
  useRun.subscribe(({ section }, before) => {
    if (section === before.section) return;
    wishes.watch = watched(section);
    void tell();
  });
  void tell();
}

/** Stop the clock of the run; values can still be changed. */
export function hold(): void {
  held = true;
  if (useRun.getState().state !== 'failed') useRun.setState({ state: 'held' });
}

/** Let the run go on. */
export function resume(): void {
  held = false;
  if (useRun.getState().state === 'held') useRun.setState({ state: 'running' });
  void pull();
}

/** Start the present design again, from rest. */
export function restart(): void {
  held = false;
  wishes.open = useDocument.getState().design;
  wishes.change = null;
  void tell();
}

/** Show another section's winding in the lanes, counted from 1. */
function showSection(section: number): void {
  useRun.setState({ section });
}
