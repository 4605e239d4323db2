import { describe, expect, test } from 'vitest';
import { EARTH, NetworkBuilder, piecesThrough } from '../../../sim-core/network/network.ts';
import { Transient } from '../../../sim-core/transient/transient.ts';
import { bridgeGates, constantVoltage, fullBridge, runUntil, squareGates } from './circuits.ts';

describe('a saturating magnetising branch alone on a hard square wave', () => {
  const [VOLTAGE, PERIOD] = [560, 50e-6];
  const [LM, LSAT, KNEE] = [2e-3, 40e-6, 4.5e-3];
  // From −∫: the flux linkage starts at its lower end and swings to ±V·T/4 = ±7 mWb, past the knee.
  const SWING = (VOLTAGE * PERIOD) / 4;

  function branch(pattern = squareGates(PERIOD), start = -SWING): Transient {
    const builder = new NetworkBuilder();
    fullBridge(builder, 'a', EARTH, VOLTAGE, 1e-4);
    builder.core('a', EARTH, {
      name: 'core',
      part: 'transformer',
      fluxLinkage: start,
      pieces: piecesThrough(
        [
          [-KNEE, -KNEE / LM],
          [KNEE, KNEE / LM],
        ],
        1 / LSAT,
        1 / LSAT,
      ),
    });
    return new Transient(builder.finish(), pattern);
  }

  test('carries the exact current in straight pieces, to 0.1 % of its peak', () => {
    const transient = branch();
    const { stepper } = transient;
    const exactFlux = (time: number): number => {
      const phase = (time / PERIOD) % 1;
      return SWING * (phase < 0.5 ? 4 * phase - 1 : 3 - 4 * phase);
    };
    const exactCurrent = (flux: number): number => {
      const beyond = Math.max(0, Math.abs(flux) - KNEE);
      return Math.sign(flux) * (Math.min(Math.abs(flux), KNEE) / LM + beyond / LSAT);
    };
    const peak = exactCurrent(SWING);
    // Arithmetic by hand: 4.5/2 + 2.5/0.04 = 64.75 A.
    expect(peak).toBeCloseTo(64.75, 9);
    let worst = 0;
    let greatest = 0;
    // The bridge's resistance of 0.3 mΩ takes 0.004 % of the voltage at the peak.
    runUntil(transient, 2 * PERIOD, (time) => {
      const current = stepper.deviceCurrent[0];
      worst = Math.max(worst, Math.abs(current - exactCurrent(exactFlux(time))));
      greatest = Math.max(greatest, current);
    });
    expect(worst / peak).toBeLessThanOrEqual(1e-3);
    expect(Math.abs(greatest / peak - 1)).toBeLessThanOrEqual(1e-3);
  });

  test('stores ∫ i dλ, from its lower knee to its upper one and beyond', () => {
    const transient = branch();
    const triangle = 0.5 * KNEE * (KNEE / LM);
    const beyond = SWING - KNEE;
    const trapezium = beyond * (KNEE / LM) + (0.5 * beyond ** 2) / LSAT;
    expect(transient.stepper.storedEnergy()).toBeCloseTo(triangle + trapezium, 12);
  });

  test('walks by V·Δt per cycle when one half is longer, 1.4 mT in the example', () => {
    // From memory, recomputed: 50 ns at 560 V, 20 turns on 10 cm²: ΔB = V·Δt/(N·A) = 1.4 mT.
    const excess = 50e-9;
    const half = 4e-6;
    const transient = branch(bridgeGates(PERIOD, half + excess, half), 0);
    const { state } = transient.stepper;
    const walked: number[] = [];
    for (let k = 1; k <= 8; k++) {
      const before = state[0];
      runUntil(transient, k * PERIOD);
      walked.push((state[0] - before) / (20 * 10e-4));
    }
    // 4 µs at 560 V stay below the knee, where the bridge's resistance takes next to nothing.
    for (const step of walked) expect(Math.abs(step / 1.4e-3 - 1)).toBeLessThanOrEqual(1e-3);
  });
});

