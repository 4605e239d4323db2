import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { numberUnknowns, type Stamps, stamp } from '../../../sim-core/network/mna.ts';
import { type Network, NetworkBuilder } from '../../../sim-core/network/network.ts';
import { entry } from '../../../sim-core/sparse/ldl.ts';

const name = 'part under test';
const part = 'output';

/** Σ g·d·dᵀ by the definition, over node numbers (earth's row and column left out). */
function denseSum(n: number, vectors: readonly (readonly [number, number[]])[]): number[][] {
  const sum = Array.from({ length: n }, () => new Array<number>(n).fill(0));
  for (const [g, d] of vectors) {
    for (let i = 1; i <= n; i++) for (let j = 1; j <= n; j++) sum[i - 1][j - 1] += g * d[i] * d[j];
  }
  return sum;
}

/** The matrix that stamps give, over node numbers. */
function stamped(network: Network, groups: readonly (readonly [keyof Groups, number[]])[]) {
  const system = numberUnknowns(network);
  const values = new Float64Array(system.pattern.n + system.pattern.nnz);
  for (const [group, g] of groups) stamp(system[group], Float64Array.from(g), values);
  const n = system.pattern.n;
  return Array.from({ length: n }, (_, i) =>
    Array.from({ length: n }, (_, j) => {
      const at = entry(system.pattern, system.unknown[i + 1], system.unknown[j + 1]);
      return at < 0 ? 0 : values[at];
    }),
  );
}

interface Groups {
  resistors: Stamps;
  inductors: Stamps;
}

const node = fc.integer({ min: 0, max: 7 }).map((k) => (k === 0 ? 'earth' : `node ${k}`));

describe('the reduced nodal matrix', () => {
  test('is the sum of g·d·dᵀ, windings with their star point included', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(node, node), { minLength: 1, maxLength: 12 }),
        fc.array(fc.tuple(node, node, node, node, fc.integer({ min: -9, max: 9 })), {
          maxLength: 6,
        }),
        (resistors, windings) => {
          const builder = new NetworkBuilder();
          for (const [a, b] of resistors) builder.resistor(name, part, a, b, 1);
          for (const [a, b, from, to, ratio] of windings) {
            builder.inductor(name, part, a, b, 1, 0, { ratio, from, to });
          }
          const network = builder.finish();
          const n = network.nodes.length - 1;
          const vector = (terms: readonly (readonly [number, number])[]): number[] => {
            const d = new Array<number>(n + 1).fill(0);
            for (const [at, k] of terms) d[at] += k;
            return d;
          };
          const vectors = [
            ...network.resistors.map((e, k): [number, number[]] => [
              k + 2,
              vector([
                [e.from, 1],
                [e.to, -1],
              ]),
            ]),
            ...network.inductors.map((e, k): [number, number[]] => [
              k + 0.5,
              vector([
                [e.from, 1],
                [e.to, -1],
                [e.starFrom, e.ratio],
                [e.starTo, -e.ratio],
              ]),
            ]),
          ];
          const found = stamped(network, [
            ['resistors', network.resistors.map((_, k) => k + 2)],
            ['inductors', network.inductors.map((_, k) => k + 0.5)],
          ]);
          // Small whole numbers and halves: the sums are exact.
          expect(String(found)).toBe(String(denseSum(n, vectors)));
        },
      ),
      { seed: 8, numRuns: 150 },
    );
  });

  test('numbers every node once and gives earth the number behind the last', () => {
    const builder = new NetworkBuilder();
    builder.resistor('r', part, 'a', 'b', 1);
    builder.resistor('s', part, 'b', 'earth', 1);
    const network = builder.finish();
    const { unknown, nodeOf } = numberUnknowns(network);
    expect([...unknown].sort()).toEqual([0, 1, 2]);
    expect(unknown[network.node('earth')]).toBe(2);
    for (const at of ['a', 'b']) expect(nodeOf[unknown[network.node(at)]]).toBe(at);
  });
});
