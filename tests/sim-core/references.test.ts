/**
 * Whole plants against a general-purpose integrator (scipy's LSODA on hand-derived state
 * equations, tests/reference): another method, another language, another author's equations.
 */
import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { checkDesign } from '../../sim-core/index.ts';
import { Run } from '../../sim-core/solve.ts';
import { type Accuracy, STANDARD_ACCURACY } from '../../sim-core/transient/transient.ts';

interface Envelope {
  readonly mean: readonly number[];
  readonly min: readonly number[];
  readonly max: readonly number[];
}

const WAVEFORMS = [
  'outputVoltage',
  'primaryCurrent',
  'windingCurrent',
  'windingVoltage',
  'fluxLinkage',
  'busVoltage',
] as const;

type Window = { readonly start: number; readonly step: number; readonly count: number } & {
  readonly [W in (typeof WAVEFORMS)[number]]: readonly number[];
};

interface Reference {
  readonly title: string;
  readonly section: number;
  readonly design: Record<string, unknown>;
  readonly perPeriod: { readonly outputVoltage: Envelope; readonly primaryCurrent: Envelope };
  readonly windows: readonly Window[];
}

const directory = new URL('../reference/', import.meta.url);
const cases = readdirSync(directory)
  .filter((file) => file.endsWith('.json'))
  .map((file) => ({
    name: file.replace('.json', ''),
    reference: JSON.parse(readFileSync(new URL(file, directory), 'utf8')) as Reference,
  }))
  .filter(({ reference }) => reference.windows !== undefined);

const largest = (values: readonly number[]): number => Math.max(...values.map(Math.abs));

/** Run a reference's design and return every error as a share. */
function compare(reference: Reference, accuracy: Accuracy) {
  // A reference's title may be longer than a design's name.
  const checked = checkDesign({ ...reference.design, name: 'reference' });
  if (!checked.ok) throw new Error(checked.problem.message);
  const opened = Run.open(checked.value, undefined, accuracy);
  if (!opened.ok) throw new Error(opened.problem.message);
  const run = opened.value;
  const place = (name: string): number => run.signals.findIndex((s) => s.name === name);
  const signals = [
    'output voltage',
    'primary current',
    `section ${reference.section} winding current`,
    `section ${reference.section} winding voltage`,
    'flux linkage',
    'bus voltage',
  ].map(place);
  const { outputVoltage: output, primaryCurrent: primary } = reference.perPeriod;
  const largestOutput = largest([...output.min, ...output.max]);
  const largestPrimary = largest([...primary.min, ...primary.max]);
  const periods = output.mean.length;
  let outputError = 0;
  let peakError = 0;
  const sums = reference.windows.map(() => WAVEFORMS.map(() => ({ error: 0, size: 0 })));
  const next = reference.windows.map(() => 0);
  let before = signals.map((k) => run.value(k));
  let beforeTime = 0;
  let done = 0;
  for (const ended of run.advance()) {
    const now = signals.map((k) => run.value(k));
    reference.windows.forEach((window, w) => {
      for (; next[w] < window.count; next[w]++) {
        const time = window.start + next[w] * window.step;
        if (time > run.time) break;
        const share = (time - beforeTime) / (run.time - beforeTime);
        WAVEFORMS.forEach((name, k) => {
          const expected = window[name][next[w]];
          const value = before[k] + share * (now[k] - before[k]);
          sums[w][k].error += (value - expected) ** 2;
          sums[w][k].size += expected ** 2;
        });
      }
    });
    before = now;
    beforeTime = run.time;
    if (ended) {
      const v = run.extent('output voltage');
      const i = run.extent('primary current');
      if (!v || !i) throw new Error('a period ended without extents');
      outputError = Math.max(
        outputError,
        Math.abs(v.mean - output.mean[done]) / largestOutput,
        Math.abs(v.max - output.max[done]) / largestOutput,
        Math.abs(v.min - output.min[done]) / largestOutput,
      );
      const peak = Math.max(Math.abs(i.min), Math.abs(i.max));
      const expected = Math.max(Math.abs(primary.min[done]), Math.abs(primary.max[done]));
      peakError = Math.max(peakError, Math.abs(peak - expected) / largestPrimary);
      done++;
      if (done === periods) break;
    }
  }
  const waveforms = Object.fromEntries(
    WAVEFORMS.map((name, k) => [
      name,
      Math.max(...sums.map((window) => Math.sqrt(window[k].error / window[k].size))),
    ]),
  ) as Record<(typeof WAVEFORMS)[number], number>;
  return {
    failed: run.failed,
    complete: done === periods && next.every((n, w) => n === reference.windows[w].count),
    outputError,
    peakError,
    waveforms,
    audit: run.audit() ?? 0,
  };
}

/**
 * Windings that ring almost undamped for the whole run: after some thousand rings a phase error
 * of a few thousandths of a turn is left, which the limit for waveforms sees and no reading does.
 * They are held to the limit with a tolerance thirty times tighter.
 */
const RINGING = new Set(['alternating-output']);

describe.each(cases)('$name', ({ name, reference }) => {
  const result = compare(reference, STANDARD_ACCURACY);

  test('runs to the end', () => {
    expect(result.failed).toBeNull();
    expect(result.complete).toBe(true);
  });

  test('output voltage and primary peak agree within 0.3 %', () => {
    expect(result.outputError).toBeLessThan(0.003);
    expect(result.peakError).toBeLessThan(0.003);
  });

  test('waveforms agree within 0.5 % rms of their own rms', () => {
    const { waveforms } = RINGING.has(name)
      ? compare(reference, { ...STANDARD_ACCURACY, tolerance: STANDARD_ACCURACY.tolerance / 30 })
      : result;
    expect(waveforms.outputVoltage).toBeLessThan(0.005);
    expect(waveforms.primaryCurrent).toBeLessThan(0.005);
    expect(waveforms.windingCurrent).toBeLessThan(0.005);
    expect(waveforms.windingVoltage).toBeLessThan(0.005);
    expect(waveforms.fluxLinkage).toBeLessThan(0.005);
    expect(waveforms.busVoltage).toBeLessThan(0.005);
  });

  test('the energy audit closes within 0.2 %', () => {
    expect(Math.abs(result.audit)).toBeLessThan(0.002);
  });
});

test('at least six whole plants are compared', () => {
  expect(cases.length).toBeGreaterThanOrEqual(6);
});
