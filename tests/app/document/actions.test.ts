import { describe, expect, test } from 'vitest';
import { clearOverride, setOverride, setTitle, setValue } from '../../../app/document/actions.ts';
import { defaultDesign } from '../../../sim-core/design/check.ts';
import type { Outcome } from '../../../sim-core/design/problem.ts';
import type { Design } from '../../../sim-core/design/schema.ts';

const taken = (outcome: Outcome<Design>) => {
  if (!outcome.ok) throw new Error(outcome.problem.message);
  return outcome.value;
};
const start = defaultDesign();

describe('an edit', () => {
  test('changes its own value and leaves the design it came from', () => {
    const next = taken(setValue(start, 'bridge', 'frequency', 30e3));
    expect(next).toEqual({ ...start, bridge: { ...start.bridge, frequency: 30e3 } });
    expect(start).toEqual(defaultDesign());
  });

  test('that would break a rule is refused at the value that breaks it', () => {
    expect(setValue(start, 'bridge', 'frequency', 900e3)).toMatchObject({
      ok: false,
      problem: { place: 'bridge.deadTime' },
    });
    expect(setValue(start, 'bridge', 'frequency', Number.NaN)).toMatchObject({
      ok: false,
      problem: { place: 'bridge.frequency' },
    });
  });

  test('of a value that does not exist is refused', () => {
    for (const name of ['speed', '__proto__', 'constructor']) {
      const outcome = setValue(start, 'bridge', name, 1);
      // A computed "__proto__" key is an own one and must be refused like any stranger.
      expect(outcome.ok).toBe(false);
    }
  });

  test('of the name or notes changes only those', () => {
    expect(taken(setTitle(start, 'name', 'Rig 2'))).toEqual({ ...start, name: 'Rig 2' });
    expect(setTitle(start, 'name', 'x'.repeat(81)).ok).toBe(false);
  });
});

describe('an override', () => {
  test('joins the others of its section, and undefined takes it back', () => {
    let design = taken(setOverride(start, 3, 'ratio', 11));
    design = taken(setOverride(design, 1, 'resistance', 15));
    design = taken(setOverride(design, 3, 'resistance', 16));
    expect(design.overrides).toEqual([
      { section: 1, resistance: 15 },
      { section: 3, ratio: 11, resistance: 16 },
    ]);
    design = taken(setOverride(design, 3, 'ratio', undefined));
    expect(design.overrides[1]).toEqual({ section: 3, resistance: 16 });
    design = taken(setOverride(design, 3, 'resistance', undefined));
    expect(design.overrides).toEqual([{ section: 1, resistance: 15 }]);
    expect(taken(clearOverride(design, 1))).toEqual(start);
  });

  test('goes with its section when there are fewer, and the earthed joint does not', () => {
    let design = taken(setOverride(start, 7, 'ratio', 11));
    design = taken(setOverride(design, 2, 'ratio', 9));
    expect(taken(setValue(design, 'sections', 'count', 6)).overrides).toEqual([
      { section: 2, ratio: 9 },
    ]);
    const earthed = taken(setValue(design, 'stack', 'joint', 8));
    expect(setValue(earthed, 'sections', 'count', 6)).toMatchObject({
      ok: false,
      problem: { place: 'stack.joint' },
    });
  });

  test('of a section that does not exist is refused', () => {
    expect(setOverride(start, 9, 'ratio', 11).ok).toBe(false);
    expect(setOverride(start, 0, 'ratio', 11).ok).toBe(false);
  });
});
