import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { parseQuantity } from '../../../app/quantity/parse.ts';
import { formatQuantity } from '../../../sim-core/design/engineering.ts';
import type { Unit } from '../../../sim-core/design/field.ts';

const problem = (text: string, unit: Unit) => {
  const parsed = parseQuantity(text, unit);
  return typeof parsed === 'object' && parsed !== null ? parsed.problem : null;
};

describe('a quantity', () => {
  // Examples of IEC 60062:2016, as the fact sheets of the trade repeat them.
  test.each<[string, number]>([
    ['R47', 0.47],
    ['4R7', 4.7],
    ['4K7', 4.7e3],
    ['47K3', 47.3e3],
    ['4M7', 4.7e6],
  ])('%s is read as IEC 60062 codes it', (text, ohms) => {
    expect(parseQuantity(text, 'Ω')).toBe(ohms);
  });

  test.each<[string, Unit, number]>([
    ['4k7', 'Ω', 4.7e3],
    ['4k7Ω', 'Ω', 4.7e3],
    ['4.7 k\u2126', 'Ω', 4.7e3],
    ['4.7 kohm', 'Ω', 4.7e3],
    ['47R', 'Ω', 47],
    ['2u2', 'F', 2.2e-6],
    ['2µ2', 'F', 2.2e-6],
    ['2\u03BC2', 'F', 2.2e-6],
    ['n47', 'F', 0.47e-9],
    ['3V3', 'V', 3.3],
    ['0.15 mH', 'H', 0.15e-3],
    ['20e3', 'Hz', 20e3],
    ['20E3 Hz', 'Hz', 20e3],
    ['22 kHz', 'Hz', 22e3],
    ['22 khz', 'Hz', 22e3],
    ['22K', 'Hz', 22e3],
    ['1M', 'Ω', 1e6],
    ['1m', 'Ω', 1e-3],
    ['22 000', 'Hz', 22e3],
    ['22\u202F000 Hz', 'Hz', 22e3],
    ['22\u00A0kHz', 'Hz', 22e3],
    ['-5 V', 'V', -5],
    ['\u22125 V', 'V', -5],
    ['\u2013 5', 'V', -5],
    ['+5', 'V', 5],
    ['1e\u22126', 's', 1e-6],
    ['.5', 'V', 0.5],
    ['5.', 'V', 5],
    ['6.45 mVs', 'Wb', 6.45e-3],
    ['90', '°', 90],
    ['90 deg', '°', 90],
    ['1k', '', 1000],
    ['-0', 'V', 0],
  ])('%s in %s is read', (text, unit, value) => {
    expect(parseQuantity(text, unit)).toBe(value);
  });

  test.each<[string, number]>([
    ['1,5', 1.5],
    ['0,150', 0.15],
    [',5', 0.5],
    ['1234,567', 1234.567],
    ['1,5000', 1.5],
    ['1,5 kV', 1500],
  ])('%s has a decimal comma that can be nothing else', (text, value) => {
    expect(parseQuantity(text, 'V')).toBe(value);
  });

  test.each(['1,500', '12,345', '1,500 kV', '1.500,5', '1,500.5', '1,2,3'])(
    '%s has a comma that could mean two things, and is refused',
    (text) => {
      expect(problem(text, 'V')).toMatch(/comma/);
    },
  );

  test.each<[string, Unit, RegExp]>([
    ['5 mH', 'F', /mH is not a unit of capacitance but of inductance/],
    ['10 s', 'Hz', /s is not a unit of frequency but of time/],
    ['4k7 F', 'Ω', /F is not a unit of resistance but of capacitance/],
    ['4R7', 'V', /R is not a unit of voltage but of resistance/],
    ['1 meg', 'Ω', /m is milli, M is mega/],
    ['10 MEG', 'Ω', /m is milli, M is mega/],
    ['1k', '°', /neither a unit of angle nor a prefix/],
    ['1k', '%', /neither a unit/],
    ['10 dozen', 'V', /neither a unit of voltage/],
    ['text', 'V', /not a number/],
    ['NaN', 'V', /not a number/],
    ['Infinity', 'V', /not a number/],
    ['\u2212Infinity', 'V', /not a number/],
    ['1.2.3', 'V', /not a number/],
    ['.', 'V', /not a number/],
    ['-', 'V', /not a number/],
    ['k', 'V', /not a number/],
    ['0x10', 'V', /neither a unit/],
    ['1e400', 'V', /too large/],
    ['1e-400', 'V', /too small/],
    ['1'.repeat(41), 'V', /41 characters/],
    ['x'.repeat(1e6), 'V', /1000000 characters/],
  ])('%s in %s is refused by a sentence', (text, unit, words) => {
    const message = problem(text, unit);
    expect(message).toMatch(words);
    expect(message).toMatch(/\.$/);
  });

  test('of nothing is none', () => {
    expect(parseQuantity('', 'V')).toBeNull();
    expect(parseQuantity(' \u00A0\t', 'V')).toBeNull();
  });

  const units: Unit[] = ['V', 'A', 'Ω', 'F', 'H', 'Hz', 's', 'Wb', 'W', 'J', 'C', '°', '%', ''];
  test('printed in engineering notation is read as the same double', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...units),
        fc.double({ noNaN: true, noDefaultInfinity: true }),
        (unit, value) => {
          // Adding 0 turns −0 into 0.
          expect(parseQuantity(formatQuantity(value, unit, 17), unit)).toBe(value + 0);
        },
      ),
      { seed: 8, numRuns: 2000 },
    );
  });

  test('is a finite number, nothing, or a sentence, whatever is typed', () => {
    const letters = fc.constantFrom(...'0123456789.,eE+-−kKmMuµRΩFHzsV %°x'.split(''));
    const typed = fc.oneof(fc.string(), fc.string({ unit: letters, maxLength: 12 }));
    fc.assert(
      fc.property(typed, fc.constantFrom(...units), (text, unit) => {
        const parsed = parseQuantity(text, unit);
        if (typeof parsed === 'number') expect(Number.isFinite(parsed)).toBe(true);
        else if (parsed !== null) expect(parsed.problem).toMatch(/\.$/);
      }),
      { seed: 9, numRuns: 5000 },
    );
  });
});
