/** How long work takes, and the pace of the plainest loop on the same machine at the same time. */
import type { Pattern } from '../../sim-core/sparse/ldl.ts';

/** Seconds that the process computed, and seconds that passed. */
export interface Spent {
  readonly user: number;
  readonly wall: number;
}

/** Time a piece of work. */
export function spent(work: () => void): Spent {
  const wall = performance.now();
  const user = process.cpuUsage();
  work();
  return {
    user: process.cpuUsage(user).user * 1e-6,
    wall: (performance.now() - wall) * 1e-3,
  };
}

/** The middle value; the lower of two. */
export function median(values: readonly number[]): number {
  return [...values].sort((a, b) => a - b)[(values.length - 1) >> 1];
}

/** Σ f·x[row] over the entries of a factor, four sums at once: no chain of additions to wait on. */
function gather(factor: Float64Array, row: Int32Array, x: Float64Array, times: number): number {
  let sum = 0;
  const whole = row.length & ~3;
  for (let t = 0; t < times; t++) {
    let a = 0;
    let b = 0;
    let c = 0;
    let d = 0;
    for (let p = 0; p < whole; p += 4) {
      a += factor[p] * x[row[p]];
      b += factor[p + 1] * x[row[p + 1]];
      c += factor[p + 2] * x[row[p + 2]];
      d += factor[p + 3] * x[row[p + 3]];
    }
    for (let p = whole; p < row.length; p++) a += factor[p] * x[row[p]];
    sum += a + b + c + d;
  }
  return sum;
}

let kept = 0;

/**
 * User seconds of one multiply-add at the rate of a plain gather loop over typed arrays with a
 * factor's own pattern.
 * @param adds  multiply-adds to time
 */
export function paceOf(pattern: Pattern, adds: number): number {
  const factor = new Float64Array(pattern.nnz).fill(0.5);
  const x = new Float64Array(pattern.n + 1).fill(0.25);
  const times = Math.ceil(adds / pattern.nnz);
  const { user } = spent(() => {
    // Kept, so that the loop cannot be left out.
    kept += gather(factor, pattern.row, x, times);
  });
  if (!Number.isFinite(kept)) throw new Error('The loop overflowed.');
  return user / (times * pattern.nnz);
}
