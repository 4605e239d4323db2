import fc from 'fast-check';
import { expect, test } from 'vitest';
import { roundStep, ticksBetween } from '../../app/scale.ts';

const decades = fc.integer({ min: -9, max: 9 });

test('the round step is 1, 2 or 5 times a power of ten and never too small', () => {
  fc.assert(
    fc.property(fc.double({ min: 1, max: 9.999, noNaN: true }), decades, (lead, decade) => {
      const least = lead * 10 ** decade;
      const step = roundStep(least);
      expect(step).toBeGreaterThanOrEqual(least * (1 - 1e-6));
      expect(step).toBeLessThanOrEqual(least * 2.5 * (1 + 1e-6));
      expect(Number(step.toExponential().split('e')[0])).toBeOneOf([1, 2, 5]);
    }),
  );
});

test('the marks of a scale rise, stay within it, and carry no more figures than fit', () => {
  fc.assert(
    fc.property(
      fc.double({ min: -1, max: 1, noNaN: true }),
      fc.double({ min: 0.01, max: 1, noNaN: true }),
      decades,
      fc.integer({ min: 2, max: 10 }),
      (start, span, decade, majors) => {
        const from = start * 10 ** decade;
        const to = (start + span) * 10 ** decade;
        const ticks = ticksBetween(from, to, majors);
        const slack = (to - from) * 1e-6;
        expect(ticks.length).toBeGreaterThan(0);
        expect(ticks.length).toBeLessThanOrEqual(5 * majors + 5);
        expect(ticks.filter(({ major }) => major).length).toBeLessThanOrEqual(majors + 1);
        ticks.forEach(({ value }, i) => {
          expect(value).toBeGreaterThanOrEqual(from - slack);
          expect(value).toBeLessThanOrEqual(to + slack);
          if (i > 0) expect(value).toBeGreaterThan(ticks[i - 1].value);
        });
      },
    ),
  );
});

test('an empty scale has no marks', () => {
  expect(ticksBetween(3, 3, 5)).toEqual([]);
  expect(ticksBetween(Number.NaN, 3, 5)).toEqual([]);
  expect(ticksBetween(0, 1, 0)).toEqual([]);
});
