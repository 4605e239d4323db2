/**
 * The samples on the page: a history since rest and the latest detail. They live here, outside
 * React and the stores, because they change many times a second; what draws them subscribes.
 * Bounded however long a run goes on.
 */
import type { DetailColumns, Envelope, HistoryColumns } from '../run/messages.ts';

/** Most entries the history holds; when it is full, neighbours merge and the whole span stays. */
export const HISTORY_CAPACITY = 4096;

/** Most changes marked in the history; beyond it the oldest mark goes. */
export const MARK_CAPACITY = 64;

/** A change made while running. */
export interface Mark {
  /** Seconds since rest. */
  readonly time: number;
  readonly label: string;
}

/** The history as it stands. The columns are views: valid until the next append. */
export interface History extends HistoryColumns {
  /** Changes, in rising order of time. */
  readonly marks: readonly Mark[];
}

const newEnvelope = () => ({
  min: new Float64Array(HISTORY_CAPACITY),
  max: new Float64Array(HISTORY_CAPACITY),
  mean: new Float64Array(HISTORY_CAPACITY),
});

const time = new Float64Array(HISTORY_CAPACITY);
const outputVoltage = newEnvelope();
const primaryCurrent = newEnvelope();
/** Entries in use. */
let length = 0;
/** Seconds below which the last entry still takes in what follows; 0 until the first merge. */
let resolution = 0;
let marks: Mark[] = [];
let detail: DetailColumns | null = null;

const listeners = new Set<() => void>();

function notify() {
  for (const listener of listeners) listener();
}

/** Start of entry i, seconds since rest: each entry begins where the one before it ended. */
const startOf = (i: number) => (i === 0 ? 0 : time[i - 1]);

/** An entry that is still short of the resolution takes in the next one. */
const isOpen = (i: number) => time[i] - startOf(i) < resolution * (1 - 1e-9);

/** Take entry j of `from`, which lasts `added` seconds, into entry i, which lasts `had`. */
function mergeInto(to: Envelope, i: number, had: number, from: Envelope, j: number, added: number) {
  to.min[i] = Math.min(to.min[i], from.min[j]);
  to.max[i] = Math.max(to.max[i], from.max[j]);
  to.mean[i] = (to.mean[i] * had + from.mean[j] * added) / (had + added);
}

function copyInto(to: Envelope, i: number, from: Envelope, j: number) {
  to.min[i] = from.min[j];
  to.max[i] = from.max[j];
  to.mean[i] = from.mean[j];
}

/**
 * Add entry j, which ends at `end`, to the entries in use. It may be one of the buffer's own that
 * is being moved down: entries are only ever written at or below the place they are read from.
 */
function push(end: number, voltage: Envelope, current: Envelope, j: number) {
  const last = length - 1;
  if (length > 0 && isOpen(last)) {
    const had = time[last] - startOf(last);
    const added = end - time[last];
    mergeInto(outputVoltage, last, had, voltage, j, added);
    mergeInto(primaryCurrent, last, had, current, j, added);
    time[last] = end;
    return;
  }
  copyInto(outputVoltage, length, voltage, j);
  copyInto(primaryCurrent, length, current, j);
  time[length] = end;
  length += 1;
}

/** Merge neighbours until about half the entries are left, each at least `resolution` long. */
function coarsen() {
  const count = length;
  resolution = (2 * time[count - 1]) / HISTORY_CAPACITY;
  length = 0;
  for (let j = 0; j < count; j += 1) push(time[j], outputVoltage, primaryCurrent, j);
}

/**
 * Add completed drive periods to the history. Means are weighted by duration, so that a merged
 * entry holds the true mean over its time. An entry that does not end after the last one is left
 * out: the history's time rises strictly.
 */
export function appendHistory(columns: HistoryColumns): void {
  for (let j = 0; j < columns.time.length; j += 1) {
    const end = columns.time[j];
    if (!(end > startOf(length))) continue;
    if (length === HISTORY_CAPACITY && !isOpen(length - 1)) coarsen();
    push(end, columns.outputVoltage, columns.primaryCurrent, j);
  }
  notify();
}

/** Replace the detail: the last whole drive periods of the watched signals. */
export function setDetail(columns: DetailColumns): void {
  detail = columns;
  notify();
}

/** Changes of one value closer than this share of the time since rest are one mark. */
const SOON = 0.05;

/**
 * One label for two changes in a row, if the second goes on where the first ended: "bus 310 V →
 * 311 V", then "bus 311 V → 320 V", is "bus 310 V → 320 V". Null for changes of different values.
 */
function joined(first: string, second: string): string | null {
  const [from, middle] = first.split(' → ');
  const [again, to] = second.split(' → ');
  if (middle === undefined || to === undefined || !again.endsWith(middle)) return null;
  const subject = again.slice(0, again.length - middle.length);
  return from.startsWith(subject) ? `${from} → ${to}` : null;
}

/**
 * Mark a change made at the present end of the history ("bus 310 V → 320 V"). A value that is
 * turned gives one mark, from where it was to where it is left. Changes made before another period
 * is done share one mark, which keeps the latest label.
 * @param goesOn  the change goes on with the one before, as one turn of one value
 */
export function markHistory(label: string, goesOn = false): void {
  const now = startOf(length);
  const last = marks.at(-1);
  const turned =
    last && (goesOn || now - last.time <= SOON * now) ? joined(last.label, label) : null;
  const kept = last && (turned !== null || last.time === now) ? marks.slice(0, -1) : marks;
  marks = [...kept, { time: now, label: turned ?? label }].slice(-MARK_CAPACITY);
  notify();
}

/** Forget everything: a new run starts from rest. */
export function clearColumns(): void {
  length = 0;
  resolution = 0;
  marks = [];
  detail = null;
  notify();
}

const view = (envelope: Envelope): Envelope => ({
  min: envelope.min.subarray(0, length),
  max: envelope.max.subarray(0, length),
  mean: envelope.mean.subarray(0, length),
});

/** The history since rest. */
export function readHistory(): History {
  return {
    time: time.subarray(0, length),
    outputVoltage: view(outputVoltage),
    primaryCurrent: view(primaryCurrent),
    marks,
  };
}

/** The latest detail, or null before the first one of a run. */
export function readDetail(): DetailColumns | null {
  return detail;
}

/** Be told whenever the columns change; returns the call that ends it. */
export function subscribe(listener: () => void): () => void {
  listeners.add(listener);
  return () => {
    listeners.delete(listener);
  };
}
