import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { checkDesign } from '../../../sim-core/design/check.ts';
import { assemble } from '../../../sim-core/plant/assemble.ts';
import { windingEnd, windingStart } from '../../../sim-core/plant/transformer.ts';

function plantOf(sections: Readonly<Record<string, unknown>>) {
  const checked = checkDesign({ version: 1, sections });
  if (!checked.ok) throw new Error(JSON.stringify(checked));
  return assemble(checked.value);
}

/** Energy (J) of what section 1's capacitances hold at potentials of its ends. */
function energyAt(network: ReturnType<typeof assemble>['network'], a: number, b: number): number {
  const potential = new Map([
    [network.node(windingStart(1)), a],
    [network.node(windingEnd(1)), b],
  ]);
  let sum = 0;
  for (const e of network.capacitors) {
    if (e.part !== 'transformer' || !e.name.startsWith('section 1 ')) continue;
    sum += 0.5 * e.capacitance * ((potential.get(e.from) ?? 0) - (potential.get(e.to) ?? 0)) ** 2;
  }
  return sum;
}

describe('a winding with capacitance to a screen', () => {
  test('holds the energy of a voltage that runs linearly along it', () => {
    const potential = fc.double({ min: -1e4, max: 1e4, noNaN: true });
    const farads = fc.double({ min: 1e-12, max: 1e-9, noNaN: true });
    fc.assert(
      fc.property(potential, potential, farads, farads, (a, b, own, screen) => {
        const { network } = plantOf({
          count: 1,
          ownCapacitance: own + screen,
          screenCapacitance: screen,
        });
        // ∫ ½·C·v² along the winding, by Simpson's rule, exact for a square of a straight line.
        const middle = (a + b) / 2;
        const toScreen = (0.5 * screen * (a ** 2 + 4 * middle ** 2 + b ** 2)) / 6;
        const across = 0.5 * (own + screen) * (a - b) ** 2;
        const expected = toScreen + across;
        expect(Math.abs(energyAt(network, a, b) - expected)).toBeLessThanOrEqual(1e-12 * expected);
      }),
      { seed: 14, numRuns: 50 },
    );
  });
});