describe('a winding', () => {
  const [FREQUENCY, AMPLITUDE] = [20e3, 100];
  const [LEAKAGE, WINDING, LOAD] = [5e-3, 3, 400];

  interface Winding {
    readonly ratio: number;
    /** Which end of the winding the branch starts at. */
    readonly reversed?: boolean;
  }

  /** Peaks, and the largest departure from the phasor answer over a settled period. */
  function run({ ratio, reversed = false }: Winding) {
    const builder = new NetworkBuilder();
    builder.sine('p', EARTH, {
      name: 'source',
      part: 'supply',
      amplitude: AMPLITUDE,
      frequency: FREQUENCY,
      phase: 0,
      resistance: 1e-3,
    });
    const [from, to] = reversed ? ['b', 'a'] : ['a', 'b'];
    builder.inductor('winding', 'transformer', from, to, LEAKAGE, WINDING, {
      ratio,
      from: 'p',
      to: EARTH,
    });
    builder.resistor('load', 'load', 'a', 'b', LOAD);
    builder.resistor('earthing', 'output', 'b', EARTH, 1);
    const transient = new Transient(builder.finish(), { ...squareGates(1 / FREQUENCY) });
    const { stepper } = transient;
    const { network, system, x, state } = stepper;
    const at = (node: string): number => x[system.unknown[network.node(node)]];
    // Leakage and resistances in series: i = n·v/(R + jωL), settled after some L/R = 12 µs.
    const reactance = 2 * Math.PI * FREQUENCY * LEAKAGE;
    const total = Math.hypot(WINDING + LOAD, reactance);
    const angle = Math.atan2(reactance, WINDING + LOAD);
    const peak = (Math.abs(ratio) * AMPLITUDE) / total;
    let current = 0;
    let voltage = 0;
    let reflected = 0;
    runUntil(transient, 10 / FREQUENCY);
    runUntil(transient, 12 / FREQUENCY, (time) => {
      const wave = ((ratio * AMPLITUDE) / total) * Math.sin(2 * Math.PI * FREQUENCY * time - angle);
      current = Math.max(current, Math.abs(state[0] - wave) / peak);
      // The branch's current leaves it at `to` and returns through the load.
      const loaded = at(to) - at(from);
      voltage = Math.max(voltage, Math.abs(loaded - wave * LOAD) / (peak * LOAD));
      const source = AMPLITUDE * Math.sin(2 * Math.PI * FREQUENCY * time);
      // From the source: what its own resistance says. It feeds ratio times the winding's current.
      const drawn = (source - at('p')) / 1e-3;
      reflected = Math.max(
        reflected,
        Math.abs(drawn - ratio * state[0]) / (Math.abs(ratio) * peak),
      );
    });
    return { current, voltage, reflected };
  }

  test.each<Winding>([
    { ratio: 13 },
    { ratio: -13 },
    { ratio: 0.25 },
    { ratio: 13, reversed: true },
  ])(
    'of $ratio turns per turn gives the ideal transformer’s voltage, sense and reflected current',
    (winding) => {
      const { current, voltage, reflected } = run(winding);
      expect(current).toBeLessThanOrEqual(1e-3);
      expect(voltage).toBeLessThanOrEqual(1e-3);
      // No error of a step enters: it is Kirchhoff's law, up to the rounding of 1 mΩ.
      expect(reflected).toBeLessThanOrEqual(1e-6);
    },
  );

  test('on a constant voltage takes a current that rises by n·V/L', () => {
    const builder = new NetworkBuilder();
    constantVoltage(builder, 'source', 'p', EARTH, 50, 1e-3);
    builder.inductor('winding', 'transformer', 'a', EARTH, LEAKAGE, 0, {
      ratio: 3,
      from: 'p',
      to: EARTH,
    });
    builder.join('a', EARTH);
    const transient = new Transient(builder.finish(), squareGates(50e-6));
    runUntil(transient, 100e-6);
    const expected = (3 * 50 * 100e-6) / LEAKAGE;
    expect(Math.abs(transient.stepper.state[0] / expected - 1)).toBeLessThanOrEqual(1e-3);
  });
});
