/** What each lane shows of the detail, and how its samples are thinned to what a screen can show. */
import type { DetailColumns } from '../run/messages.ts';
import type { Colour } from './paint.ts';

/** One line in a lane. */
export interface Trace {
  readonly label: string;
  readonly unit: 'V' | 'A' | 'Wb';
  /** Name of its signal; the section counts from 1. */
  readonly signal: (section: number) => string;
  /** The trace shows the departure from its mean over the window. */
  readonly meanRemoved?: true;
  readonly side: 'left' | 'right';
  readonly colour: Colour;
  readonly width: number;
  readonly dash?: readonly number[];
}

/** One plot of the stack. */
export interface LaneWords {
  readonly name: string;
  /** CSS pixels of the plotting area. */
  readonly height: number;
  readonly traces: readonly Trace[];
  /** A second line under the names. */
  readonly note?: string;
  /** The lane shows one section and offers the choice of it. */
  readonly ofSection?: true;
  /** The lane shows where the core saturates. */
  readonly knee?: true;
  /** The scale runs from zero; else it is as far below zero as above. */
  readonly fromZero?: true;
}

/** The lanes, from the bridge to the output. */
export const LANES: readonly LaneWords[] = [
  {
    name: 'bridge',
    height: 60,
    traces: [
      {
        label: 'Primary current',
        unit: 'A',
        signal: () => 'primary current',
        side: 'left',
        colour: 'primary',
        width: 1.5,
      },
      {
        label: 'Bridge voltage',
        unit: 'V',
        signal: () => 'bridge voltage',
        side: 'right',
        colour: 'bridge',
        width: 1.25,
      },
    ],
  },
  {
    name: 'flux',
    height: 42,
    knee: true,
    traces: [
      {
        label: 'Flux linkage',
        unit: 'Wb',
        signal: () => 'flux linkage',
        side: 'left',
        colour: 'flux',
        width: 2,
        dash: [7, 3],
      },
    ],
  },
  {
    name: 'winding',
    height: 60,
    ofSection: true,
    traces: [
      {
        label: 'voltage',
        unit: 'V',
        signal: (section) => `section ${section} winding voltage`,
        side: 'left',
        colour: 'winding',
        width: 1.5,
      },
      {
        label: 'current',
        unit: 'A',
        signal: (section) => `section ${section} winding current`,
        side: 'right',
        colour: 'winding',
        width: 1.25,
        dash: [3, 2],
      },
    ],
  },
  {
    name: 'output',
    height: 42,
    fromZero: true,
    traces: [
      {
        label: 'Output voltage',
        unit: 'V',
        signal: () => 'output voltage',
        side: 'left',
        colour: 'output',
        width: 1.5,
      },
    ],
  },
  {
    name: 'ripple',
    height: 48,
    note: 'mean removed',
    traces: [
      {
        label: 'Output ripple',
        unit: 'V',
        signal: () => 'output voltage',
        meanRemoved: true,
        side: 'left',
        colour: 'ripple',
        width: 1.5,
      },
    ],
  },
];

/** What a trace is called away from its lane. */
export const nameOf = (trace: Trace, section: number): string =>
  trace.meanRemoved ? trace.label.toLowerCase() : trace.signal(section);

/** Mean over time of the straight lines between samples; a single sample is its own mean. */
export function meanOver(time: Float64Array, values: Float64Array): number {
  const last = time.length - 1;
  let area = 0;
  for (let i = 1; i <= last; i += 1) {
    area += (time[i] - time[i - 1]) * (values[i] + values[i - 1]) * 0.5;
  }
  return last < 1 ? values[0] : area / (time[last] - time[0]);
}

/** The samples of a trace, or null when the detail does not hold its signal (yet). */
export function samplesOf(
  detail: DetailColumns,
  trace: Trace,
  section: number,
): Float64Array | null {
  const at = detail.names.indexOf(trace.signal(section));
  if (at < 0 || detail.time.length === 0) return null;
  const values = detail.columns[at];
  if (!trace.meanRemoved) return values;
  const mean = meanOver(detail.time, values);
  return values.map((value) => value - mean);
}

/** Index of the last sample at or before `t`; 0 when there is none. Time rises strictly. */
export function indexAt(time: Float64Array, t: number): number {
  let low = 0;
  let high = time.length;
  while (low + 1 < high) {
    const middle = (low + high) >> 1;
    if (time[middle] <= t) low = middle;
    else high = middle;
  }
  return low;
}

/** Value at time `t` on the straight line between the samples around it. */
export function valueAt(time: Float64Array, values: Float64Array, t: number): number {
  const i = indexAt(time, t);
  if (i + 1 >= time.length || t <= time[i]) return values[i];
  const share = (t - time[i]) / (time[i + 1] - time[i]);
  return values[i] + share * (values[i + 1] - values[i]);
}

/**
 * Thin columns that share one time to at most `budget` samples, for drawing only. Each of the
 * equal stretches of time keeps its first and last sample and, of every column, its smallest and
 * its largest: no spike is hidden, and a jump between stretches stays as steep as it was. With
 * `budget` samples or fewer, all are kept.
 * @returns the time that is left, strictly rising, and each column at those times
 */
export function thin(
  time: Float64Array,
  columns: readonly Float64Array[],
  budget: number,
): { time: Float64Array; columns: Float64Array[] } {
  const n = time.length;
  if (n <= budget) return { time, columns: [...columns] };
  const perStretch = 2 + 2 * columns.length;
  const stretches = Math.max(1, Math.floor(budget / perStretch));
  const start = time[0];
  const span = time[n - 1] - start;
  const kept: number[] = [];
  const picked: number[] = [];
  let first = 0;
  for (let stretch = 0; stretch < stretches && first < n; stretch += 1) {
    const end = stretch + 1 === stretches ? Infinity : start + (span * (stretch + 1)) / stretches;
    let last = first;
    while (last < n && time[last] < end) last += 1;
    if (last === first) continue;
    picked.length = 0;
    picked.push(first, last - 1);
    for (const column of columns) {
      let low = first;
      let high = first;
      for (let i = first + 1; i < last; i += 1) {
        if (column[i] < column[low]) low = i;
        if (column[i] > column[high]) high = i;
      }
      picked.push(low, high);
    }
    picked.sort((a, b) => a - b);
    for (const i of picked) if (i !== kept[kept.length - 1]) kept.push(i);
    first = last;
  }
  const at = (from: Float64Array) => {
    const left = new Float64Array(kept.length);
    for (let i = 0; i < left.length; i += 1) left[i] = from[kept[i]];
    return left;
  };
  return { time: at(time), columns: columns.map(at) };
}
