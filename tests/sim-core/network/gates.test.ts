import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type GatePattern, gatePattern, type OnTime } from '../../../sim-core/network/gates.ts';

const bitsAt = (pattern: GatePattern, phase: number): number => {
  let k = pattern.start.length - 1;
  while (pattern.start[k] > phase) k--;
  return pattern.on[k];
};

const spans = (pattern: GatePattern): number[] =>
  pattern.start.map((from, k) => (pattern.start[k + 1] ?? pattern.period) - from);

/** How long a gate is on in one period. */
const timeOn = (pattern: GatePattern, gate: number): number =>
  spans(pattern).reduce((sum, span, k) => sum + ((pattern.on[k] >> gate) & 1) * span, 0);

const share = fc.double({ min: 0, max: 1, noNaN: true });
const anyOnTimes = fc
  .array(fc.tuple(fc.double({ min: -3, max: 3, noNaN: true }), share), {
    minLength: 1,
    maxLength: 8,
  })
  .map((list) => list.map(([from, length], gate): OnTime => ({ gate, from, length })));

describe('a gate pattern', () => {
  test('keeps each gate on for exactly its length, wherever it starts', () => {
    fc.assert(
      fc.property(anyOnTimes, (onTimes) => {
        const pattern = gatePattern(1, onTimes);
        for (const { gate, length } of onTimes) {
          // Edges closer than 1e-12 of the period are one edge, at both ends.
          expect(Math.abs(timeOn(pattern, gate) - length)).toBeLessThanOrEqual(1e-11);
        }
      }),
      { seed: 5, numRuns: 500 },
    );
  });

  test('is on where the definition of an on-time says so', () => {
    fc.assert(
      fc.property(anyOnTimes, fc.array(share, { maxLength: 20 }), (onTimes, phases) => {
        const pattern = gatePattern(1, onTimes);
        for (const phase of phases) {
          for (const { gate, from, length } of onTimes) {
            const since = (((phase - from) % 1) + 1) % 1;
            // On an edge itself either side is right.
            if ([0, length, 1].some((edge) => Math.abs(since - edge) < 1e-9)) continue;
            if (phase > 1 - 1e-9) continue;
            expect((bitsAt(pattern, phase) >> gate) & 1).toBe(since < length ? 1 : 0);
          }
        }
      }),
      { seed: 6, numRuns: 500 },
    );
  });

  test('has rising starts from 0 on, all within the period', () => {
    fc.assert(
      fc.property(anyOnTimes, (onTimes) => {
        const { start, on, period } = gatePattern(1, onTimes);
        expect(start[0]).toBe(0);
        expect(on).toHaveLength(start.length);
        for (const [k, from] of start.entries()) {
          expect(from).toBeGreaterThan(k === 0 ? -1 : start[k - 1]);
          expect(from).toBeLessThan(period);
        }
      }),
      { seed: 7, numRuns: 300 },
    );
  });

  test('makes one edge of two that differ by rounding', () => {
    const third = 1 / 3;
    const pattern = gatePattern(1, [
      { gate: 0, from: 0, length: third },
      { gate: 1, from: third + 1e-14, length: 1 - third },
    ]);
    expect(pattern.start).toHaveLength(2);
    expect(pattern.on).toEqual([1, 2]);
  });

  test('leaves out what is never on, and keeps on what is always on', () => {
    const pattern = gatePattern(2, [
      { gate: 0, from: 0.3, length: 0 },
      { gate: 1, from: 0.7, length: -1 },
      { gate: 2, from: 0.5, length: 2 },
    ]);
    for (const bits of pattern.on) expect(bits).toBe(4);
  });
});
