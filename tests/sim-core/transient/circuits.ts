/** Near-ideal parts and drives from which the transient's test circuits are built. */
import { type GatePattern, gatePattern } from '../../../sim-core/network/gates.ts';
import { EARTH, type NetworkBuilder, type Piece } from '../../../sim-core/network/network.ts';
import type { Stepper } from '../../../sim-core/transient/step.ts';
import type { Transient } from '../../../sim-core/transient/transient.ts';

const everywhere = (slope: number, offset: number): Piece[] => [
  { low: -Infinity, high: Infinity, slope, offset },
];

/** A diode: `leakage` (S) below its forward voltage, a resistance (Ω) above. */
export function diode(
  builder: NetworkBuilder,
  name: string,
  from: string,
  to: string,
  { resistance = 1e-3, forward = 1e-6, leakage = 0 } = {},
): void {
  const atCorner = leakage * forward;
  builder.characteristic(from, to, {
    name,
    part: 'rectifier',
    gate: -1,
    source: 0,
    curves: [
      [
        { low: -Infinity, high: forward, slope: leakage, offset: 0 },
        {
          low: forward,
          high: Infinity,
          slope: 1 / resistance,
          offset: atCorner - forward / resistance,
        },
      ],
    ],
  });
}

/** A switch that conducts both ways while its gate is on. */
export function gatedSwitch(
  builder: NetworkBuilder,
  name: string,
  from: string,
  to: string,
  gate: number,
  { resistance = 1e-3, leakage = 0 } = {},
): void {
  builder.characteristic(from, to, {
    name,
    part: 'bridge',
    gate,
    source: 0,
    curves: [everywhere(leakage, 0), everywhere(1 / resistance, 0)],
  });
}

/** A constant voltage (V), its positive end at `from`, behind a resistance (Ω). */
export function constantVoltage(
  builder: NetworkBuilder,
  name: string,
  from: string,
  to: string,
  voltage: number,
  resistance: number,
): void {
  builder.characteristic(from, to, {
    name,
    part: 'supply',
    gate: -1,
    source: voltage,
    curves: [everywhere(1 / resistance, -voltage / resistance)],
  });
}

/** A constant current (A) drawn from `from`, whatever the voltage. */
export function constantCurrent(
  builder: NetworkBuilder,
  name: string,
  from: string,
  to: string,
  current: number,
): void {
  builder.characteristic(from, to, {
    name,
    part: 'load',
    gate: -1,
    source: 0,
    curves: [everywhere(0, current)],
  });
}

/** Gates of `fullBridge`: each drives one diagonal or one leg's switch, see there. */
const [A_HIGH, A_LOW, B_HIGH, B_LOW] = [0, 1, 2, 3];

/** A full bridge of four switches on a constant voltage: ±voltage from `a` to `b`. */
export function fullBridge(
  builder: NetworkBuilder,
  a: string,
  b: string,
  voltage: number,
  resistance = 1e-3,
): void {
  constantVoltage(builder, 'rail', 'positive rail', 'negative rail', voltage, resistance);
  gatedSwitch(builder, 'a high', 'positive rail', a, A_HIGH, { resistance });
  gatedSwitch(builder, 'a low', a, 'negative rail', A_LOW, { resistance });
  gatedSwitch(builder, 'b high', 'positive rail', b, B_HIGH, { resistance });
  gatedSwitch(builder, 'b low', b, 'negative rail', B_LOW, { resistance });
}

/**
 * A bridge that is positive for `positive` seconds from the start of the period and negative for
 * `negative` seconds from its middle; in between both low switches conduct.
 */
export function bridgeGates(period: number, positive: number, negative: number): GatePattern {
  const middle = period / 2;
  return gatePattern(period, [
    { gate: A_HIGH, from: 0, length: positive },
    { gate: A_LOW, from: positive, length: period - positive },
    { gate: B_HIGH, from: middle, length: negative },
    { gate: B_LOW, from: middle + negative, length: period - negative },
  ]);
}

/** The bridge's hard square wave. */
export const squareGates = (period: number): GatePattern =>
  bridgeGates(period, period / 2, period / 2);

/** No gates at all: the period only sets the length of the steps. */
export const noGates = (period: number): GatePattern => gatePattern(period, []);

/** A source of the ladder's and rectifiers' drive, from `a` to earth. */
export function drive(
  builder: NetworkBuilder,
  kind: 'sine' | 'square',
  a: string,
  amplitude: number,
  frequency: number,
): GatePattern {
  if (kind === 'square') {
    fullBridge(builder, a, EARTH, amplitude);
    return squareGates(1 / frequency);
  }
  builder.sine(a, EARTH, {
    name: 'source',
    part: 'supply',
    amplitude,
    frequency,
    phase: 0,
    resistance: 1e-3,
  });
  return noGates(1 / frequency);
}

/**
 * Advance a transient until a time (s), on from where it stands; a failure of the engine fails
 * the test.
 * @param each  called after every accepted step with the time and the length of the step
 */
export function runUntil(
  transient: Transient,
  until: number,
  each?: (time: number, h: number) => void,
): void {
  let before = transient.time;
  while (transient.time < until - 1e-9 * transient.pattern.period) {
    const failure = transient.step();
    if (failure) throw new Error(`${failure.kind} at ${failure.name}`);
    each?.(transient.time, transient.time - before);
    before = transient.time;
  }
}

/** Reads the voltage between two nodes at the end of the last step. */
export function voltmeter(stepper: Stepper, from: string, to = EARTH): () => number {
  const { network, system, x } = stepper;
  const a = system.unknown[network.node(from)];
  const b = system.unknown[network.node(to)];
  return () => x[a] - x[b];
}
