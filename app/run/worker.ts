/**
 * The worker: holds one run and advances it a slice at a time, as the session pulls. Cancelling
 * is simply not pulling.
 */
import { expose, transfer } from 'comlink';
import type { Design, Problem } from '../../sim-core/index.ts';
import { Run } from '../../sim-core/solve.ts';
import type { Chunk, DetailColumns, HistoryColumns, Opened } from './messages.ts';

/** One pull computes for about this long, ms: short, so that a change is never kept waiting. */
const SLICE = 10;
/** Steps between two looks at the clock. */
const STEPS_PER_LOOK = 16;
/** Drive periods in the detail. */
const DETAIL_PERIODS = 2;
/** Most samples kept of one period; a period with more is thinned to every second one. */
const MOST_SAMPLES = 16384;

/** Samples of the watched signals over one drive period. */
class Samples {
  readonly time = new Float64Array(MOST_SAMPLES);
  readonly columns: readonly Float64Array[];
  length = 0;
  private every = 1;
  private skipped = 0;

  constructor(signals: number) {
    this.columns = Array.from({ length: signals }, () => new Float64Array(MOST_SAMPLES));
  }

  clear(): void {
    this.length = 0;
    this.every = 1;
    this.skipped = 0;
  }

  add(run: Run, signals: readonly number[]): void {
    if (++this.skipped < this.every) return;
    this.skipped = 0;
    if (this.length === MOST_SAMPLES) this.thin();
    this.time[this.length] = run.time;
    for (let k = 0; k < signals.length; k++) this.columns[k][this.length] = run.value(signals[k]);
    this.length++;
  }

  private thin(): void {
    this.every *= 2;
    this.length = MOST_SAMPLES / 2;
    for (let j = 0; j < this.length; j++) {
      this.time[j] = this.time[2 * j + 1];
      for (const column of this.columns) column[j] = column[2 * j + 1];
    }
  }
}

/** Columns of doubles that grow by a period at a time and are handed over whole. */
class HistoryBuffer {
  private readonly rows: number[][] = [];

  add(run: Run): void {
    const v = run.extent('output voltage');
    const i = run.extent('primary current');
    if (v && i) this.rows.push([run.time, v.min, v.max, v.mean, i.min, i.max, i.mean]);
  }

  take(): HistoryColumns {
    const column = (k: number): Float64Array => Float64Array.from(this.rows, (row) => row[k]);
    const envelope = (k: number) => ({ min: column(k), max: column(k + 1), mean: column(k + 2) });
    const columns = {
      time: column(0),
      outputVoltage: envelope(1),
      primaryCurrent: envelope(4),
    };
    this.rows.length = 0;
    return columns;
  }
}

let run: Run | null = null;
let steps: Iterator<boolean> | null = null;
let names: readonly string[] = [];
let indices: readonly number[] = [];
/** The period in progress first, then whole ones, latest first. */
let windows: Samples[] = [];
const history = new HistoryBuffer();
let sent = false;

/** Find the watched signals in the run and forget old samples. */
function watchNow(): void {
  if (!run) return;
  const all = run.signals.map((s) => s.name);
  indices = names.map((name) => all.indexOf(name)).filter((k) => k >= 0);
  windows = Array.from({ length: DETAIL_PERIODS + 1 }, () => new Samples(indices.length));
  sent = false;
}

function turnWindows(): void {
  const oldest = windows.pop();
  if (!oldest) return;
  oldest.clear();
  windows.unshift(oldest);
}

function detailIsFull(): boolean {
  return windows.slice(1).every((w) => w.length > 0);
}

/** The last whole periods, or what there is of the first one. */
function detailColumns(): DetailColumns | null {
  if (!run) return null;
  const signals = run.signals;
  const whole = windows.slice(1).filter((w) => w.length > 0);
  const parts = whole.length > 0 ? whole.reverse() : [windows[0]];
  const length = parts.reduce((sum, w) => sum + w.length, 0);
  if (length < 2) return null;
  const join = (of: (w: Samples) => Float64Array): Float64Array => {
    const column = new Float64Array(length);
    let at = 0;
    for (const w of parts) {
      column.set(of(w).subarray(0, w.length), at);
      at += w.length;
    }
    return column;
  };
  return {
    time: join((w) => w.time),
    columns: indices.map((_, k) => join((w) => w.columns[k])),
    names: indices.map((k) => signals[k].name),
  };
}

function buffersOf(chunk: Chunk): ArrayBufferLike[] {
  const { time, outputVoltage: v, primaryCurrent: i } = chunk.history;
  const columns = [time, v.min, v.max, v.mean, i.min, i.max, i.mean];
  if (chunk.detail) columns.push(chunk.detail.time, ...chunk.detail.columns);
  return columns.map((column) => column.buffer);
}

const solver = {
  /** Start a checked design from rest; the run before is forgotten only if this one opens. */
  open(design: Design): Opened {
    const opened = Run.open(design);
    if (!opened.ok) return opened;
    run = opened.value;
    steps = run.advance();
    history.take();
    watchNow();
    return { ok: true, signals: run.signals };
  },

  /** Put another checked design in force in the running plant. */
  change(design: Design): Opened {
    if (!run) return solver.open(design);
    const changed = run.change(design);
    if (!changed.ok) return changed;
    steps = run.advance();
    watchNow();
    return { ok: true, signals: run.signals };
  },

  /** Choose the signals of the detail, by name; those the design does not have are left out. */
  watch(signals: readonly string[]): void {
    names = signals;
    watchNow();
  },

  /** Advance for one slice and hand over what is new. */
  next(): Chunk | null {
    if (!run || !steps) return null;
    const until = performance.now() + SLICE;
    let ended = false;
    let problem: Problem | null = run.failed;
    for (let count = 1; !problem; count++) {
      const turn = steps.next();
      if (turn.done) {
        problem = run.failed;
        break;
      }
      windows[0].add(run, indices);
      if (turn.value) {
        ended = true;
        history.add(run);
        turnWindows();
        if (run.settled && detailIsFull()) break;
        // What a change does is shown as soon as there is a period of it.
        if (!sent) break;
      }
      if (count % STEPS_PER_LOOK === 0 && performance.now() > until) break;
    }
    // A settled run goes on until the detail is full, so that newly watched signals are seen.
    const detail = ended || !sent ? detailColumns() : null;
    sent ||= detail !== null;
    const chunk: Chunk = {
      status: problem ? 'failed' : run.settled && detailIsFull() ? 'settled' : 'running',
      problem,
      time: run.time,
      periods: run.periods,
      history: history.take(),
      detail,
      readings: run.readings(),
      joints: run.joints(),
      effort: run.work(),
    };
    return transfer(chunk, buffersOf(chunk));
  },
};

/** What the session sees of the worker. */
export type Solver = typeof solver;

expose(solver);
