import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { indexAt, LANES, meanOver, samplesOf, thin, valueAt } from '../../../app/lanes/traces.ts';
import { EXAMPLES } from '../../../sim-core/index.ts';
import { signalsOf } from '../../../sim-core/plant/assemble.ts';

/** A time column with uneven steps, some of them very short as around a jump. */
const steps = (least: number, most: number) =>
  fc.array(fc.oneof(fc.double({ min: 1e-9, max: 1e-6, noNaN: true }), fc.constant(1e-12)), {
    minLength: least,
    maxLength: most,
    size: 'max',
  });

function timeOf(durations: readonly number[]): Float64Array {
  let now = 0.0839;
  return Float64Array.from(durations, (duration) => {
    now += duration;
    return now;
  });
}

const random = (seed: number) => {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
};

describe('thinning for the screen', () => {
  test('keeps the extremes of every stretch of time, in rising time, within the budget', () => {
    fc.assert(
      fc.property(
        steps(400, 3000),
        fc.integer({ min: 60, max: 390 }),
        fc.integer({ min: 1, max: 2 }),
        fc.integer(),
        (durations, budget, count, seed) => {
          const time = timeOf(durations);
          const next = random(seed);
          // A quiet trace with spikes one sample wide.
          const columns = Array.from({ length: count }, () =>
            Float64Array.from(time, () => (next() > 0.99 ? 1000 * (next() - 0.5) : next())),
          );
          const thinned = thin(time, columns, budget);
          expect(thinned.time.length).toBeLessThanOrEqual(budget);
          expect(thinned.time[0]).toBe(time[0]);
          expect(thinned.time.at(-1)).toBe(time.at(-1));
          expect(thinned.time.every((t, i) => i === 0 || t > thinned.time[i - 1])).toBe(true);
          const at = new Map([...time].map((t, i) => [t, i]));
          const places = [...thinned.time].map((t) => at.get(t) as number);
          expect(places.every((place) => place !== undefined)).toBe(true);
          // Two stretches next to each other always hold a kept sample at least as far out as any.
          const stretches = Math.floor(budget / (2 + 2 * count));
          const width = (time[time.length - 1] - time[0]) / stretches;
          columns.forEach((column, c) => {
            expect([...thinned.columns[c]]).toEqual(places.map((place) => column[place]));
            for (let i = 0; i < time.length; i += 1) {
              const near = places.filter(
                (place) => Math.abs(time[place] - time[i]) <= width * 1.001,
              );
              const values = near.map((place) => column[place]);
              expect(Math.max(...values)).toBeGreaterThanOrEqual(column[i]);
              expect(Math.min(...values)).toBeLessThanOrEqual(column[i]);
            }
          });
        },
      ),
      { numRuns: 20, seed: 2, endOnFailure: true },
    );
  });

  test('leaves a jump as steep as one stretch of time at the most', () => {
    // A square wave: each edge is two samples a picosecond apart.
    const time: number[] = [];
    const values: number[] = [];
    for (let edge = 0; edge < 40; edge += 1) {
      for (let i = 0; i < 200; i += 1) {
        time.push(edge * 1e-5 + (i * 1e-5) / 200 + (i === 0 ? 1e-12 : 0));
        values.push(edge % 2 === 0 ? 310 : -310);
      }
      time.push((edge + 1) * 1e-5);
      values.push(edge % 2 === 0 ? 310 : -310);
    }
    const budget = 800;
    const thinned = thin(Float64Array.from(time), [Float64Array.from(values)], budget);
    const stretch = (time[time.length - 1] - time[0]) / (budget / 4);
    let jumps = 0;
    for (let i = 1; i < thinned.time.length; i += 1) {
      if (thinned.columns[0][i] === thinned.columns[0][i - 1]) continue;
      jumps += 1;
      expect(thinned.time[i] - thinned.time[i - 1]).toBeLessThanOrEqual(stretch);
    }
    expect(jumps).toBe(39);
  });

  test('keeps every sample when there are no more than the budget', () => {
    const time = Float64Array.of(0, 1, 2, 3);
    const column = Float64Array.of(5, -5, 5, 0);
    expect(thin(time, [column], 4)).toEqual({ time, columns: [column] });
  });
});

describe('reading a trace', () => {
  test('the sample before a time is the one that a plain search finds', () => {
    fc.assert(
      fc.property(
        steps(1, 200),
        fc.double({ min: -0.1, max: 1.1, noNaN: true }),
        (durations, share) => {
          const time = timeOf(durations);
          const t = time[0] + share * (time[time.length - 1] - time[0]);
          const plain = time.findLastIndex((sample) => sample <= t);
          expect(indexAt(time, t)).toBe(Math.max(0, plain));
        },
      ),
      { seed: 3 },
    );
  });

  test('a value between two samples lies on the line between them, and at a sample is the sample', () => {
    const time = Float64Array.of(1, 2, 4);
    const values = Float64Array.of(10, 20, -20);
    expect(valueAt(time, values, 1)).toBe(10);
    expect(valueAt(time, values, 2)).toBe(20);
    expect(valueAt(time, values, 1.25)).toBeCloseTo(12.5, 12);
    expect(valueAt(time, values, 3)).toBeCloseTo(0, 12);
    expect(valueAt(time, values, 0)).toBe(10);
    expect(valueAt(time, values, 9)).toBe(-20);
  });

  test('the mean is over time, not over samples', () => {
    // A triangle of height 1 over the first tenth, then nothing: area 0.05 over a length of 1.
    expect(meanOver(Float64Array.of(0, 0.05, 0.1, 1), Float64Array.of(0, 1, 0, 0))).toBeCloseTo(
      0.05,
      12,
    );
    expect(meanOver(Float64Array.of(3), Float64Array.of(7))).toBe(7);
  });

  test('the ripple is the output without its mean', () => {
    const ripple = LANES.flatMap((lane) => lane.traces).find((trace) => trace.meanRemoved);
    const detail = {
      time: Float64Array.of(0, 1, 3),
      columns: [Float64Array.of(60_000, 60_100, 59_900)],
      names: ['output voltage'],
    };
    const samples = samplesOf(detail, ripple!, 1) as Float64Array;
    expect(meanOver(detail.time, samples)).toBeCloseTo(0, 9);
    expect(samples[1] - samples[2]).toBeCloseTo(200, 9);
  });

  test('a trace whose signal is not there yet has no samples', () => {
    const trace = LANES[2].traces[0];
    const detail = {
      time: Float64Array.of(0, 1),
      columns: [Float64Array.of(1, 2)],
      names: ['section 2 winding voltage'],
    };
    expect(samplesOf(detail, trace, 3)).toBeNull();
    expect(samplesOf(detail, trace, 2)).toEqual(Float64Array.of(1, 2));
  });
});

test('every lane shows signals that every example has, in their units', () => {
  for (const { design } of EXAMPLES) {
    const signals = new Map(signalsOf(design).map(({ name, unit }) => [name, unit]));
    for (const trace of LANES.flatMap((lane) => lane.traces)) {
      for (let section = 1; section <= design.sections.count; section += 1) {
        expect(signals.get(trace.signal(section)), trace.signal(section)).toBe(trace.unit);
      }
    }
  }
});
