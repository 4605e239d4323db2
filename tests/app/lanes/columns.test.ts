import fc from 'fast-check';
import { beforeEach, describe, expect, test } from 'vitest';
import {
  appendHistory,
  clearColumns,
  HISTORY_CAPACITY,
  MARK_CAPACITY,
  markHistory,
  readDetail,
  readHistory,
  setDetail,
  subscribe,
} from '../../../app/lanes/columns.ts';
import type { Envelope, HistoryColumns } from '../../../app/run/messages.ts';

interface Period {
  readonly duration: number;
  readonly min: number;
  readonly mean: number;
  readonly max: number;
}

/** Periods as the worker sends them, the first beginning at `start`. */
function columnsOf(periods: readonly Period[], start: number): HistoryColumns {
  let end = start;
  const time = Float64Array.from(periods, ({ duration }) => {
    end += duration;
    return end;
  });
  const envelope = (sign: number): Envelope => ({
    min: Float64Array.from(periods, ({ min, max }) => (sign > 0 ? min : -max)),
    max: Float64Array.from(periods, ({ min, max }) => (sign > 0 ? max : -min)),
    mean: Float64Array.from(periods, ({ mean }) => sign * mean),
  });
  return { time, outputVoltage: envelope(1), primaryCurrent: envelope(-1) };
}

/** A period whose figures depend on its number alone, with a rare spike. */
const numbered = (i: number, duration: number): Period => ({
  duration,
  min: i % 77_777 === 5 ? -900 - i * 1e-6 : Math.sin(i) - 2,
  mean: Math.sin(i * 0.37) * 3 + i * 1e-5,
  max: i % 99_991 === 7 ? 900 + i * 1e-6 : Math.cos(i) + 2,
});

/** Mean over the whole history, each entry weighted by its duration. */
function meanOfAll(time: Float64Array, mean: Float64Array): number {
  let area = 0;
  for (let i = 0; i < time.length; i += 1) area += mean[i] * (time[i] - (i > 0 ? time[i - 1] : 0));
  return area / time[time.length - 1];
}

const rises = (time: Float64Array) => time.every((t, i) => i === 0 || t > time[i - 1]);

beforeEach(clearColumns);

