/** The power path: the drawing from supply to load, its bays, and the sheet of the open one. */
import type { Bay } from '../../sim-core/index.ts';
import './path.css';
import { type ReactNode, useCallback, useMemo, useState } from 'react';
import { useShallow } from 'zustand/react/shallow';
import { useDocument } from '../document/store.ts';
import { unitOf } from '../figure.ts';
import { useRun } from '../run/store.ts';
import { BAYS, toggleBay, useOpenBay } from './bays/bays.ts';
import { headOf } from './bays/heads.ts';
import { ValueSheet } from './bays/ValueSheet.tsx';
import { equalShare, LEAST_SPAN, type Plan, planPath, staircase } from './layout.ts';
import { OutputSide } from './OutputSide.tsx';
import { PrimarySide } from './PrimarySide.tsx';
import { Stack, StackGround } from './Stack.tsx';

/** Heights of the drawing: heads above, room for the earth symbol and the figures below. */
const HEADS = 56;
/** The upper rail below that, and the distance of the rails. */
const RAIL = 9;
const RAILS = 100;
/** Where the room under the primary side is free, its rails stand further apart. */
const FREE_RAILS = 176;
const STAIRS_TOP = 76;
const BELOW = 52;
const LEAST_HEIGHT = 366;
const PRIMARY_ROW = HEADS + RAILS + 28;
const STACK_ROW = 330;
/** Where an open sheet begins, in the room under the primary side. */
const SHEET_TOP = HEADS + RAILS + 29;

/** Width and height of an element as it is laid out. */
function useSize(): [
  { width: number; height: number },
  (element: HTMLElement | null) => (() => void) | undefined,
] {
  const [size, setSize] = useState({ width: 0, height: 0 });
  const measure = useCallback((element: HTMLElement | null) => {
    if (!element) return undefined;
    const take = (width: number, height: number) =>
      setSize({ width: Math.floor(width), height: Math.floor(height) });
    // At once, before anything is painted: else what lies below would jump.
    take(element.clientWidth, element.clientHeight);
    const observer = new ResizeObserver(([{ contentRect }]) =>
      take(contentRect.width, contentRect.height),
    );
    observer.observe(element);
    return () => observer.disconnect();
  }, []);
  return [size, measure];
}

/** The head of a bay: a button over the drawing, its readings beneath. */
function Head({ bay, x, end, brief }: { bay: Bay; x: number; end: number; brief: boolean }) {
  const open = useOpenBay((state) => state.bay === bay);
  const design = useDocument((state) => state.design);
  const line = useRun((run) => headOf(bay, design, run.readings, run.joints, brief));
  return (
    <button
      type="button"
      className="bay"
      aria-expanded={open}
      aria-controls={open ? 'bay-sheet' : undefined}
      style={{ left: x, width: end - x }}
      onClick={() => toggleBay(bay)}
    >
      <span className="bay-name">{BAYS[bay].title}</span>
      <span className="bay-line">{line}</span>
    </button>
  );
}

/** Values rounded to a part in sixteen thousand of the largest, or finer; null stays null. */
function visible<T extends number | null>(values: readonly T[]): readonly T[] {
  const largest = Math.max(...values.map((value) => Math.abs(value ?? 0)));
  if (largest === 0 || !Number.isFinite(largest)) return values;
  const step = 2 ** (Math.floor(Math.log2(largest)) - 14);
  return values.map((value) => (value === null ? value : ((Math.round(value / step) * step) as T)));
}

/**
 * Joint potentials as far as the run has told them, else equal shares of the output voltage; null
 * where there are none: before the first period, and for an alternating output.
 */
function useJoints(): readonly number[] | null {
  const count = useDocument((state) => state.design.sections.count);
  const stack = useDocument((state) => state.design.stack);
  const alternating = useDocument((state) => state.design.rectifier.kind === 'none');
  // What cannot be seen must not be drawn again: potentials count to a part in sixteen thousand.
  const joints = useRun(useShallow((run) => run.joints && visible(run.joints)));
  const output = useRun((run) => visible([run.readings?.outputVoltage ?? null])[0]);
  return useMemo(() => {
    if (alternating) return null;
    if (joints && joints.length === count + 1) return joints;
    if (output === null) return null;
    const earthed = stack.earth === 'joint' ? Math.min(stack.joint, count) : null;
    return equalShare(output, count, earthed);
  }, [alternating, joints, output, count, stack]);
}

/** The stack and what follows it. */
function StackDrawing({ plan, height, rails }: { plan: Plan; height: number; rails: number }) {
  const design = useDocument((state) => state.design);
  const joints = useJoints();
  const current = useRun((run) => visible([run.readings?.outputCurrent ?? null])[0]);
  const voltage = useRun((run) => visible([run.readings?.outputVoltage ?? null])[0]);
  const foot = height - BELOW;
  const { count } = design.sections;
  const earthed = design.stack.earth === 'joint' ? Math.min(design.stack.joint, count) : null;
  const stairs = useMemo(() => {
    const box = { left: plan.stack, right: plan.stackEnd, top: STAIRS_TOP, bottom: foot };
    const known = joints ?? Array.from({ length: count + 1 }, () => 0);
    return staircase(known, earthed, box, Math.floor((foot - STAIRS_TOP) / 34));
  }, [joints, count, earthed, plan, foot]);
  const limb = useMemo(() => limbBeside(rails), [rails]);

  let potentials = null;
  if (joints && voltage !== null) {
    const end = voltage - (current ?? 0) * design.output.loadEndResistance;
    potentials =
      design.output.lead === 'positive'
        ? { positive: joints[0] + end, negative: joints[0] }
        : { positive: joints[count], negative: joints[count] - end };
  }
  return (
    <>
      <StackGround plan={plan} stairs={stairs} joints={joints} foot={foot} limb={limb} />
      <OutputSide
        design={design}
        plan={plan}
        top={stairs.joints[count].y}
        foot={stairs.joints[0].y}
        potentials={potentials}
      />
      <Stack
        design={design}
        plan={plan}
        stairs={stairs}
        joints={joints}
        top={STAIRS_TOP}
        foot={foot}
      />
    </>
  );
}

