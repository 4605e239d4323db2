import { expect, test } from 'vitest';
import { nearestNames } from '../../../app/headless/nearest.ts';
import { EXAMPLES } from '../../../sim-core/index.ts';
import { signalsOf } from '../../../sim-core/plant/assemble.ts';

const names = signalsOf(EXAMPLES[0].design).map(({ name }) => name);

test('a name with one letter wrong, missing or added finds itself first', () => {
  for (const name of names) {
    const middle = Math.floor(name.length / 2);
    expect(nearestNames(`${name}x`, names)[0]).toBe(name);
    // Where a digit was lost the number could have been any: then only the rest must fit.
    const cut = name.slice(0, middle) + name.slice(middle + 1);
    const pattern = (text: string) => text.replace(/\d+/g, '');
    expect(pattern(nearestNames(cut, names)[0])).toBe(pattern(name));
  }
});

test('a text of any length is answered with three names', () => {
  expect(nearestNames('', names)).toHaveLength(3);
  expect(nearestNames('x'.repeat(1e6), names)).toHaveLength(3);
});
