/** Carries a run on until a wish is met. */
import type { Run, RunState } from '../../sim-core/solve.ts';
import { GIVEN_UP_AFTER } from './request.ts';

/** Times closer than this share of a drive period are one time. */
const ONE_TIME = 1e-6;

/**
 * Advance `run`: with a duration (s), to the first step that reaches it; without, until the run
 * has settled or is given up. Afterwards the readings are those of the last whole period up to
 * there. The run may have failed: ask it.
 * @param onStep  called after every accepted step up to the end
 * @returns       the state reached
 */
export function carryOut(run: Run, duration: number | null, onStep: () => void): RunState {
  const slack = ONE_TIME / run.design.bridge.frequency;
  const end = run.time + (duration ?? GIVEN_UP_AFTER.seconds) - slack;
  const steps = run.advance();
  let periods = 0;
  for (;;) {
    const turn = steps.next();
    if (turn.done) break;
    onStep();
    if (turn.value) periods++;
    if (run.time >= end) break;
    if (duration === null && turn.value) {
      if (run.settled || periods >= GIVEN_UP_AFTER.periods) break;
    }
  }
  return run.state();
}
