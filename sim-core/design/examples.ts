/**
 * Designs to open and to learn the page with. All of them are invented: no such supply exists,
 * and none of these values is taken from one.
 */
import { checkDesign } from './check.ts';
import type { Design } from './schema.ts';

/** An invented design and what it shows. */
export interface Example {
  /** Stable name in addresses and tests. */
  readonly id: string;
  /** One sentence: what the scenario is. */
  readonly about: string;
  readonly design: Design;
}

/** An example whose values contradict the schema is a bug of this file, not of its reader. */
function example(id: string, about: string, raw: unknown): Example {
  const checked = checkDesign(raw);
  if (!checked.ok) throw new Error(`${id}, ${checked.problem.place}: ${checked.problem.message}`);
  return { id, about, design: checked.value };
}

/** Every example; the first is the demo that the page opens with. */
export const EXAMPLES: readonly Example[] = [
  // Eight doublers on a hard square wave: 8 × 2 × 10.5 × 310 V = 52 kV, and some 60 kV as the
  // leakage rings with the windings' capacitance before each diode conducts. The charge of the
  // stack, 5 J, comes out of the bus capacitor, whose supply gives no more than 8 A.
  example(
    'duct-cleaner',
    'Invented: a 60 kV supply for the air cleaner of a test duct, eight doublers driven hard at 22 kHz.',
    {
      version: 1,
      name: 'Duct cleaner, test rig',
      notes:
        'An invented scenario: 20 mA at 60 kV for an air cleaner in a test duct. The series capacitor only blocks direct current: with it in place, no width error of the bridge can make the flux walk.',
      supply: { voltage: 310, resistance: 0.15, currentLimit: 8, busCapacitance: 680e-6 },
      bridge: { frequency: 22e3, deadTime: 1e-6, switchKind: 'insulated-gate' },
      tank: {
        seriesInductance: 40e-6,
        seriesInductorResistance: 0.05,
        seriesCapacitance: 20e-6,
        seriesCapacitorResistance: 5e-3,
      },
      transformer: {
        primaryResistance: 0.06,
        primaryLeakage: 6e-6,
        magnetisingInductance: 2.4e-3,
        kneeFluxLinkage: 6.45e-3,
        saturatedInductance: 40e-6,
        coreLossResistance: 3e3,
      },
      sections: {
        count: 8,
        ratio: 10.5,
        leakageInductance: 11e-3,
        resistance: 18,
        ownCapacitance: 18e-12,
        screenCapacitance: 30e-12,
      },
      rectifier: { kind: 'doubler', capacitance: 22e-9, diodeVoltage: 12 },
      output: { tankResistance: 10e3, bleederResistance: 600e6, cableCapacitance: 1.5e-9 },
      load: { kind: 'resistor', resistance: 3e6 },
    },
  ),
  // Series inductor with series capacitor: 1/(2π√(358 µH × 68 nF)) = 32 kHz; with the parallel
  // capacitor and the windings (37 nF) in series too: 54 kHz. The loaded peak lies between, and
  // the drive above it, where the tank is inductive and the switches turn on without voltage.
  example(
    'centre-earth',
    'Invented: a resonant supply of ±50 kV for an electron-beam column, ten doublers about an earthed centre.',
    {
      version: 1,
      name: 'Beam column, centre earth',
      notes:
        'An invented scenario: ten doublers with the middle joint earthed, 15 mA at 100 kV between the terminals, driven above the resonance of the tank.',
      supply: { voltage: 320, resistance: 0.1, currentLimit: 12, busCapacitance: 470e-6 },
      bridge: {
        frequency: 51.5e3,
        deadTime: 300e-9,
        switchKind: 'field-effect',
        switchResistance: 0.06,
        outputCapacitance: 220e-12,
      },
      tank: {
        seriesInductance: 350e-6,
        seriesInductorResistance: 0.3,
        seriesCapacitance: 68e-9,
        seriesCapacitorResistance: 0.02,
        parallelCapacitance: 22e-9,
        parallelCapacitorResistance: 0.02,
      },
      transformer: {
        primaryResistance: 0.1,
        primaryLeakage: 8e-6,
        magnetisingInductance: 6e-3,
        kneeFluxLinkage: 5e-3,
        saturatedInductance: 100e-6,
        coreLossResistance: 8e3,
      },
      sections: {
        count: 10,
        ratio: 10,
        leakageInductance: 15e-3,
        resistance: 25,
        ownCapacitance: 8e-12,
        screenCapacitance: 20e-12,
      },
      rectifier: { kind: 'doubler', capacitance: 4.7e-9, diodeVoltage: 14 },
      stack: { joint: 5 },
      output: { tankResistance: 22e3, bleederResistance: 2e9, cableCapacitance: 600e-12 },
      load: { kind: 'resistor', resistance: 6.8e6 },
    },
  ),
  // One winding of 160 V × 22 = 3.5 kV and five stages: 35 kV, and half as much again because so
  // light a load follows the crests of the ringing winding. u = I/(fC) = 1 mA/(30 kHz × 2.2 nF)
  // = 15 V, of which five stages droop by some 95 u, 1.4 kV.
  example(
    'ladder',
    'Invented: a 50 kV supply for a small irradiator, one winding and a multiplier ladder of five stages.',
    {
      version: 1,
      name: 'Small irradiator, ladder',
      notes:
        'An invented scenario: one section of 3.5 kV and a half-wave multiplier ladder of five stages, 1 mA at about 50 kV. While the ladder charges, the flux passes the knee of the core.',
      supply: { voltage: 160, resistance: 0.3, currentLimit: 3, busCapacitance: 220e-6 },
      bridge: {
        frequency: 30e3,
        deadTime: 500e-9,
        switchKind: 'field-effect',
        switchResistance: 0.15,
        outputCapacitance: 150e-12,
      },
      tank: { seriesCapacitance: 10e-6, seriesCapacitorResistance: 0.01 },
      transformer: {
        primaryResistance: 0.2,
        primaryLeakage: 12e-6,
        magnetisingInductance: 3e-3,
        kneeFluxLinkage: 3e-3,
        saturatedInductance: 60e-6,
        coreLossResistance: 2.5e3,
      },
      sections: {
        count: 1,
        ratio: 22,
        leakageInductance: 20e-3,
        resistance: 60,
        ownCapacitance: 10e-12,
        screenCapacitance: 18e-12,
      },
      rectifier: {
        kind: 'ladder',
        stages: 5,
        capacitance: 2.2e-9,
        capacitorResistance: 1,
        diodeVoltage: 16,
        diodeResistance: 40,
        diodeCapacitance: 1e-12,
      },
      output: { tankResistance: 47e3, bleederResistance: 2e9, cableCapacitance: 200e-12 },
      load: { kind: 'resistor', resistance: 50e6 },
    },
  ),
  // Six bridges at 12 V × 12 = 144 V each: 0.9 kV by the ratio, and more than twice that where
  // nothing but a probe damps the ringing of the windings.
  example(
    'bench-12-volts',
    'Invented: an unknown transformer tried at 12 V, from a bench supply that stops at 1 A and cannot absorb.',
    {
      version: 1,
      name: 'Unknown transformer, 12 V bench',
      notes:
        'An invented scenario: a salvaged transformer with six sections, first tried at 12 V with only the probe as load. Its core is taken as linear until it has been measured.',
      supply: {
        voltage: 12,
        resistance: 0.05,
        currentLimit: 1,
        absorbs: false,
        busCapacitance: 100e-6,
        busCapacitorResistance: 0.05,
      },
      bridge: {
        frequency: 22e3,
        deadTime: 400e-9,
        switchKind: 'field-effect',
        switchResistance: 0.03,
        outputCapacitance: 400e-12,
      },
      tank: { seriesCapacitance: 10e-6, seriesCapacitorResistance: 0.01 },
      transformer: {
        primaryResistance: 0.15,
        primaryLeakage: 5e-6,
        magnetisingInductance: 1.8e-3,
        kneeFluxLinkage: null,
        coreLossResistance: 800,
      },
      sections: {
        count: 6,
        ratio: 12,
        leakageInductance: 8e-3,
        resistance: 40,
        ownCapacitance: 20e-12,
        screenCapacitance: 35e-12,
      },
      rectifier: {
        kind: 'bridge',
        capacitance: 1e-9,
        diodeVoltage: 1.4,
        diodeResistance: 5,
        diodeCapacitance: 4e-12,
      },
      output: {
        tankResistance: 0,
        bleederResistance: null,
        probeResistance: 100e6,
        probeCapacitance: 5e-12,
        cableCapacitance: 100e-12,
      },
      load: { kind: 'open' },
    },
  ),
];
