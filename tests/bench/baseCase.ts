/**
 * The plants that the engine's speed is measured on: one base case of 12 sections of doublers,
 * scaled to other counts so that all sections together stay the same supply.
 */
import { checkDesign, type Design } from '../../sim-core/index.ts';

/** What stands behind every winding. */
export type Rectifier =
  | { readonly kind: 'doubler' | 'bridge' }
  | { readonly kind: 'ladder'; readonly stages: number };

/** Largest deviation of a section's leakage and resistance from the mean. */
const SPREAD = 0.02;

/**
 * The base case with `count` sections, every value that matters stated. Leakage inductance and
 * resistance rise linearly over the sections by ±2 %. Throws if the design does not pass its own
 * check: a bug here.
 */
export function baseCase(count: number, rectifier: Rectifier = { kind: 'doubler' }): Design {
  const wide = count / 12;
  const leakageInductance = 24e-3 / count;
  const resistance = 240 / count;
  const screenCapacitance = 30e-12 * wide;
  const overrides = Array.from({ length: count }, (_, k) => {
    const factor = 1 + SPREAD * (count > 1 ? (2 * k) / (count - 1) - 1 : 0);
    return {
      section: k + 1,
      leakageInductance: leakageInductance * factor,
      resistance: resistance * factor,
    };
  });
  const checked = checkDesign({
    version: 1,
    name: 'base case',
    supply: {
      voltage: 300,
      resistance: 0.05,
      currentLimit: null,
      absorbs: true,
      busCapacitance: 500e-6,
      busCapacitorResistance: 0,
      earthing: 'negative',
    },
    bridge: {
      frequency: 25e3,
      deadTime: 0.6e-6,
      phaseShift: 180,
      widthError: 0,
      switchKind: 'field-effect',
      switchResistance: 0.02,
      switchOffResistance: 1e7,
      diodeVoltage: 0.8,
      diodeResistance: 0.02,
      outputCapacitance: 300e-12,
    },
    tank: {
      seriesInductance: 40e-6,
      seriesInductorResistance: 0,
      seriesCapacitance: 2e-6,
      seriesCapacitorResistance: 0,
      parallelCapacitance: null,
    },
    transformer: {
      primaryResistance: 0.05,
      primaryLeakage: 5e-6,
      magnetisingInductance: 2e-3,
      kneeFluxLinkage: 4.5e-3,
      saturatedInductance: 40e-6,
      remanence: 0,
      coreLossResistance: 2e3,
    },
    sections: {
      count,
      ratio: 96 / count,
      sense: 'forward',
      leakageInductance,
      resistance,
      // 20 pF across the winding remain once the screen's share is taken off.
      ownCapacitance: 20e-12 * wide + screenCapacitance / 6,
      screenCapacitance,
    },
    overrides,
    rectifier: {
      ...rectifier,
      capacitance: 47e-9 * wide,
      couplingCapacitance: null,
      capacitorResistance: 0,
      diodeVoltage: 10,
      diodeResistance: 20,
      diodeOffResistance: 1e9,
      diodeCapacitance: 2e-12,
    },
    stack: { earth: 'joint', joint: 0 },
    output: {
      lead: 'positive',
      tankResistance: 10e3,
      bleederResistance: null,
      probeResistance: null,
      probeCapacitance: 0,
      cableCapacitance: 1e-9,
      loadEndResistance: 0,
    },
    load: { kind: 'resistor', resistance: 1e6 },
    start: { busCharged: true },
  });
  if (!checked.ok) throw new Error(checked.problem.message);
  return checked.value;
}
