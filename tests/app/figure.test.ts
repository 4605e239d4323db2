import { expect, test } from 'vitest';
import { figureText, readingText, unitOf } from '../../app/figure.ts';

test('a live figure keeps its digits, trailing zeros and all, and is renormalised after rounding', () => {
  expect(figureText(0.02, 'A')).toBe('20.0 mA');
  expect(figureText(59613, 'V')).toBe('59.6 kV');
  expect(figureText(999.96, 'V')).toBe('1.00 kV');
  expect(figureText(-29.9e3, 'V')).toBe('−29.9 kV');
  expect(figureText(0, 'V')).toBe('0 V');
  expect(figureText(94.6, '%')).toBe('94.6 %');
  expect(figureText(1234567, 'V', 2)).toBe('1.2 MV');
});

test('a small share is said in two digits, a large one in three', () => {
  expect(readingText('percentageRipple', 0.3123)).toBe('0.31 %');
  expect(readingText('efficiency', 94.61)).toBe('94.6 %');
});

test('a unit and its divisor belong together', () => {
  expect(unitOf(59.6e3, 'V')).toEqual({ unit: 'kV', divisor: 1e3 });
  expect(unitOf(0.5, 'V')).toEqual({ unit: 'mV', divisor: 1e-3 });
  expect(unitOf(0, 'V')).toEqual({ unit: 'V', divisor: 1 });
});
