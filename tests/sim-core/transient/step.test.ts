import { describe, expect, test } from 'vitest';
import { EARTH, NetworkBuilder } from '../../../sim-core/network/network.ts';
import { Stepper } from '../../../sim-core/transient/step.ts';
import { constantVoltage, diode } from './circuits.ts';
import { advance, exponential, type Pair, seriesCircuit, times } from './matrix.ts';

const [R, L, C] = [10, 100e-6, 1e-9];
const { a, b } = seriesCircuit(R, L, C);
const FREQUENCY = 300e3;

/** Series R-L-C on 1 V, constant or a sine. */
function series(kind: 'constant' | 'sine'): Stepper {
  const builder = new NetworkBuilder();
  if (kind === 'constant') constantVoltage(builder, 'source', 'a', EARTH, 1, R / 2);
  else {
    builder.sine('a', EARTH, {
      name: 'source',
      part: 'supply',
      amplitude: 1,
      frequency: FREQUENCY,
      phase: 0.4,
      resistance: R / 2,
    });
  }
  builder.inductor('l', 'tank', 'a', 'b', L, R / 2);
  builder.capacitor('c', 'tank', 'b', EARTH, C);
  return new Stepper(builder.finish());
}

/** Forced by sin(ωt + φ) from rest: with v = p sin + q cos, both substituted into x' = Ax + b·e. */
function sineAnswer(t: number): Pair {
  const omega = 2 * Math.PI * FREQUENCY;
  // (jω − A)X = b: the inductor's row gives V, I = jωC·V (phasors, from memory).
  const real = 1 - omega ** 2 * L * C;
  const imaginary = omega * R * C;
  const size = real ** 2 + imaginary ** 2;
  const forced = (angle: number): Pair => {
    const voltage = (real * Math.sin(angle) - imaginary * Math.cos(angle)) / size;
    const slope = (omega * (real * Math.cos(angle) + imaginary * Math.sin(angle))) / size;
    return [voltage, C * slope];
  };
  const atStart = forced(0.4);
  const free = times(exponential(a, t), [-atStart[0], -atStart[1]]);
  const now = forced(omega * t + 0.4);
  return [now[0] + free[0], now[1] + free[1]];
}

function errorAt(kind: 'constant' | 'sine', steps: number): number {
  const end = 3e-6;
  const stepper = series(kind);
  const step = stepper.length(end / steps);
  for (let k = 0; k < steps; k++) {
    expect(stepper.attempt(step, k * step.h)).toBe(true);
    stepper.accept();
  }
  const exact = kind === 'constant' ? advance(a, b, [0, 0], end) : sineAnswer(end);
  return Math.hypot(stepper.state[0] - exact[0], (stepper.state[1] - exact[1]) * Math.sqrt(L / C));
}

describe('equal steps', () => {
  // Order 2 (Alexander, SIAM J. Numer. Anal. 14 (1977) 1006).
  test.each(['constant', 'sine'] as const)(
    'with a %s source err as the square of the step',
    (kind) => {
      const errors = [100, 200, 400, 800, 1600].map((steps) => errorAt(kind, steps));
      for (let k = 1; k < errors.length; k++) {
        expect(Math.abs(Math.log2(errors[k - 1] / errors[k]) - 2)).toBeLessThanOrEqual(0.2);
      }
    },
  );

  test('have an error estimate that becomes the true local error as they shrink', () => {
    const state = (h: number, which: 0 | 1): number => {
      const stepper = series('constant');
      const step = stepper.length(h);
      // The first step, from a state of no special kind, only makes the slope known.
      stepper.state.set([0.3, 0.7e-3]);
      stepper.attempt(step, 0);
      stepper.accept();
      const from: Pair = [stepper.state[0], stepper.state[1]];
      stepper.scale.set(which === 0 ? [1, 1e30] : [1e30, 1]);
      stepper.attempt(step, h);
      const estimate = stepper.error;
      stepper.accept();
      return estimate / Math.abs(stepper.state[which] - advance(a, b, from, h)[which]);
    };
    for (const which of [0, 1] as const) {
      const ratios = [20e-9, 10e-9, 5e-9].map((h) => state(h, which));
      expect(Math.abs(ratios[2] - 1)).toBeLessThanOrEqual(0.1);
      // It converges: halving the step halves what is missing.
      expect(Math.abs(ratios[2] - 1)).toBeLessThan(0.7 * Math.abs(ratios[0] - 1));
    }
  });

  test('damp a mode far faster than the step at once, without ringing (L-stability)', () => {
    const builder = new NetworkBuilder();
    constantVoltage(builder, 'source', 'a', EARTH, 1, 1);
    builder.capacitor('c', 'output', 'a', EARTH, 1e-15);
    const stepper = new Stepper(builder.finish());
    const step = stepper.length(1e-6);
    stepper.state[0] = -1e6;
    stepper.attempt(step, 0);
    stepper.accept();
    // R(∞) = 0: of a million volts 1e9 time constants leave (1/γ²z)·…, some millivolts.
    expect(Math.abs(stepper.state[0] - 1)).toBeLessThanOrEqual(1e-2);
    stepper.attempt(step, 1e-6);
    stepper.accept();
    expect(Math.abs(stepper.state[0] - 1)).toBeLessThanOrEqual(1e-9);
  });
});

