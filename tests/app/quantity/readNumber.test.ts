import { describe, expect, test } from 'vitest';
import { readNumber } from '../../../app/quantity/readNumber.ts';
import { checkField } from '../../../sim-core/design/check.ts';
import { formatQuantity } from '../../../sim-core/design/engineering.ts';
import type { CountField, Field, QuantityField } from '../../../sim-core/design/field.ts';
import { GROUPS } from '../../../sim-core/design/schema.ts';

const NUMBERS = Object.entries(GROUPS).flatMap(([group, fields]) =>
  Object.entries(fields as Record<string, Field>).flatMap(([name, field]) =>
    field.kind === 'quantity' || field.kind === 'count'
      ? [{ place: `${group}.${name}`, field: field as QuantityField | CountField }]
      : [],
  ),
);

describe('every number field', () => {
  const typed = ['', 'text', 'NaN', 'Infinity', '-Infinity', '0', '-1', '1e30', '1e-30', '-1e30'];

  test.each(NUMBERS)('$place takes what its field allows and explains the rest', ({ field }) => {
    for (const text of [...typed, '1e-400', '1e999', '5 furlongs', 'x'.repeat(50)]) {
      const meant = readNumber(field, text);
      if ('value' in meant) expect(checkField(field, meant.value)).toBeNull();
      else expect(meant.problem).toMatch(/\.$/);
    }
  });

  test.each(NUMBERS)('$place reads back its own default and bounds', ({ field }) => {
    const unit = field.kind === 'quantity' ? field.unit : '';
    for (const value of [field.min, field.max, field.default]) {
      const text = value === null ? '' : formatQuantity(value, unit, 6);
      expect(readNumber(field, text)).toEqual({ value });
    }
  });

  test('that is optional takes its word for absent', () => {
    const { currentLimit, busCapacitance } = GROUPS.supply;
    expect(readNumber(currentLimit, ' None ')).toEqual({ value: null });
    expect(readNumber(busCapacitance, 'not fitted')).toEqual({ value: null });
    expect(readNumber(busCapacitance, 'none')).toHaveProperty('problem');
  });

  test('tells milli from mega when one was typed out of bounds', () => {
    expect(readNumber(GROUPS.bridge.frequency, '22 mHz')).toEqual({
      problem: expect.stringMatching(
        /^Drive frequency 22 mHz is below 1 Hz.*m is milli, M is mega\.$/,
      ),
    });
  });
});
