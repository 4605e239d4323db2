/** What the worker sends to the page: plain data and transferable columns. */
import type { Problem, Readings, Signal } from '../../sim-core/index.ts';

/** The per-period envelope of one signal: one entry per completed drive period. */
export interface Envelope {
  readonly min: Float64Array;
  readonly max: Float64Array;
  readonly mean: Float64Array;
}

/** Drive periods completed since the last chunk (several merged into one entry when they come fast). */
export interface HistoryColumns {
  /** End of each period, seconds since rest, strictly rising. */
  readonly time: Float64Array;
  readonly outputVoltage: Envelope;
  readonly primaryCurrent: Envelope;
}

/** The last whole drive periods, every computed step. */
export interface DetailColumns {
  /** Seconds since rest, strictly rising. */
  readonly time: Float64Array;
  /** One column per watched signal, in the order they were asked for; same length as time. */
  readonly columns: readonly Float64Array[];
  /** Names of those signals. */
  readonly names: readonly string[];
}

/** How far a run has come. */
export type RunStatus = 'running' | 'settled' | 'failed';

/** Counts of the engine's work since the start of the run. */
export interface Effort {
  readonly steps: number;
  readonly rejected: number;
  readonly commutations: number;
  readonly factorisations: number;
  readonly solves: number;
}

/** What one pull brings. */
export interface Chunk {
  readonly status: RunStatus;
  readonly problem: Problem | null;
  /** Seconds since rest, and whole drive periods done. */
  readonly time: number;
  readonly periods: number;
  readonly history: HistoryColumns;
  readonly detail: DetailColumns | null;
  readonly readings: Readings;
  /** Mean potential of joints 0 … S over the last period, volts. */
  readonly joints: readonly number[] | null;
  readonly effort: Effort;
}

/** What opening or changing a design brings. */
export type Opened =
  | { readonly ok: true; readonly signals: readonly Signal[] }
  | { readonly ok: false; readonly problem: Problem };
