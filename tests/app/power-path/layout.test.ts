import fc from 'fast-check';
import { expect, test } from 'vitest';
import {
  equalShare,
  legible,
  nearestJoint,
  planPath,
  runsOf,
  staircase,
} from '../../../app/power-path/layout.ts';

const COUNTS = [1, 8, 24, 48];
const WIDTHS = [328, 360, 704, 899, 900, 992, 1024, 1248, 1311, 1312, 1392, 1712];

const drawn = (width: number, joints: readonly number[], earthed: number | null) => {
  const plan = planPath(width, joints.length - 1);
  const box = { left: plan.stack, right: plan.stackEnd, top: 76, bottom: 314 };
  return { plan, box, stairs: staircase(joints, earthed, box, 7) };
};

test('the stations of the path follow each other and stay on the page, at every width', () => {
  for (const width of WIDTHS) {
    for (const count of COUNTS) {
      const plan = planPath(width, count);
      const { supply, bridge, tank, transformer, core, stack, stackEnd, output, load } = plan;
      expect([supply, bridge, tank, transformer, core]).toEqual(
        [supply, bridge, tank, transformer, core].toSorted((a, b) => a - b),
      );
      expect(stackEnd).toBeGreaterThan(stack);
      expect(load).toBeGreaterThan(stackEnd + 40);
      expect(output).toBeLessThan(load);
      expect(load).toBeLessThan(width);
      // On a narrow page the stack has a row of its own.
      if (plan.arrangement !== 'narrow') expect(plan.scale).toBeGreaterThan(core);
      expect(bridge - supply).toBeGreaterThanOrEqual(60);
    }
  }
});

test('the steps of 1, 8, 24 and 48 sections join without gap or overlap, inside their room', () => {
  for (const width of WIDTHS) {
    for (const count of COUNTS) {
      for (const earthed of [0, Math.floor(count / 2), count]) {
        const { box, stairs } = drawn(width, equalShare(60e3, count, earthed), earthed);
        expect(stairs.steps).toHaveLength(count);
        stairs.steps.forEach((step, i) => {
          expect(step.x).toBeCloseTo(stairs.joints[i].x, 9);
          expect(step.x + step.width).toBeCloseTo(stairs.joints[i + 1].x, 9);
          expect(step.low).toBe(stairs.joints[i].y);
          expect(step.high).toBe(stairs.joints[i + 1].y);
          expect(step.high).toBeGreaterThanOrEqual(box.top - 1e-9);
          expect(step.low).toBeLessThanOrEqual(box.bottom + 1e-9);
        });
        expect(stairs.joints[count].x).toBeCloseTo(box.right, 9);
        expect(stairs.earth).toBeCloseTo(stairs.joints[earthed].y, 9);
        expect(stairs.folded).toBe(count >= 9 || !legible(stairs.steps[0]));
      }
    }
  }
});

test('the circuits of up to 8 sections can be read from a page of 1024 pixels on', () => {
  for (const width of WIDTHS.filter((w) => w >= 992)) {
    for (let count = 1; count <= 8; count++) {
      const { stairs } = drawn(width, equalShare(60e3, count, 0), 0);
      expect(stairs.folded, `${count} at ${width}`).toBe(false);
    }
  }
});

test('height is potential: heights are in proportion to volts, whatever the joints', () => {
  const volts = fc.double({ min: -200e3, max: 200e3, noNaN: true });
  fc.assert(
    fc.property(fc.array(volts, { minLength: 2, maxLength: 49 }), (joints) => {
      const { box, stairs } = drawn(1392, joints, 0);
      for (const { x, y } of stairs.joints) {
        expect(Number.isFinite(x) && Number.isFinite(y)).toBe(true);
        expect(y).toBeGreaterThanOrEqual(box.top - 1e-6);
        expect(y).toBeLessThanOrEqual(box.bottom + 1e-6);
      }
      if (!stairs.scaled) return;
      const range = Math.max(0, ...joints) - Math.min(0, ...joints);
      joints.forEach((v, j) => {
        const share = (stairs.earth - stairs.joints[j].y) / (box.bottom - box.top);
        expect(share).toBeCloseTo(v / range, 9);
      });
    }),
  );
});

test('with no voltage to draw, steps are equal and no scale pretends otherwise', () => {
  for (const count of COUNTS) {
    const { stairs } = drawn(1392, Array<number>(count + 1).fill(0), 0);
    expect(stairs.scaled).toBe(false);
    expect(stairs.ticks).toEqual([]);
    const heights = stairs.steps.map(({ low, high }) => low - high);
    for (const height of heights) expect(height).toBeCloseTo(238 / count, 9);
  }
});

test('moving the earth moves every potential by the same voltage', () => {
  const before = equalShare(60e3, 8, 0);
  const after = equalShare(60e3, 8, 5);
  before.forEach((v, j) => {
    expect(v - after[j]).toBeCloseTo(37.5e3, 6);
  });
  expect(after[5]).toBe(0);
});

test('the joint nearest to the middle of a tread is that joint', () => {
  const { stairs } = drawn(1392, equalShare(60e3, 48, 0), 0);
  stairs.joints.forEach(({ x }, j) => {
    expect(nearestJoint(stairs, x + 2)).toBe(j);
  });
  expect(nearestJoint(stairs, -1000)).toBe(0);
  expect(nearestJoint(stairs, 5000)).toBe(48);
});

test('runs of equal sections cover every section once, in order', () => {
  expect(runsOf(['', '', '{"ratio":9}', '', ''])).toEqual([
    { from: 1, to: 2, differs: false },
    { from: 3, to: 3, differs: true },
    { from: 4, to: 5, differs: false },
  ]);
  fc.assert(
    fc.property(
      fc.array(fc.constantFrom('', 'a', 'b'), { minLength: 1, maxLength: 48 }),
      (marks) => {
        const runs = runsOf(marks);
        expect(runs[0].from).toBe(1);
        expect(runs.at(-1)?.to).toBe(marks.length);
        runs.forEach((run, i) => {
          if (i > 0) expect(run.from).toBe(runs[i - 1].to + 1);
          for (let k = run.from; k <= run.to; k++) expect(marks[k - 1]).toBe(marks[run.from - 1]);
        });
      },
    ),
  );
});
