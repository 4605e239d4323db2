/** What the page knows of the run: status, problems, readings. Samples never live here. */
import { create } from 'zustand';
import type { Problem, Readings, Signal } from '../../sim-core/index.ts';
import type { Effort } from './messages.ts';

/** What the run is doing, as the page says it. */
export type RunState = 'starting' | 'running' | 'held' | 'settled' | 'failed';

/** The run as the page shows it. */
export interface RunView {
  readonly state: RunState;
  /** Why the run failed or the design was refused; null while all is well. */
  readonly problem: Problem | null;
  /** Seconds since rest. */
  readonly time: number;
  /** Seconds from the last change to where it settled; null until it has. */
  readonly settledAfter: number | null;
  readonly readings: Readings | null;
  /** Mean potential to earth of the stack's joints 0 to S over the last period, volts. */
  readonly joints: readonly number[] | null;
  readonly effort: Effort | null;
  readonly signals: readonly Signal[];
  /** Section (from 1) whose winding the lanes show. */
  readonly section: number;
}

/** The run store: written by the session alone, but for `section`. */
export const useRun = create<RunView>(() => ({
  state: 'starting',
  problem: null,
  time: 0,
  settledAfter: null,
  readings: null,
  joints: null,
  effort: null,
  signals: [],
  section: 1,
}));
