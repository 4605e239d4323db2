import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  axisUnit,
  calmLimit,
  evenLimits,
  figure,
  limitAbove,
  limitsFromZero,
  NO_LIMITS,
  timeTicks,
} from '../../../app/lanes/axis.ts';

const magnitude = fc.double({ min: -12, max: 7, noNaN: true }).map((power) => 10 ** power);

describe('a calm limit', () => {
  test('is never below the peak, and never more than twice as far out for a first peak', () => {
    fc.assert(
      fc.property(magnitude, magnitude, (previous, peak) => {
        expect(calmLimit(limitAbove(previous), peak)).toBeGreaterThanOrEqual(peak);
        expect(calmLimit(0, peak)).toBeLessThanOrEqual(2 * peak);
      }),
    );
  });

  test('stays still once it has held the largest of peaks that waver by a third', () => {
    fc.assert(
      fc.property(
        magnitude,
        fc.array(fc.double({ min: 0.75, max: 1, noNaN: true }), { minLength: 5, maxLength: 60 }),
        (size, wavering) => {
          let limit = calmLimit(0, size);
          const first = limit;
          for (const share of wavering) limit = calmLimit(limit, size * share);
          expect(limit).toBe(first);
        },
      ),
    );
  });

  test('comes down when the peak has fallen to half, and not by a little less of it', () => {
    expect(calmLimit(20, 19.9)).toBe(20);
    expect(calmLimit(20, 13)).toBe(20);
    expect(calmLimit(20, 9.5)).toBe(10);
  });

  test('stays where it was without a signal', () => {
    expect(calmLimit(20, 0)).toBe(20);
    expect(calmLimit(0, 0)).toBe(1);
    expect(calmLimit(0, Number.NaN)).toBe(1);
  });

  test('is a round figure, and a round figure is its own', () => {
    for (const round of [1, 1.2, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10, 60e3, 1.5e-9, 100, 1000]) {
      expect(limitAbove(round)).toBe(round);
    }
    expect(limitAbove(18.4)).toBe(20);
    expect(limitAbove(6.46e-3)).toBe(8e-3);
  });
});

describe('limits of a scale', () => {
  test('reach as far below zero as above it', () => {
    expect(evenLimits(NO_LIMITS, -18.4, 3)).toEqual({ low: -20, high: 20 });
  });

  test('start from zero, whichever way the signal points', () => {
    expect(limitsFromZero(NO_LIMITS, 0, 57e3)).toEqual({ low: 0, high: 60e3 });
    expect(limitsFromZero(NO_LIMITS, -57e3, 0)).toEqual({ low: -60e3, high: 0 });
    expect(limitsFromZero(NO_LIMITS, -57e3, 28e3)).toEqual({ low: -60e3, high: 30e3 });
    expect(limitsFromZero(NO_LIMITS, 0, 0)).toEqual({ low: 0, high: 1 });
  });

  test('do not move the zero line for an undershoot of a hundredth', () => {
    expect(limitsFromZero(NO_LIMITS, -500, 57e3).low).toBe(0);
  });
});

test('an axis is read in the prefix that leaves one to three figures (ISO 80000-1)', () => {
  expect(axisUnit(60e3, 'V')).toEqual({ symbol: 'kV', size: 1e3 });
  expect(axisUnit(1000, 'V').symbol).toBe('kV');
  expect(axisUnit(800, 'V').symbol).toBe('V');
  expect(axisUnit(1e-4, 's')).toEqual({ symbol: 'µs', size: 1e-6 });
  expect(axisUnit(8e-3, 'Wb').symbol).toBe('mWb');
  // A window of 1 ms that is short by a rounding error is still read in milliseconds.
  expect(axisUnit(1e-3 * (1 - 1e-15), 's').symbol).toBe('ms');
});

test('figures have a true minus sign and no rounding errors', () => {
  expect(figure(-20)).toBe('−20');
  expect(figure(0.1 * 3)).toBe('0.3');
});

test('time ticks are round, start at 0, stay within the window and are no more than fit', () => {
  fc.assert(
    fc.property(
      fc.double({ min: 1e-7, max: 100, noNaN: true }),
      fc.integer({ min: 1, max: 20 }),
      (span, most) => {
        const ticks = timeTicks(span, most);
        expect(ticks[0]).toBe(0);
        expect(ticks.length).toBeLessThanOrEqual(most + 1);
        expect(ticks[ticks.length - 1]).toBeLessThanOrEqual(span * (1 + 1e-6));
      },
    ),
  );
  expect(timeTicks(100e-6, 10).map((t) => figure(t * 1e6))).toEqual([
    '0',
    '10',
    '20',
    '30',
    '40',
    '50',
    '60',
    '70',
    '80',
    '90',
    '100',
  ]);
});
