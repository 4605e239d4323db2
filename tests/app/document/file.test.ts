import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { readDesign, writeDesign } from '../../../app/document/file.ts';
import { defaultDesign } from '../../../sim-core/design/check.ts';
import { anyDesign } from '../../sim-core/design/anyDesign.ts';

describe('a design file', () => {
  test('reads as the design it was written from', () => {
    fc.assert(
      fc.property(anyDesign, (design) => {
        expect(readDesign(writeDesign(design))).toEqual({ ok: true, value: design });
      }),
      { seed: 7, numRuns: 100 },
    );
  });

  test('names its version even when nothing differs from the defaults', () => {
    expect(JSON.parse(writeDesign(defaultDesign()))).toEqual({ version: 1 });
  });

  test.each<[string, string, RegExp]>([
    ['nothing', '', /not JSON/],
    ['a text', 'bus at 310 V', /not JSON/],
    ['half a file', '{"version": 1, "bridge": {', /not JSON/],
    ['a list', '[]', /group of values/],
    ['a number that JSON does not know', '{"bridge": {"frequency": NaN}}', /not JSON/],
    ['a number beyond double precision', '{"bridge": {"frequency": 1e999}}', /Drive frequency/],
    ['far too much text', ' '.repeat(262_145), /262145 characters long/],
  ])('of %s is refused by a sentence', (_, text, words) => {
    const read = readDesign(text);
    expect(read.ok ? '' : read.problem.message).toMatch(words);
  });
});
