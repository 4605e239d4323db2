import { describe, expect, test } from 'vitest';
import { SETTLED_DISTANCE, Settling } from '../../../sim-core/readings/settling.ts';

/** Feeds a state that decays towards 1 by `decay` per period; the distance left is `offset`·decayᵏ. */
function decaying(decay: number, offset: number, periods: number) {
  const settling = new Settling(Float64Array.of(2), Int32Array.of(0), 1);
  const seen: { estimate: number; truth: number; settled: boolean }[] = [];
  for (let k = 0; k < periods; k++) {
    const left = offset * decay ** k;
    settling.period(Float64Array.of(1 + left), Float64Array.of(1));
    if (settling.distance !== null) {
      seen.push({ estimate: settling.distance, truth: Math.abs(left), settled: settling.settled });
    }
  }
  return { settling, seen };
}

describe('the distance to the steady state', () => {
  // A geometric sequence: after a change Δ that shrinks by r, Δ·r/(1 − r) is left (any textbook).
  test.each([0.9, 0.97, 0.99, 0.997])(
    'of a mode that decays by %d a period is what is left',
    (decay) => {
      const { seen } = decaying(decay, 0.3, 400);
      expect(seen.length).toBeGreaterThan(10);
      for (const { estimate, truth } of seen) {
        // Until the changes drown in what counts as unrest; it is estimated at the end of a stride
        // and stands until the next, so it may be old, never too small.
        if (truth < 1e-4) break;
        expect(estimate).toBeGreaterThanOrEqual(0.98 * truth);
      }
    },
  );

  test.each([0.5, 0.9, 0.99, 0.999])(
    'lets no run settle that has far to go, at a decay of %d',
    (decay) => {
      const { seen } = decaying(decay, 0.3, 20 / (1 - decay) + 100);
      const first = seen.find((s) => s.settled);
      expect(first).toBeDefined();
      expect(first?.truth).toBeLessThanOrEqual(2 * SETTLED_DISTANCE);
    },
  );

  test('is without end while a state grows, and unknown at first', () => {
    const growing = new Settling(Float64Array.of(1), Int32Array.of(0), 1);
    for (let k = 0; k < 30; k++) {
      growing.period(Float64Array.of(1.1 ** k), Float64Array.of(1.1 ** k));
      if (k < 4) expect(growing.distance).toBeNull();
      expect(growing.settled).toBe(false);
    }
  });

  test('is nothing for a state that stands still', () => {
    const { seen } = decaying(0.5, 0, 100);
    expect(seen.length).toBeGreaterThan(10);
    for (const { estimate } of seen) expect(estimate).toBe(0);
    // One estimate is no estimate: an oscillation stands still at its turning points.
    expect(seen[0].settled).toBe(false);
    expect(seen.at(-1)?.settled).toBe(true);
  });

  /** Share that is left of the way when a state first counts as settled; null if it never does. */
  function leftWhenSettled(state: (period: number) => number, periods: number): number | null {
    const settling = new Settling(Float64Array.of(1), Int32Array.of(0), 1);
    for (let k = 1; k <= periods; k++) {
      settling.period(Float64Array.of(state(k)), Float64Array.of(1));
      if (settling.settled) return Math.abs(state(k) - 1);
    }
    return null;
  }

  test.each([
    [2e3, 0.1],
    [1e4, 0.03],
    [3e4, 0.003],
  ])('takes no drift over %d periods for rest', (periods, offset) => {
    const left = leftWhenSettled((k) => 1 + offset * Math.exp(-k / periods), 40 * periods);
    expect(left).not.toBeNull();
    expect(left).toBeLessThanOrEqual(SETTLED_DISTANCE);
  });

  test.each([8, 37, 100, 333])(
    'takes no turning point of an oscillation of %d periods for rest',
    (length) => {
      const swing = (k: number) =>
        0.05 * Math.exp(-k / 1000) * Math.cos((2 * Math.PI * k) / length);
      const left = leftWhenSettled((k) => 1 + swing(k), 40_000);
      expect(left).not.toBeNull();
      expect(left).toBeLessThanOrEqual(SETTLED_DISTANCE);
    },
  );

  test.each([2, 3, 4, 8])('never settles on a state that repeats every %d periods', (length) => {
    const swing = (k: number) => 0.05 * Math.cos((2 * Math.PI * k) / length);
    expect(leftWhenSettled((k) => 1 + swing(k), 10_000)).toBeNull();
  });

  test('is that of the worst kind of state, each by its own energy', () => {
    // The first kind stands; the second, of a millionth of the energy, is still on its way.
    const settling = new Settling(Float64Array.of(1, 1e-6), Int32Array.of(0, 1), 2);
    for (let k = 0; k < 60; k++) {
      settling.period(Float64Array.of(1, 1 + 0.5 * 0.98 ** k), Float64Array.of(1, 1));
    }
    expect(settling.distance ?? 0).toBeGreaterThan(0.1);
  });

  test('leaves out what belongs to no kind', () => {
    const settling = new Settling(Float64Array.of(1, 1), Int32Array.of(0, -1), 1);
    for (let k = 0; k < 60; k++) settling.period(Float64Array.of(1, k), Float64Array.of(1, k));
    expect(settling.settled).toBe(true);
  });

  test('is unknown again after a change', () => {
    const { settling } = decaying(0.5, 0.1, 60);
    expect(settling.settled).toBe(true);
    settling.reset();
    expect(settling.distance).toBeNull();
    expect(settling.settled).toBe(false);
  });
});
