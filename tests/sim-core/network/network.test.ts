import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { EARTH, NetworkBuilder, piecesThrough } from '../../../sim-core/network/network.ts';

const part = 'output';

describe('a network', () => {
  test('is the same whatever way round its nodes are joined', () => {
    const names = [EARTH, 'a', 'b', 'c', 'd', 'e', 'f'];
    const at = fc.constantFrom(...names);
    fc.assert(
      fc.property(fc.array(fc.tuple(at, at), { maxLength: 8 }), (joins) => {
        const build = (pairs: readonly (readonly [string, string])[]) => {
          const builder = new NetworkBuilder();
          for (const name of names) builder.resistor('open', part, name, EARTH, null);
          for (const [x, y] of pairs) builder.join(x, y);
          const network = builder.finish();
          return names.map((x) => names.map((y) => network.node(x) === network.node(y)));
        };
        const together = build(joins);
        expect(String(build([...joins].reverse().map(([x, y]) => [y, x])))).toBe(String(together));
        // The partition that joining means, by spreading along the joins.
        const reach = names.map((x) => {
          const set = new Set([x]);
          for (let k = 0; k < names.length; k++) {
            for (const [p, q] of joins) {
              if (set.has(p)) set.add(q);
              if (set.has(q)) set.add(p);
            }
          }
          return names.map((y) => set.has(y));
        });
        expect(String(together)).toBe(String(reach));
      }),
      { seed: 9, numRuns: 100 },
    );
  });

  test('drops what has both ends on one node, but not a winding that works on the star point', () => {
    const builder = new NetworkBuilder();
    builder.resistor('0 Ω', part, 'a', 'b', 0);
    builder.resistor('bridged', part, 'a', 'b', 5);
    builder.capacitor('bridged too', part, 'b', 'a', 1e-9);
    builder.inductor('shorted choke', part, 'a', 'b', 1, 0);
    builder.inductor('shorted winding', part, 'a', 'b', 1, 0, { ratio: 3, from: 'a', to: EARTH });
    const network = builder.finish();
    expect(network.nodes).toEqual([EARTH, 'a']);
    expect(network.resistors).toEqual([]);
    expect(network.capacitors).toEqual([]);
    expect(network.inductors.map((e) => e.name)).toEqual(['shorted winding']);
  });

  test('knows no node that was never named', () => {
    expect(() => new NetworkBuilder().finish().node('nowhere')).toThrow('nowhere');
  });
});

describe('pieces through corners', () => {
  test('join continuously, pass through every corner and cover the whole axis', () => {
    const anyCorners = fc
      .uniqueArray(fc.integer({ min: -1000, max: 1000 }), { minLength: 1, maxLength: 6 })
      .map((xs) => xs.sort((a, b) => a - b).map((x): [number, number] => [x, x ** 3 / 1e3]));
    fc.assert(
      fc.property(anyCorners, (corners) => {
        const pieces = piecesThrough(corners, 0.5, 2);
        expect(pieces[0].low).toBe(-Infinity);
        expect(pieces.at(-1)?.high).toBe(Infinity);
        corners.forEach(([x, y], k) => {
          expect(pieces[k].high).toBe(x);
          expect(pieces[k + 1].low).toBe(x);
          for (const piece of [pieces[k], pieces[k + 1]]) {
            expect(Math.abs(piece.slope * x + piece.offset - y)).toBeLessThanOrEqual(1e-9 * 1e6);
          }
        });
        expect(pieces[0].slope).toBe(0.5);
        expect(pieces.at(-1)?.slope).toBe(2);
      }),
      { seed: 10, numRuns: 100 },
    );
  });
});
