import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type Pace, stepValue } from '../../../app/quantity/step.ts';
import { checkField } from '../../../sim-core/design/check.ts';
import type { Field } from '../../../sim-core/design/field.ts';
import { GROUPS } from '../../../sim-core/design/schema.ts';

const { frequency } = GROUPS.bridge;

describe('a step', () => {
  test.each<[number, number, Pace, number]>([
    [22e3, 1, 'normal', 22.1e3],
    [22e3, -1, 'normal', 21.9e3],
    [22e3, 1, 'coarse', 23e3],
    [22e3, 1, 'fine', 22.01e3],
    [22.04e3, 1, 'normal', 22.1e3],
    [22.04e3, -1, 'normal', 22e3],
    [22e3, 5, 'normal', 22.5e3],
    [1000, -1, 'normal', 990],
    [999, 1, 'normal', 1000],
    [1e6, 1, 'normal', 1e6],
    [1, -1, 'normal', 1],
  ])('from %d Hz by %d, %s, ends at %d Hz', (from, steps, pace, to) => {
    expect(stepValue(frequency, from, steps, pace)).toBe(to);
  });

  test('leads from zero up and back to zero where the field allows zero', () => {
    const { deadTime } = GROUPS.bridge;
    expect(stepValue(deadTime, 1e-9, -1, 'normal')).toBe(0);
    const up = stepValue(deadTime, 0, 1, 'normal');
    expect(up).toBeGreaterThan(0);
    expect(checkField(deadTime, up)).toBeNull();
  });

  test('leads below zero where the bounds do', () => {
    const { widthError } = GROUPS.bridge;
    expect(stepValue(widthError, 0, -1, 'normal')).toBeLessThan(0);
  });

  test('moves a count by one, and coarse by ten', () => {
    const { count } = GROUPS.sections;
    expect(stepValue(count, 8, 1, 'normal')).toBe(9);
    expect(stepValue(count, 8, 1, 'fine')).toBe(9);
    expect(stepValue(count, 8, 1, 'coarse')).toBe(18);
    expect(stepValue(count, 47, 1, 'coarse')).toBe(48);
    expect(stepValue(count, 1, -1, 'normal')).toBe(1);
  });

  const numbers = Object.values(GROUPS).flatMap((fields) =>
    Object.values(fields as Record<string, Field>).flatMap((field) =>
      field.kind === 'quantity' || field.kind === 'count' ? [field] : [],
    ),
  );

  test('stays within the bounds of any field, and moves the way it is turned', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...numbers),
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.integer({ min: -300, max: 300 }),
        fc.constantFrom<Pace>('fine', 'normal', 'coarse'),
        (field, share, steps, pace) => {
          const low = field.min > 0 ? Math.log(field.min) : null;
          const spread =
            low === null
              ? field.min + share * (field.max - field.min)
              : Math.exp(low + share * (Math.log(field.max) - low));
          const inside = Math.min(field.max, Math.max(field.min, spread));
          const value = field.kind === 'count' ? Math.round(inside) : inside;
          const next = stepValue(field, value, steps, pace);
          expect(checkField(field, next)).toBeNull();
          if (steps > 0) expect(next).toBeGreaterThanOrEqual(value);
          if (steps < 0) expect(next).toBeLessThanOrEqual(value);
        },
      ),
      { seed: 10, numRuns: 3000 },
    );
  });
});
