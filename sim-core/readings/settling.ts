/**
 * Whether a run has settled, judged by the estimated distance to its steady state.
 *
 * The state at the start of a drive period is compared over strides of m periods. For a
 * slowest mode that decays by r over a stride, what is left after a stride that changed by Δ is
 * Δ·r/(1 − r); r is the quotient of two successive changes. Strides grow with the run, so that
 * a slow mode is not mistaken for none, and are odd, so that a state that alternates from period
 * to period is seen. The largest of the last three estimates counts, since an oscillation stands
 * still at its turning points. Each kind of state is judged in its own norm of stored energy, as
 * a share of what it reaches within a period; the worst kind counts.
 */

/** Periods of the first stride, and how many strides of one length before it doubles and one. */
const FIRST_STRIDE = 5;
const STRIDES_PER_LENGTH = 6;

/** Estimates of which the largest counts. */
const ESTIMATES = 3;

/** The estimated distance (a share) below which a run counts as settled. */
export const SETTLED_DISTANCE = 2e-4;

/** Changes below this share over a stride are taken for the steps' own unrest. */
const UNREST = 2e-5;

/**
 * Largest quotient believed of a change that small, if it does not point the way of the one
 * before: unrest has no direction, a slow drift has.
 */
const UNREST_DECAY = 0.8;
const SAME_WAY = 0.8;

/** Changes below this share over a stride are rest, whichever way they point. */
const REST = 5e-7;

/** Shorter strides than this (periods) cannot tell unrest from a slow drift beneath it. */
const UNREST_STRIDE = 20;

/** Follows a run period by period. */
export class Settling {
  /** Estimated distance to the steady state as a share, or null while it is not known. */
  distance: number | null = null;
  private readonly weight: Float64Array;
  private readonly group: Int32Array;
  private readonly groups: number;
  private readonly before: Float64Array;
  private readonly change: Float64Array;
  private readonly lastChange: Float64Array;
  private readonly norm: Float64Array;
  /** The last stride's change of each state, and its product with this one's, by kind. */
  private readonly step: Float64Array;
  private readonly along: Float64Array;
  private readonly estimates: number[] = [];
  private stride = FIRST_STRIDE;
  private periodsInStride = 0;
  private strides = 0;

  /**
   * @param weight  capacitance or inductance of each state: ½·weight·x² is its energy
   * @param group   kind of each state, 0 … groups − 1; −1 leaves a state out
   */
  constructor(weight: Float64Array, group: Int32Array, groups: number) {
    this.weight = weight;
    this.group = group;
    this.groups = groups;
    this.before = new Float64Array(weight.length);
    this.change = new Float64Array(groups);
    this.lastChange = new Float64Array(groups).fill(-1);
    this.norm = new Float64Array(groups);
    this.step = new Float64Array(weight.length);
    this.along = new Float64Array(groups);
  }

  /** Begin anew: a value was changed. */
  reset(): void {
    this.distance = null;
    this.stride = FIRST_STRIDE;
    this.periodsInStride = 0;
    this.strides = 0;
    this.lastChange.fill(-1);
    this.estimates.length = 0;
  }

  /**
   * Take in the state at the end of a period.
   * @param peak  largest magnitude of each state in the period
   */
  period(state: Float64Array, peak: Float64Array): void {
    if (this.strides === 0 && this.periodsInStride === 0) this.before.set(state);
    if (++this.periodsInStride <= this.stride) return;
    this.periodsInStride = 1;
    this.strides++;
    const { weight, group, before, change, norm, step, along } = this;
    change.fill(0);
    norm.fill(0);
    along.fill(0);
    for (let i = 0; i < state.length; i++) {
      const g = group[i];
      if (g < 0) continue;
      const moved = state[i] - before[i];
      change[g] += weight[i] * moved * moved;
      along[g] += weight[i] * moved * step[i];
      norm[g] += weight[i] * peak[i] ** 2;
      step[i] = moved;
    }
    before.set(state);
    let worst = 0;
    let known = true;
    for (let g = 0; g < this.groups; g++) {
      const share = norm[g] > 0 ? Math.sqrt(change[g] / norm[g]) : 0;
      const last = this.lastChange[g];
      this.lastChange[g] = share;
      if (last < 0) known = false;
      else {
        const drifts = along[g] > SAME_WAY * share * last * norm[g];
        const small = share < REST || (share < UNREST && !drifts);
        const unrest = small && this.stride >= UNREST_STRIDE;
        worst = Math.max(worst, left(share, last, unrest ? UNREST_DECAY : Infinity));
      }
    }
    if (known) {
      this.estimates.push(worst);
      if (this.estimates.length > ESTIMATES) this.estimates.shift();
      this.distance = Math.max(...this.estimates);
    }
    if (this.strides % STRIDES_PER_LENGTH === 0) {
      // The last estimates stand until there are new ones.
      this.stride = 2 * this.stride + 1;
      this.lastChange.fill(-1);
    }
  }

  /** Whether the distance is known and small enough. */
  get settled(): boolean {
    const { estimates, distance } = this;
    return estimates.length === ESTIMATES && distance !== null && distance < SETTLED_DISTANCE;
  }
}

/**
 * What is left to go after a stride that changed by `share` when the one before changed by `last`.
 * @param most  largest quotient that is believed
 */
function left(share: number, last: number, most: number): number {
  if (share === 0) return 0;
  const decay = Math.min(share / last, most);
  if (!(decay < 1)) return Infinity;
  // The change itself counts too: a mode that decays within a stride has left no trace of r.
  return Math.max(share * (decay / (1 - decay)), Math.min(share, last) * 0.5);
}
