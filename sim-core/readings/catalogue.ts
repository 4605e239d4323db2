/**
 * The readings of a run: each with its unit, its words and its definition.
 * Means, rms values and peaks are taken over one whole drive period, the last completed one.
 */
import type { Unit } from '../design/field.ts';

interface ReadingWords {
  readonly label: string;
  readonly unit: Unit;
  /** The definition, in one sentence. */
  readonly definition: string;
}

/** Every reading, in the order of the ledger. */
export const READINGS = {
  outputVoltage: {
    label: 'Output voltage, mean',
    unit: 'V',
    definition: 'Mean voltage between the output terminals, after the resistor in the tank.',
  },
  outputPeak: {
    label: 'Output voltage, peak',
    unit: 'V',
    definition: 'Largest magnitude of the output voltage.',
  },
  outputRms: {
    label: 'Output voltage, rms',
    unit: 'V',
    definition: 'Root mean square of the output voltage; the one to read of an alternating output.',
  },
  outputCurrent: {
    label: 'Output current, mean',
    unit: 'A',
    definition: 'Mean current through the load.',
  },
  ripplePeakToPeak: {
    label: 'Ripple, peak to peak',
    unit: 'V',
    definition: 'Largest minus smallest output voltage.',
  },
  rippleAmplitude: {
    label: 'Ripple amplitude',
    unit: 'V',
    definition: 'Half the peak-to-peak ripple (IEC 60060-1).',
  },
  rippleFactor: {
    label: 'Ripple factor, amplitude / mean',
    unit: '%',
    definition: 'Ripple amplitude over the mean output voltage (IEC 60060-1).',
  },
  percentageRipple: {
    label: 'Ripple, (max − min) / max',
    unit: '%',
    definition: 'Peak-to-peak ripple over the largest output voltage, as X-ray practice has it.',
  },
  primaryPeak: {
    label: 'Primary current, peak',
    unit: 'A',
    definition: 'Largest magnitude of the primary current.',
  },
  primaryRms: {
    label: 'Primary current, rms',
    unit: 'A',
    definition: 'Root mean square of the primary current.',
  },
  primaryMean: {
    label: 'Primary current, mean',
    unit: 'A',
    definition: 'Direct component of the primary current.',
  },
  fluxPeak: {
    label: 'Flux linkage, peak',
    unit: 'Wb',
    definition: 'Largest magnitude of the flux linkage of the core, referred to the primary.',
  },
  busVoltage: {
    label: 'Bus voltage, mean',
    unit: 'V',
    definition: 'Mean voltage between the rails of the bus, at the bridge.',
  },
  supplyCurrent: {
    label: 'Supply current, mean',
    unit: 'A',
    definition: 'Mean current delivered by the supply.',
  },
  supplyPower: {
    label: 'Supply power',
    unit: 'W',
    definition:
      'Mean power leaving the supply’s terminals, with the loss in its source resistance; at its current limit the voltage counted is the one it still gives.',
  },
  loadPower: {
    label: 'Load power',
    unit: 'W',
    definition: 'Mean power taken by the load.',
  },
  efficiency: {
    label: 'Efficiency',
    unit: '%',
    definition: 'Load power over supply power; it means little before the run has settled.',
  },
  powerFactor: {
    label: 'Power factor of the primary',
    unit: '',
    definition: 'Mean power into the primary over its rms voltage times its rms current.',
  },
  bridgeLoss: {
    label: 'Loss, supply and bridge',
    unit: 'W',
    definition:
      'Mean loss in the source resistance, the bus with its capacitor and leakage, and the switches.',
  },
  tankLoss: {
    label: 'Loss, tank',
    unit: 'W',
    definition: 'Mean loss in the resistances of the tank.',
  },
  transformerLoss: {
    label: 'Loss, transformer',
    unit: 'W',
    definition: 'Mean loss in the windings and the core-loss resistance.',
  },
  rectifierLoss: {
    label: 'Loss, rectifiers',
    unit: 'W',
    definition: 'Mean loss in the diodes and capacitors of the stack.',
  },
  outputLoss: {
    label: 'Loss, output network',
    unit: 'W',
    definition:
      'Mean loss in the resistors, bleeder and probe of the output, and in the leakage of a floating stack.',
  },
  stackEnergy: {
    label: 'Energy left in stack and cable',
    unit: 'J',
    definition: 'Energy in the capacitances of the stack and the output at the end of the period.',
  },
  energyAudit: {
    label: 'Energy audit',
    unit: '%',
    definition:
      'Energy in − dissipated − gained, since the start, as a share of the larger of energy in and peak stored energy.',
  },
  settledDistance: {
    label: 'Distance from steady',
    unit: '%',
    definition:
      'Estimated distance to the steady state: change per period / (1 − ρ), ρ being the slowest decay seen, as a share of the state, both in the norm of stored energy.',
  },
} as const satisfies Record<string, ReadingWords>;

/** Name of a reading. */
export type ReadingName = keyof typeof READINGS;

/** Values of all readings; null where one has no meaning yet (no period done, divisor zero). */
export type Readings = { readonly [R in ReadingName]: number | null };
