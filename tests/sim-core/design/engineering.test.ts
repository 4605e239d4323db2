import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { formatQuantity } from '../../../sim-core/design/engineering.ts';
import type { Unit } from '../../../sim-core/design/field.ts';

/** Powers of the SI prefixes (SI brochure, 9th edition, table 7). */
const SI: Readonly<Record<string, number>> = {
  a: 1e-18,
  f: 1e-15,
  p: 1e-12,
  n: 1e-9,
  µ: 1e-6,
  m: 1e-3,
  '': 1,
  k: 1e3,
  M: 1e6,
  G: 1e9,
  T: 1e12,
};

describe('engineering notation', () => {
  test.each<[number, Unit, string]>([
    [22e3, 'Hz', '22 kHz'],
    [999.96, 'V', '1 kV'],
    [999.94, 'V', '999.9 V'],
    [999.96e-9, 's', '1 µs'],
    [-4.7e-6, 's', '\u22124.7 µs'],
    [1e-16, 'F', '100 aF'],
    [0, 'Hz', '0 Hz'],
    [-0, 'Hz', '0 Hz'],
    [180, '°', '180°'],
    [-90, '°', '\u221290°'],
    [0.1234567, '%', '0.1235 %'],
    [12345, '', '12350'],
    [0.001, '', '0.001'],
    [100e3, '', '100000'],
    [1e30, 'V', '1e30 V'],
    [-1e-30, 'A', '\u22121e\u221230 A'],
    [1e-9, '', '1e\u22129'],
    [Number.POSITIVE_INFINITY, 'V', '∞ V'],
    [Number.NEGATIVE_INFINITY, 'V', '\u2212∞ V'],
    [Number.NaN, 'V', 'not a number'],
  ])('writes %d in %s as %s', (value, unit, text) => {
    expect(formatQuantity(value, unit)).toBe(text);
  });

  test('agrees with the engineering notation of Intl.NumberFormat to the last digit', () => {
    const intl = new Intl.NumberFormat('en', {
      notation: 'engineering',
      maximumSignificantDigits: 4,
    });
    fc.assert(
      fc.property(
        fc.double({ min: -40, max: 33, noNaN: true }),
        fc.boolean(),
        (logarithm, negative) => {
          const value = (negative ? -1 : 1) * Math.exp(logarithm);
          const text = formatQuantity(value, 'V');
          const [, figure, prefix] = /^(.*) (.?)V$/.exec(text.replace('\u2212', '-')) ?? [];
          const [mantissa, power] = intl.format(value).split('E');
          // Ties may fall either way: a half of the last digit in exact and in decimal halves.
          const close = (a: number, b: number) => Math.abs(a - b) <= 1.01e-3 * Math.abs(b);
          expect(close(Number(figure) * SI[prefix], Number(`${mantissa}e${power}`))).toBe(true);
          // One to three figures before the point, never 0 or 1000.
          expect(Math.abs(Number(figure))).toBeGreaterThanOrEqual(1);
          expect(Math.abs(Number(figure))).toBeLessThan(1000);
        },
      ),
      { seed: 60062 },
    );
  });
});