describe('the history', () => {
  test('keeps a million periods from rest to now in a bounded number of even entries', () => {
    const duration = 45e-6;
    const total = 1_000_000;
    const chunk = 500;
    let end = 0;
    let area = 0;
    let least = Infinity;
    let greatest = -Infinity;
    for (let first = 0; first < total; first += chunk) {
      const periods = Array.from({ length: chunk }, (_, i) => numbered(first + i, duration));
      const columns = columnsOf(periods, end);
      end = columns.time[chunk - 1];
      for (const { mean, min, max } of periods) {
        area += mean * duration;
        least = Math.min(least, min);
        greatest = Math.max(greatest, max);
      }
      appendHistory(columns);
      if (first % 50_000 === 0) {
        expect(readHistory().time.length).toBeLessThanOrEqual(HISTORY_CAPACITY);
      }
    }
    const { time, outputVoltage, primaryCurrent } = readHistory();
    expect(time.length).toBeLessThanOrEqual(HISTORY_CAPACITY);
    expect(time.length).toBeGreaterThanOrEqual(HISTORY_CAPACITY / 2 - 1);
    expect(time[time.length - 1]).toBe(end);
    expect(rises(time)).toBe(true);
    expect(Math.min(...outputVoltage.min)).toBe(least);
    expect(Math.max(...outputVoltage.max)).toBe(greatest);
    expect(Math.max(...primaryCurrent.max)).toBe(-least);
    expect(Math.abs(meanOfAll(time, outputVoltage.mean) / (area / end) - 1)).toBeLessThan(1e-9);
    // No stretch since rest is told more coarsely than another: the eye needs the start as well.
    const longest = time.reduce((most, t, i) => Math.max(most, t - (i > 0 ? time[i - 1] : 0)), 0);
    expect(longest).toBeLessThanOrEqual((4 * end) / HISTORY_CAPACITY);
  });

  test('merges into the extremes and the mean over time of what it merges', () => {
    const period = fc.record({
      duration: fc.double({ min: 1e-6, max: 1, noNaN: true }),
      mean: fc.double({ min: -1e5, max: 1e5, noNaN: true }),
      below: fc.double({ min: 0, max: 1e4, noNaN: true }),
      above: fc.double({ min: 0, max: 1e4, noNaN: true }),
    });
    const entries = fc.array(period, { minLength: 9_000, maxLength: 9_200, size: 'max' });
    fc.assert(
      fc.property(entries, fc.integer({ min: 1, max: 3000 }), (raw, chunk) => {
        clearColumns();
        const periods = raw.map(({ duration, mean, below, above }) => ({
          duration,
          mean,
          min: mean - below,
          max: mean + above,
        }));
        let end = 0;
        for (let i = 0; i < periods.length; i += chunk) {
          const columns = columnsOf(periods.slice(i, i + chunk), end);
          end = columns.time[columns.time.length - 1];
          appendHistory(columns);
        }
        const { time, outputVoltage } = readHistory();
        expect(rises(time)).toBe(true);
        // Every entry against the periods that end within it, worked out afresh.
        let next = 0;
        let clock = 0;
        for (let i = 0; i < time.length; i += 1) {
          let min = Infinity;
          let max = -Infinity;
          let area = 0;
          const begin = clock;
          while (next < periods.length && clock + periods[next].duration <= time[i]) {
            const { duration, mean } = periods[next];
            min = Math.min(min, periods[next].min);
            max = Math.max(max, periods[next].max);
            area += mean * duration;
            clock += duration;
            next += 1;
          }
          expect(outputVoltage.min[i]).toBe(min);
          expect(outputVoltage.max[i]).toBe(max);
          expect(Math.abs(outputVoltage.mean[i] - area / (clock - begin))).toBeLessThan(1e-4);
        }
        expect(next).toBe(periods.length);
      }),
      { numRuns: 5, seed: 1, endOnFailure: true },
    );
  });

  test('leaves out an entry that does not end after the last one', () => {
    appendHistory(columnsOf([numbered(1, 1e-3), numbered(2, 1e-3)], 0));
    appendHistory(columnsOf([numbered(3, 1e-3), numbered(4, 1e-3)], 0));
    expect([...readHistory().time]).toEqual([1e-3, 2e-3]);
  });

  test('marks a change where the history ends, and a turned value once', () => {
    markHistory('Load open → resistor');
    appendHistory(columnsOf([numbered(1, 1)], 0));
    markHistory('Bus voltage 310 V → 311 V');
    appendHistory(columnsOf([numbered(2, 0.01)], 1));
    markHistory('Bus voltage 311 V → 320 V');
    appendHistory(columnsOf([numbered(3, 0.01)], 1.01));
    markHistory('Drive frequency 22 kHz → 24 kHz');
    expect(readHistory().marks).toEqual([
      { time: 0, label: 'Load open → resistor' },
      { time: 1.01, label: 'Bus voltage 310 V → 320 V' },
      { time: 1.02, label: 'Drive frequency 22 kHz → 24 kHz' },
    ]);
  });

  test('keeps apart changes of one value that lie far apart', () => {
    appendHistory(columnsOf([numbered(1, 1)], 0));
    markHistory('Bus voltage 310 V → 311 V');
    appendHistory(columnsOf([numbered(2, 1)], 1));
    markHistory('Bus voltage 311 V → 320 V');
    expect(readHistory().marks.map(({ time }) => time)).toEqual([1, 2]);
  });

  test('holds a bounded number of marks, the latest', () => {
    for (let i = 1; i <= 3 * MARK_CAPACITY; i += 1) {
      appendHistory(columnsOf([numbered(i, 1)], i - 1));
      markHistory(`change ${i}`);
    }
    const { marks } = readHistory();
    expect(marks).toHaveLength(MARK_CAPACITY);
    expect(marks.at(-1)).toEqual({ time: 3 * MARK_CAPACITY, label: `change ${3 * MARK_CAPACITY}` });
  });
});

test('clearing forgets the history, its coarseness, the marks and the detail', () => {
  const many = Array.from({ length: HISTORY_CAPACITY + 1 }, (_, i) => numbered(i, 1));
  appendHistory(columnsOf(many, 0));
  markHistory('a change');
  setDetail({ time: new Float64Array(2), columns: [], names: [] });
  clearColumns();
  expect(readHistory().time).toHaveLength(0);
  expect(readHistory().marks).toEqual([]);
  expect(readDetail()).toBeNull();
  appendHistory(columnsOf([numbered(1, 1e-6), numbered(2, 1e-6)], 0));
  expect(readHistory().time).toHaveLength(2);
});

test('a listener hears of every change until it leaves', () => {
  let heard = 0;
  const leave = subscribe(() => {
    heard += 1;
  });
  appendHistory(columnsOf([numbered(1, 1)], 0));
  markHistory('a change');
  setDetail({ time: new Float64Array(0), columns: [], names: [] });
  clearColumns();
  expect(heard).toBe(4);
  leave();
  clearColumns();
  expect(heard).toBe(4);
});

test('a value that goes on being turned keeps one mark, however far the run came in between', () => {
  clearColumns();
  appendHistory(columnsOf([numbered(1, 1)], 0));
  markHistory('Bus voltage 310 V → 320 V');
  appendHistory(columnsOf([numbered(2, 1), numbered(3, 1)], 1));
  markHistory('Bus voltage 320 V → 330 V', true);
  expect(readHistory().marks.map((mark) => mark.label)).toEqual(['Bus voltage 310 V → 330 V']);
  appendHistory(columnsOf([numbered(4, 1), numbered(5, 1)], 3));
  markHistory('Bus voltage 330 V → 340 V');
  expect(readHistory().marks).toHaveLength(2);
  clearColumns();
});
