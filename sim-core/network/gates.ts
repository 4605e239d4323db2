/** A periodic pattern of gate signals, as the transient follows it. */

/** One drive period: between start[k] and start[k+1] (or the period's end) the gates stand still. */
export interface GatePattern {
  /** Length of the drive period, seconds. */
  readonly period: number;
  /** Starts of the intervals, seconds from the start of the period, rising, the first one 0. */
  readonly start: readonly number[];
  /** Gate signals during each interval: bit g is gate g. */
  readonly on: readonly number[];
  /** At the very start of a run all gates are off for this long, seconds. */
  readonly quiet: number;
}

/** One gate's on-times within the period: from `from` for `length` seconds, wrapping around. */
export interface OnTime {
  readonly gate: number;
  readonly from: number;
  readonly length: number;
}

/**
 * Merge the on-times of several gates into a pattern. Edges closer together than a millionth
 * of a millionth of the period are one edge.
 * @param period   seconds, > 0
 * @param onTimes  any number per gate; lengths ≤ 0 are never on
 * @param quiet    see GatePattern
 */
export function gatePattern(period: number, onTimes: readonly OnTime[], quiet = 0): GatePattern {
  const least = 1e-12 * period;
  const wrap = (t: number): number => {
    const inside = t - period * Math.floor(t / period);
    return period - inside < least ? 0 : inside;
  };
  const edges = [0];
  for (const { from, length } of onTimes) {
    if (length > least) edges.push(wrap(from), wrap(from + length));
  }
  edges.sort((a, b) => a - b);
  const start = edges.filter((t, k) => k === 0 || t - edges[k - 1] > least);
  const on = start.map((t, k) => {
    const middle = 0.5 * (t + (start[k + 1] ?? period));
    let bits = 0;
    for (const { gate, from, length } of onTimes) {
      if (length > least && (length >= period || wrap(middle - from) < length)) bits |= 1 << gate;
    }
    return bits;
  });
  return { period, start, on, quiet };
}