describe('an attempt', () => {
  test('that is rejected leaves no trace', () => {
    const build = (): Stepper => {
      const builder = new NetworkBuilder();
      constantVoltage(builder, 'source', 'a', EARTH, 100, 1);
      diode(builder, 'd', 'a', 'b', { resistance: 0.1, forward: 0.7, leakage: 1e-9 });
      builder.capacitor('c', 'output', 'b', EARTH, 1e-6, 0.01);
      builder.resistor('r', 'load', 'b', EARTH, 100);
      return new Stepper(builder.finish());
    };
    const plain = build();
    const tried = build();
    for (let k = 0; k < 50; k++) {
      tried.attempt(tried.length(1e-5), k * 1e-7);
      tried.reject();
      expect([...tried.x]).toEqual([...plain.x]);
      for (const stepper of [plain, tried]) {
        stepper.attempt(stepper.length(1e-7), k * 1e-7);
        stepper.accept();
      }
    }
    expect([...tried.state]).toEqual([...plain.state]);
    expect([...tried.x]).toEqual([...plain.x]);
    expect(tried.delivered).toBe(plain.delivered);
    expect(tried.commutations).toBe(plain.commutations);
  });

  test('says which node nothing holds', () => {
    const builder = new NetworkBuilder();
    constantVoltage(builder, 'source', 'a', EARTH, 1, 1);
    builder.resistor('r', 'load', 'left island', 'right island', 10);
    const stepper = new Stepper(builder.finish());
    expect(stepper.attempt(stepper.length(1e-6), 0)).toBe(false);
    expect(stepper.failure?.kind).toBe('singular');
    expect(['left island', 'right island']).toContain(stepper.failure?.name);
  });

  test('says which node only a blocking part without leakage touches', () => {
    const builder = new NetworkBuilder();
    constantVoltage(builder, 'source', 'a', EARTH, -1, 1);
    diode(builder, 'd', 'a', 'dangling');
    const stepper = new Stepper(builder.finish());
    expect(stepper.attempt(stepper.length(1e-6), 0)).toBe(false);
    expect(stepper.failure).toEqual({ kind: 'singular', name: 'dangling' });
  });

  test.each([100e9, 5e9])(
    'says that 1 µΩ and %d Ω at one joint lie further apart than numbers reach',
    (huge) => {
      const builder = new NetworkBuilder();
      builder.resistor('tiny', 'tank', 'a', 'b', 1e-6);
      builder.resistor('huge', 'load', 'b', EARTH, huge);
      const stepper = new Stepper(builder.finish());
      expect(stepper.attempt(stepper.length(1e-6), 0)).toBe(false);
      expect(stepper.failure?.kind).toBe('singular');
      expect(['a', 'b']).toContain(stepper.failure?.name);
    },
  );

  test('says whose state left the range of numbers', () => {
    const builder = new NetworkBuilder();
    builder.capacitor('c', 'output', 'a', EARTH, 1e-9, 0, 1e308);
    builder.inductor('l', 'tank', 'a', EARTH, 1e-12, 0);
    const stepper = new Stepper(builder.finish());
    stepper.state[1] = 1.7e308;
    const ok = stepper.attempt(stepper.length(1), 0);
    expect(ok).toBe(false);
    expect(stepper.failure?.kind).toBe('not-finite');
    expect(['c', 'l', 'a']).toContain(stepper.failure?.name);
  });
});
