import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { analyse } from '../../../sim-core/sparse/ldl.ts';
import { minimumDegree } from '../../../sim-core/sparse/order.ts';

/** Entries below the diagonal after elimination in an order, fill included. */
function entriesAfter(n: number, pairs: readonly [number, number][], order: Int32Array): number {
  const place = new Int32Array(n);
  order.forEach((unknown, k) => {
    place[unknown] = k;
  });
  return analyse(
    n,
    pairs.map(([i, j]) => [place[i], place[j]]),
  ).nnz;
}

const anyTree = fc
  .array(fc.double({ min: 0, max: 1, maxExcluded: true, noNaN: true }), { maxLength: 60 })
  .chain((shares) => {
    const n = shares.length + 1;
    const edges = shares.map((share, k): [number, number] => [k + 1, Math.floor(share * (k + 1))]);
    // Scrambled numbers, so that the order of creation gives nothing away.
    return fc
      .shuffledSubarray([...Array(n).keys()], { minLength: n, maxLength: n })
      .map((names) => ({
        n,
        edges: edges.map(([i, j]): [number, number] => [names[i], names[j]]),
      }));
  });

describe('minimum degree', () => {
  test('gives no fill on a tree (Tinney & Walker, Proc. IEEE 55 (1967) 1801)', () => {
    fc.assert(
      fc.property(anyTree, ({ n, edges }) => {
        expect(entriesAfter(n, edges, minimumDegree(n, edges))).toBe(edges.length);
      }),
      { seed: 3, numRuns: 300 },
    );
  });

  test('gives the least possible fill on a ring: one entry per unknown but three', () => {
    for (const n of [3, 4, 7, 30]) {
      const ring = [...Array(n).keys()].map((i): [number, number] => [i, (i + 1) % n]);
      expect(entriesAfter(n, ring, minimumDegree(n, ring))).toBe(n + n - 3);
    }
  });

  test('takes every unknown exactly once, whatever the pattern', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 30 }).chain((n) =>
          fc.record({
            n: fc.constant(n),
            pairs:
              n === 0
                ? fc.constant([])
                : fc.array(fc.tuple(fc.nat({ max: n - 1 }), fc.nat({ max: n - 1 })), {
                    maxLength: 4 * n,
                  }),
          }),
        ),
        ({ n, pairs }) => {
          const order = minimumDegree(n, pairs);
          expect([...order].sort((a, b) => a - b)).toEqual([...Array(n).keys()]);
        },
      ),
      { seed: 4, numRuns: 200 },
    );
  });
});
