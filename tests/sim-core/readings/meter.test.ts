import { describe, expect, test } from 'vitest';
import { EARTH, NetworkBuilder } from '../../../sim-core/network/network.ts';
import { voltageBetween } from '../../../sim-core/network/probe.ts';
import { PeriodMeter, Probes } from '../../../sim-core/readings/meter.ts';
import { Transient } from '../../../sim-core/transient/transient.ts';
import {
  constantVoltage,
  fullBridge,
  noGates,
  runUntil,
  squareGates,
} from '../transient/circuits.ts';

const PERIOD = 20e-6;
const V = 3;

/** A square wave across an inductor, whose current is a triangle from −V·T/4L to V·T/4L. */
function triangle(): { transient: Transient; meter: PeriodMeter; peak: number } {
  const inductance = 1e-3;
  const builder = new NetworkBuilder();
  fullBridge(builder, 'a', EARTH, V, 1e-6);
  builder.inductor('l', 'tank', 'a', EARTH, inductance, 0);
  const transient = new Transient(builder.finish(), squareGates(PERIOD));
  const peak = (V * PERIOD) / (4 * inductance);
  transient.stepper.state[0] = -peak;
  transient.prime();
  const meter = new PeriodMeter(transient.stepper, [
    [{ of: 'inductor', name: 'l', weight: 1 }],
    [{ of: 'inductor', name: 'l', weight: -2 }],
    voltageBetween('a', EARTH),
  ]);
  return { transient, meter, peak };
}

function meterPeriods(transient: Transient, meter: PeriodMeter, periods: number): void {
  const { period } = transient.pattern;
  const first = Math.round(transient.time / period);
  for (let k = 1; k <= periods; k++) {
    runUntil(transient, (first + k) * period, (_, h) => meter.step(h));
    meter.close();
  }
}

describe('a period meter', () => {
  test('is exact for straight lines: a triangle has no mean and a mean square of peak²/3', () => {
    const { transient, meter, peak } = triangle();
    meterPeriods(transient, meter, 3);
    expect(meter.periods).toBe(3);
    expect(Math.abs(meter.mean[0])).toBeLessThanOrEqual(1e-6 * peak);
    expect(Math.abs(meter.meanSquare[0] / (peak ** 2 / 3) - 1)).toBeLessThanOrEqual(1e-6);
    expect(Math.abs(meter.min[0] / -peak - 1)).toBeLessThanOrEqual(1e-6);
    expect(Math.abs(meter.max[0] / peak - 1)).toBeLessThanOrEqual(1e-6);
    expect(Math.abs(meter.meanProduct / ((-2 * peak ** 2) / 3) - 1)).toBeLessThanOrEqual(1e-6);
  });

  test('takes a jump for a line as long as the step after it, no longer', () => {
    const { transient, meter } = triangle();
    meterPeriods(transient, meter, 2);
    // Two jumps a period over 2 V, each followed by a step of period/4096: each loses
    // V² − V²/3 for that long.
    const lost = 1 - meter.meanSquare[2] / V ** 2;
    expect(lost).toBeGreaterThanOrEqual(0);
    expect(lost).toBeLessThanOrEqual((2 * (2 / 3)) / 4096 + 1e-6);
    expect(Math.abs(meter.max[2] / V - 1)).toBeLessThanOrEqual(1e-5);
    expect(Math.abs(meter.min[2] / -V - 1)).toBeLessThanOrEqual(1e-5);
  });

  test('reads the mean, rms and extremes of a sine, and the power of a phase angle', () => {
    // Any textbook: rms = peak/√2, mean product of two sines = half the peaks times cos φ.
    const [resistance, inductance] = [10, 50e-6];
    const builder = new NetworkBuilder();
    builder.sine('a', EARTH, {
      name: 'source',
      part: 'supply',
      amplitude: V,
      frequency: 1 / PERIOD,
      phase: 0,
      resistance: 1e-6,
    });
    builder.inductor('l', 'tank', 'a', EARTH, inductance, resistance);
    const transient = new Transient(builder.finish(), noGates(PERIOD));
    const meter = new PeriodMeter(transient.stepper, [
      voltageBetween('a', EARTH),
      [{ of: 'inductor', name: 'l', weight: 1 }],
    ]);
    meterPeriods(transient, meter, 6);
    const reactance = (2 * Math.PI * inductance) / PERIOD;
    const peak = V / Math.hypot(resistance, reactance);
    const power = (V * peak * resistance) / Math.hypot(resistance, reactance) / 2;
    expect(Math.abs(meter.meanSquare[0] / (V ** 2 / 2) - 1)).toBeLessThanOrEqual(2e-3);
    expect(Math.abs(meter.meanSquare[1] / (peak ** 2 / 2) - 1)).toBeLessThanOrEqual(2e-3);
    expect(Math.abs(meter.meanProduct / power - 1)).toBeLessThanOrEqual(2e-3);
    expect(Math.abs(meter.mean[1])).toBeLessThanOrEqual(1e-3 * peak);
    expect(Math.abs(meter.max[1] / peak - 1)).toBeLessThanOrEqual(2e-3);
  });

  test('forgets the period before: a settled value after a swing has no swing left', () => {
    const builder = new NetworkBuilder();
    constantVoltage(builder, 'source', 'a', EARTH, V, 10);
    builder.capacitor('c', 'output', 'a', EARTH, PERIOD / 400);
    const transient = new Transient(builder.finish(), noGates(PERIOD));
    const meter = new PeriodMeter(transient.stepper, [voltageBetween('a', EARTH)]);
    meterPeriods(transient, meter, 1);
    expect(meter.max[0] - meter.min[0]).toBeGreaterThan(0.9 * V);
    meterPeriods(transient, meter, 1);
    expect(meter.max[0] - meter.min[0]).toBeLessThanOrEqual(1e-6 * V);
    expect(Math.abs(meter.mean[0] / V - 1)).toBeLessThanOrEqual(1e-6);
    expect(meter.periods).toBe(2);
  });
});

describe('probes', () => {
  test('add up node voltages, inductor and device currents with their weights', () => {
    const builder = new NetworkBuilder();
    constantVoltage(builder, 'source', 'a', EARTH, V, 1);
    builder.resistor('r', 'load', 'a', 'b', 1);
    builder.inductor('l', 'tank', 'b', EARTH, 1e-6, 1);
    const transient = new Transient(builder.finish(), noGates(PERIOD));
    runUntil(transient, 3 * PERIOD);
    const probes = new Probes(transient.stepper, [
      [
        { of: 'node', node: 'a', weight: 2 },
        { of: 'node', node: 'b', weight: 1 },
      ],
      [{ of: 'inductor', name: 'l', weight: 3 }],
      [{ of: 'characteristic', name: 'source', weight: 1 }],
    ]);
    probes.read();
    // Three equal resistances in a row: 2/3 and 1/3 of the source, V/3 of current, out of it.
    const expected = [(2 * 2 * V) / 3 + V / 3, V, -V / 3];
    expected.forEach((value, k) => {
      expect(Math.abs(probes.values[k] - value)).toBeLessThanOrEqual(1e-6 * V);
    });
  });

  test('know no element that the network does not have', () => {
    const builder = new NetworkBuilder();
    builder.resistor('r', 'load', 'a', EARTH, 1);
    const { stepper } = new Transient(builder.finish(), noGates(PERIOD));
    expect(() => new Probes(stepper, [[{ of: 'core', name: 'none', weight: 1 }]])).toThrow('none');
  });
});
