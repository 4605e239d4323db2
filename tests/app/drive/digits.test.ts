import fc from 'fast-check';
import { expect, test } from 'vitest';
import { digitsOf, stepDigit } from '../../../app/drive/digits.ts';

const text = (value: number, least: number, chosen: number) => {
  const { digits, prefix } = digitsOf(value, least, chosen);
  return `${digits.map(({ char }) => char).join('')} ${prefix}`.trim();
};

test('a number is shown in engineering notation with its chosen digit among the digits', () => {
  expect(text(310, 3, 1)).toBe('310');
  expect(text(22e3, 4, 2)).toBe('22.00 k');
  expect(text(22e3, 4, 0)).toBe('22.000 k');
  expect(text(950, 4, 3)).toBe('0.950 k');
  expect(text(5, 3, 2)).toBe('005');
  expect(text(0, 3, 1)).toBe('00.0');
  expect(text(1e6, 4, 5)).toBe('1.000 M');
  expect(text(0.25, 3, -2)).toBe('250 m');
  expect(text(123.456, 3, 1)).toBe('123.456');
});

test('every digit names its own power of ten: the digits add up to the value', () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 0, max: 9_999_999 }),
      fc.integer({ min: -3, max: 0 }),
      fc.integer({ min: -2, max: 6 }),
      (whole, scale, chosen) => {
        const value = Number(`${whole}e${scale}`);
        const { digits, top, bottom } = digitsOf(value, 3, chosen);
        const powers = digits.flatMap(({ power }) => (power === null ? [] : [power]));
        expect(powers).toContain(chosen);
        expect(powers[0]).toBe(top);
        expect(powers.at(-1)).toBe(bottom);
        powers.forEach((power, i) => {
          expect(power).toBe(top - i);
        });
        const sum = digits.reduce(
          (total, { char, power }) => (power === null ? total : total + Number(char) * 10 ** power),
          0,
        );
        expect(Math.abs(sum - value)).toBeLessThanOrEqual(0.5000001 * 10 ** bottom);
      },
    ),
  );
});

test('a digit turned up and down again gives back the same number, bit for bit', () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 1000, max: 999_999 }),
      fc.integer({ min: -2, max: 2 }),
      fc.integer({ min: 1, max: 9 }),
      (whole, power, steps) => {
        const value = whole / 100;
        const there = stepDigit(value, power, steps, 0, 1e9);
        expect(stepDigit(there, power, -steps, 0, 1e9)).toBe(value);
      },
    ),
  );
});

test('a step carries like a pencil on paper and stops at the bounds', () => {
  expect(stepDigit(22e3, 1, 1, 1, 1e6)).toBe(22010);
  expect(stepDigit(999.9, -1, 1, 0, 5000)).toBe(1000);
  expect(stepDigit(0.3, -1, -1, 0, 5000)).toBe(0.2);
  expect(stepDigit(4999, 1, 1, 0, 5000)).toBe(5000);
  expect(stepDigit(5, 1, -1, 0, 5000)).toBe(0);
});