/** Height of the core's limb beside the primary winding. */
const limbBeside = (rails: number) => ({
  top: HEADS + RAIL + rails / 2 - 41,
  foot: HEADS + RAIL + rails / 2 + 41,
});

function PrimaryDrawing({ plan, rails }: { plan: Plan; rails: number }) {
  const design = useDocument((state) => state.design);
  return <PrimarySide design={design} plan={plan} top={HEADS + RAIL} rails={rails} />;
}

/** A drawing at its own size, 1:1. */
function Drawing({
  width,
  height,
  children,
}: {
  width: number;
  height: number;
  children: ReactNode;
}) {
  return (
    // biome-ignore lint/a11y/noSvgWithoutTitle: a title would pop up over the whole drawing
    <svg className="drawing" width={width} height={height}>
      {children}
    </svg>
  );
}

function PrimaryHeads({ plan, end }: { plan: Plan; end: number }) {
  const brief = plan.arrangement !== 'wide';
  const gap = plan.arrangement === 'narrow' ? 8 : 12;
  return (
    <>
      <Head bay="supply" x={plan.supply} end={plan.bridge - gap} brief={brief} />
      <Head bay="bridge" x={plan.bridge} end={plan.tank - gap} brief={brief} />
      <Head bay="tank" x={plan.tank} end={plan.transformer - gap} brief={brief} />
      <Head bay="transformer" x={plan.transformer} end={end} brief={brief} />
    </>
  );
}

function SecondaryHeads({ plan }: { plan: Plan }) {
  const narrow = plan.arrangement === 'narrow';
  const brief = plan.arrangement !== 'wide';
  const gap = narrow ? 8 : 20;
  const load = narrow ? plan.width - 64 : plan.load - (brief ? 24 : 40);
  const output = narrow ? load - 72 : plan.output;
  const joints = useJoints();
  const highest = Math.max(...(joints ?? [0]).map(Math.abs));
  return (
    <>
      <Head bay="stack" x={narrow ? 0 : plan.scale + 14} end={output - gap} brief={narrow} />
      {plan.arrangement === 'wide' && (
        <span className="path-note" style={{ right: plan.width - output + gap + 16 }}>
          {highest < LEAST_SPAN
            ? 'no steady voltage: steps drawn equal'
            : `height is potential to earth, ${unitOf(highest, 'V').unit}`}
        </span>
      )}
      <Head bay="output" x={output} end={load - gap} brief={brief} />
      <Head bay="load" x={load} end={plan.width} brief={brief} />
    </>
  );
}

const PRIMARY: readonly Bay[] = ['supply', 'bridge', 'tank', 'transformer'];

/** The whole path across the page. */
export function PowerPath() {
  const [size, measure] = useSize();
  const sections = useDocument((state) => state.design.sections.count);
  const open = useOpenBay((state) => state.bay);
  const plan = useMemo(() => planPath(size.width, sections), [size.width, sections]);
  const { arrangement } = plan;
  if (size.width === 0) return <section className="path" ref={measure} />;

  if (arrangement === 'narrow') {
    const limb = limbBeside(RAILS);
    return (
      <section className="path" aria-label="Power path" ref={measure}>
        <div className="path-row">
          <Drawing width={plan.width} height={PRIMARY_ROW}>
            <path className="core" d={`M${plan.core} ${limb.top}h8V${limb.foot}h-8z`} />
            <PrimaryDrawing plan={plan} rails={RAILS} />
          </Drawing>
          <PrimaryHeads plan={plan} end={plan.width} />
        </div>
        {open && PRIMARY.includes(open) && <ValueSheet bay={open} />}
        <div className="path-row">
          <Drawing width={plan.width} height={STACK_ROW}>
            <StackDrawing plan={plan} height={STACK_ROW} rails={RAILS} />
          </Drawing>
          <SecondaryHeads plan={plan} />
        </div>
        {open && !PRIMARY.includes(open) && <ValueSheet bay={open} />}
      </section>
    );
  }

  const inset = arrangement === 'wide';
  const rails = inset && open ? RAILS : FREE_RAILS;
  const height = inset ? Math.max(LEAST_HEIGHT, size.height) : LEAST_HEIGHT;
  return (
    <section className="path" aria-label="Power path" ref={measure}>
      <div className="path-row" style={inset ? { position: 'absolute', inset: 0 } : undefined}>
        <Drawing width={plan.width} height={height}>
          <PrimaryDrawing plan={plan} rails={rails} />
          <StackDrawing plan={plan} height={height} rails={rails} />
        </Drawing>
        <PrimaryHeads plan={plan} end={plan.core + (inset ? 36 : 24)} />
        <SecondaryHeads plan={plan} />
      </div>
      {inset ? (
        <div
          className="path-inset"
          style={{ width: plan.core - 20, paddingTop: SHEET_TOP, minHeight: LEAST_HEIGHT }}
        >
          {open && <ValueSheet bay={open} />}
        </div>
      ) : (
        open && <ValueSheet bay={open} />
      )}
    </section>
  );
}
