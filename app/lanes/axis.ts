/** Axes that stay calm while samples stream: round limits that hold, units to match, ticks. */
import { PREFIXES } from '../../sim-core/index.ts';
import { roundStep } from '../scale.ts';

/** Leading figures of a limit: round, and close enough that a trace fills its lane. */
const ROUND = [1, 1.2, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10];

/** Room left above a peak when a limit is chosen, so that the next larger peak still fits. */
const ROOM = 1.04;

/** A limit is lowered only when the one that would do is this share of it, or less. */
const SHRINK = 0.6;

/** Peaks at or below this (SI units) are no signal: they ask for no scale of their own. */
const NOTHING = 1e-15;

/** The smallest round figure at or above `peak`, which is > 0. */
export function limitAbove(peak: number): number {
  const exponent = Math.floor(Math.log10(peak));
  const lead = peak / 10 ** exponent;
  const round = ROUND.find((figure) => figure >= lead * (1 - 1e-9)) ?? 10;
  return Number(`${round}e${exponent}`);
}

/**
 * The limit of an axis for a peak of this size, given the limit it had (0 for none). It grows as
 * soon as the peak passes it, and shrinks only when the peak has fallen well below: a peak that
 * wavers leaves the axis still. Without a signal the limit stays, or is 1.
 * @param room  a new limit is at least this many times the peak
 */
export function calmLimit(previous: number, peak: number, room = ROOM): number {
  if (!(peak > NOTHING)) return previous > 0 ? previous : 1;
  const needed = limitAbove(peak * room);
  return peak <= previous && needed > previous * SHRINK ? previous : needed;
}

/** Limits of a scale. */
export interface Limits {
  readonly low: number;
  readonly high: number;
}

/** No limits yet. */
export const NO_LIMITS: Limits = { low: 0, high: 0 };

/** Limits as far below zero as above it. */
export function evenLimits(previous: Limits, least: number, greatest: number): Limits {
  const high = calmLimit(previous.high, Math.max(-least, greatest));
  return { low: -high, high };
}

/**
 * Limits that start from zero; a side that reaches less than a fiftieth of the other shows none of
 * its own, so that a small undershoot does not lift the zero line.
 */
export function limitsFromZero(previous: Limits, least: number, greatest: number): Limits {
  const below = Math.max(0, -least);
  const above = Math.max(0, greatest);
  const high = above > 0.02 * below ? calmLimit(previous.high, above) : 0;
  const low = below > 0.02 * above ? -calmLimit(-previous.low, below) : 0;
  return high === 0 && low === 0 ? { low: 0, high: calmLimit(previous.high, 0) } : { low, high };
}

/** The prefixed unit that an axis up to `limit` is read in, and how many SI units it is. */
export function axisUnit(limit: number, unit: string): { symbol: string; size: number } {
  const wanted = 3 * Math.floor(Math.log10(limit) / 3 + 1e-9);
  const powers = [...PREFIXES.keys()];
  const power = Math.min(Math.max(wanted, Math.min(...powers)), Math.max(...powers));
  return { symbol: `${PREFIXES.get(power)}${unit}`, size: 10 ** power };
}

/** A figure of an axis, with a true minus sign. */
export function figure(value: number): string {
  return String(Number(value.toPrecision(6))).replace('-', '−');
}

/** Times from 0 to `span` at round distances, at most `most` of them after 0. */
export function timeTicks(span: number, most: number): number[] {
  if (!(span > 0)) return [0];
  const step = roundStep(span / Math.max(1, most));
  const count = Math.floor(span / step + 1e-6);
  return Array.from({ length: count + 1 }, (_, i) => i * step);
}
