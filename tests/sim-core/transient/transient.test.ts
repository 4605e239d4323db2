import { describe, expect, test } from 'vitest';
import { EARTH, NetworkBuilder } from '../../../sim-core/network/network.ts';
import { STANDARD_ACCURACY, Transient } from '../../../sim-core/transient/transient.ts';
import {
  bridgeGates,
  constantVoltage,
  fullBridge,
  noGates,
  runUntil,
  squareGates,
} from './circuits.ts';
import { advance, exponential, type Pair, seriesCircuit, solvePair, times } from './matrix.ts';

// Series R-L-C of the textbook kind; its figures from memory (any circuit theory text), recomputed:
// α = R/2L = 5e4/s, damped frequency √(1/LC − α²)/2π = 503.229 kHz, overshoot e^(−απ/ω) = 95.15 %.
const [R, L, C] = [10, 100e-6, 1e-9];
const DAMPED = 503.229e3;

function seriesStep(period: number, accuracy = STANDARD_ACCURACY): Transient {
  const builder = new NetworkBuilder();
  constantVoltage(builder, 'source', 'a', EARTH, 1, R);
  builder.inductor('l', 'tank', 'a', 'b', L, 0);
  builder.capacitor('c', 'tank', 'b', EARTH, C);
  return new Transient(builder.finish(), noGates(period), accuracy);
}

describe('a series R-L-C circuit', () => {
  // The error that counts is one of phase, and it adds up: each of the some hundred steps of a
  // cycle may err by the tolerance. So the tolerance of a long ringing is below the standard one.
  const RINGING = { ...STANDARD_ACCURACY, tolerance: 3e-6 };
  test.each([
    { accuracy: RINGING, cycles: 8, allowed: 1e-3 },
    { accuracy: STANDARD_ACCURACY, cycles: 1, allowed: 1e-3 },
    { accuracy: STANDARD_ACCURACY, cycles: 8, allowed: 5e-3 },
  ])(
    'rings down for $cycles cycles within $allowed of its peak at a tolerance of $accuracy.tolerance',
    ({ accuracy, cycles, allowed }) => {
      const { a, b } = seriesCircuit(R, L, C);
      for (const period of [1 / DAMPED, 10e-6, 50e-6]) {
        const transient = seriesStep(period, accuracy);
        const { state } = transient.stepper;
        let worst = 0;
        let peak = 0;
        runUntil(transient, cycles / DAMPED, (time) => {
          const [voltage, current] = advance(a, b, [0, 0], time);
          worst = Math.max(
            worst,
            Math.abs(state[0] - voltage) / 1.9515,
            Math.abs(state[1] - current) / Math.sqrt(C / L),
          );
          peak = Math.max(peak, state[0]);
        });
        expect(worst).toBeLessThanOrEqual(allowed);
        // Read at the ends of steps, some hundred a cycle: at most 1 − cos(π/100) is missed.
        expect(Math.abs(peak - 1 - 0.9515)).toBeLessThanOrEqual(2e-3);
      }
    },
  );

  test('crosses its final value at the damped frequency', () => {
    const transient = seriesStep(1 / DAMPED);
    const { state } = transient.stepper;
    const crossings: number[] = [];
    let before = -1;
    let timeBefore = 0;
    runUntil(transient, 6 / DAMPED, (time) => {
      const now = state[0] - 1;
      if (before < 0 && now >= 0) {
        crossings.push(timeBefore + ((time - timeBefore) * before) / (before - now));
      }
      before = now;
      timeBefore = time;
    });
    const [first] = crossings;
    const last = crossings.at(-1) ?? first;
    const frequency = (crossings.length - 1) / (last - first);
    expect(Math.abs(frequency / DAMPED - 1)).toBeLessThanOrEqual(1e-3);
  });

  test.each([120e3, 250e3, 400e3])(
    'driven by a square wave of %d Hz settles to the exact periodic state, to a thousandth of its peak',
    (frequency) => {
      const period = 1 / frequency;
      const c = 10e-9;
      const builder = new NetworkBuilder();
      fullBridge(builder, 'a', EARTH, 1, 1e-3);
      builder.inductor('l', 'tank', 'a', 'b', L, R - 3e-3);
      builder.capacitor('c', 'tank', 'b', EARTH, c);
      const transient = new Transient(builder.finish(), squareGates(period));
      // Exact: the half periods mirror each other, x(T/2) = −x(0).
      const { a, b } = seriesCircuit(R, L, c);
      const e = exponential(a, period / 2);
      const settledTo = solvePair(a, [-b[0], -b[1]]);
      const [p, q] = times(e, settledTo);
      const start = solvePair(
        [
          [1 + e[0][0], e[0][1]],
          [e[1][0], 1 + e[1][1]],
        ],
        [p - settledTo[0], q - settledTo[1]],
      );
      const exact = (phase: number): Pair => {
        const half = period / 2;
        if (phase < half) return advance(a, b, start, phase);
        const [voltage, current] = advance(a, b, start, phase - half);
        return [-voltage, -current];
      };
      // What is left of the start decays with α = 5e4/s: to 5e-6 after 0.25 ms.
      const settled = Math.ceil(0.25e-3 / period) * period;
      runUntil(transient, settled);
      const { state } = transient.stepper;
      const worst = [0, 0];
      const peak = [0, 0];
      runUntil(transient, settled + 2 * period, (time) => {
        exact((time - settled) % period).forEach((value, i) => {
          worst[i] = Math.max(worst[i], Math.abs(state[i] - value));
          peak[i] = Math.max(peak[i], Math.abs(value));
        });
      });
      expect(worst[0] / peak[0]).toBeLessThanOrEqual(1e-3);
      expect(worst[1] / peak[1]).toBeLessThanOrEqual(1e-3);
    },
  );
});

test('a capacitor charged through a resistor stands at 0.632121 of the source after τ', () => {
  const tau = 1e-4;
  const builder = new NetworkBuilder();
  constantVoltage(builder, 'source', 'a', EARTH, 1, 1e3);
  builder.capacitor('c', 'output', 'a', EARTH, tau / 1e3);
  // Any period that ends on τ will do.
  const transient = new Transient(builder.finish(), noGates(tau));
  runUntil(transient, tau);
  // 1 − 1/e (any textbook).
  expect(Math.abs(transient.stepper.state[0] - 0.632121)).toBeLessThanOrEqual(1e-3);
});

describe('gating edges', () => {
  test('are each the end of an accepted step, in every period', () => {
    const period = 41.7e-6;
    const pattern = bridgeGates(period, 17.31e-6, 11.03e-6);
    const builder = new NetworkBuilder();
    fullBridge(builder, 'a', 'b', 100, 0.1);
    builder.inductor('l', 'tank', 'a', 'c', 50e-6, 1);
    builder.capacitor('c', 'tank', 'c', 'b', 1e-6);
    builder.resistor('to earth', 'output', 'b', EARTH, 1e6);
    const transient = new Transient(builder.finish(), pattern);
    const times: number[] = [0];
    runUntil(transient, 20 * period, (time) => times.push(time));
    for (let k = 0; k < 20; k++) {
      for (const edge of pattern.start) {
        const wanted = k * period + edge;
        const nearest = Math.min(...times.map((time) => Math.abs(time - wanted)));
        expect(nearest).toBeLessThanOrEqual(1e-12 * period + 1e-15 * wanted);
      }
    }
    expect(transient.periods).toBeGreaterThanOrEqual(19);
  });
});
