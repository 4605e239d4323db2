import { describe, expect, test } from 'vitest';
import { EXAMPLES } from '../../../sim-core/design/examples.ts';

describe('the examples', () => {
  test('each is told apart by its id and name, and says that it is invented', () => {
    expect(new Set(EXAMPLES.map(({ id }) => id)).size).toBe(EXAMPLES.length);
    expect(new Set(EXAMPLES.map(({ design }) => design.name)).size).toBe(EXAMPLES.length);
    for (const { id, about, design } of EXAMPLES) {
      expect(id).toMatch(/^[a-z0-9-]+$/);
      expect(about).toMatch(/^Invented: [^.]+\.$/);
      expect(design.notes).toMatch(/^An invented scenario/);
    }
  });

  test('the core of none saturates in its settled state', () => {
    for (const { design } of EXAMPLES) {
      const { kneeFluxLinkage } = design.transformer;
      if (kneeFluxLinkage === null) continue;
      // A square wave of the bus voltage: peak flux linkage V/(4 f) (fact sheet of any textbook:
      // B = V/(4 N A f)). A tank may raise the primary voltage by a half.
      const peak = design.supply.voltage / (4 * design.bridge.frequency);
      expect(1.5 * peak).toBeLessThan(kneeFluxLinkage);
    }
  });
});
