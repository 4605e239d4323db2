import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { FactorCache } from '../../../sim-core/transient/factors.ts';

describe('kept factors', () => {
  test('are found under their keys until all are dropped, and never under others', () => {
    const key = fc.integer({ min: -5, max: 5 });
    fc.assert(
      fc.property(fc.array(fc.tuple(key, key), { maxLength: 300 }), (keys) => {
        const cache = new FactorCache(2);
        const mirror = new Map<string, number>();
        for (const [k, [a, b]] of keys.entries()) {
          const found = cache.find(a, b);
          expect(found?.[0]).toBe(mirror.get(`${a} ${b}`));
          if (found) continue;
          cache.add(a, b)[0] = k;
          mirror.set(`${a} ${b}`, k);
        }
        cache.clear();
        for (const [a, b] of keys) expect(cache.find(a, b)).toBeUndefined();
      }),
      { seed: 15, numRuns: 100 },
    );
  });

  test('of large matrices are dropped before they fill the memory', () => {
    // A million numbers each: eight megabytes; the eight least kept, whatever the size.
    const cache = new FactorCache(1e6);
    for (let k = 0; k < 20; k++) {
      expect(cache.find(k, -k)).toBeUndefined();
      cache.add(k, -k)[0] = k;
      expect(cache.find(k, -k)?.[0]).toBe(k);
    }
    const kept = Array.from({ length: 20 }, (_, k) => cache.find(k, -k)).filter(Boolean);
    expect(kept.length).toBeLessThanOrEqual(8);
  });
});
