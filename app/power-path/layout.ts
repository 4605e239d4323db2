/**
 * Where everything of the power path stands, in CSS pixels: the drawing is never scaled, so that
 * its text keeps its size. Height in the stack is potential to earth.
 */
import { ticksBetween } from '../scale.ts';

/** How the path is laid out: primary side and stack side by side, or one above the other. */
export type Arrangement = 'wide' | 'medium' | 'narrow';

/** Horizontal stations of the path. On a narrow page each row starts again at 0. */
export interface Plan {
  readonly arrangement: Arrangement;
  readonly supply: number;
  readonly bridge: number;
  readonly tank: number;
  readonly transformer: number;
  /** The core's limb; the primary winding stands left of it. */
  readonly core: number;
  /** Figures of the potential scale end here. */
  readonly scale: number;
  /** Joint 0 of the stack, and the joint above its last section. */
  readonly stack: number;
  readonly stackEnd: number;
  readonly output: number;
  readonly load: number;
  /** Width of the row that holds the stack. */
  readonly width: number;
}

/** Widths at which the arrangement changes. */
const WIDE = 1312;
const MEDIUM = 900;
/** No step of a short stack is drawn wider. */
const WIDEST_STEP = 120;

/** The stations for a page `width` pixels wide and a stack of `sections`. */
export function planPath(width: number, sections: number): Plan {
  const stackEnd = (stack: number, room: number) => stack + Math.min(room, sections * WIDEST_STEP);
  if (width >= WIDE) {
    const load = width - 88;
    const right = Math.max(306, Math.min(360, width * 0.21));
    return {
      arrangement: 'wide',
      supply: 0,
      bridge: 116,
      tank: 272,
      transformer: 392,
      core: 500,
      scale: 548,
      stack: 600,
      stackEnd: stackEnd(600, load - right - 600),
      output: load - right + 28,
      load,
      width,
    };
  }
  if (width >= MEDIUM) {
    const load = width - 72;
    const right = Math.min(306, 140 + Math.max(0, width - 992) * 0.6);
    return {
      arrangement: 'medium',
      supply: 0,
      bridge: 84,
      tank: 204,
      transformer: 310,
      core: 388,
      scale: 420,
      stack: 456,
      stackEnd: stackEnd(456, load - right - 456),
      output: load - right + 18,
      load,
      width,
    };
  }
  const load = width - 24;
  const right = Math.max(100, Math.min(200, width * 0.28));
  return {
    arrangement: 'narrow',
    supply: 0,
    bridge: Math.round(width * 0.19),
    tank: Math.round(width * 0.47),
    transformer: Math.round(width * 0.72),
    core: width - 10,
    scale: 30,
    stack: 44,
    stackEnd: stackEnd(44, load - right - 44),
    output: load - right + 16,
    load,
    width,
  };
}

/** One section of the stack in its place. */
export interface Step {
  /** Number of the section, from 1. */
  readonly section: number;
  /** Left and right edge; height of its lower and its upper joint. */
  readonly x: number;
  readonly width: number;
  readonly low: number;
  readonly high: number;
}

/** The stack as a staircase. */
export interface Staircase {
  readonly steps: readonly Step[];
  /** Joints 0 to S, left to right. */
  readonly joints: readonly { readonly x: number; readonly y: number }[];
  /** Height of a potential; of use only where `scaled`. */
  readonly yOf: (volts: number) => number;
  /** Height of earth. */
  readonly earth: number;
  /** Whether heights are potentials; false while there is no voltage to draw. */
  readonly scaled: boolean;
  readonly ticks: readonly {
    readonly volts: number;
    readonly y: number;
    readonly major: boolean;
  }[];
  /** Whether every step is a plain box, its circuit too small to read. */
  readonly folded: boolean;
}

/** From this many sections on, steps are plain boxes. */
const FOLD_FROM = 9;
/** Smallest step in which a circuit can be read. */
const LEAST_WIDTH = 39;
const LEAST_HEIGHT = 22;
/** How far the scale runs on beyond the stairs, pixels. */
const BEYOND = { above: 18, below: 6 };
/** Below this span there is no voltage to draw; steps are then drawn equal. */
export const LEAST_SPAN = 1e-3;

/**
 * Joint potentials of a stack whose sections share the voltage equally.
 * @param voltage  from joint 0 to joint S, volts
 * @param earthed  the earthed joint, or null where the stack floats about earth
 */
export function equalShare(
  voltage: number,
  sections: number,
  earthed: number | null,
): readonly number[] {
  const zero = earthed ?? sections / 2;
  return Array.from({ length: sections + 1 }, (_, j) => ((j - zero) * voltage) / sections);
}

/**
 * The staircase of a stack.
 * @param joints  potential to earth of joints 0 to S, volts
 * @param box     left, right, top and bottom of the room it has
 * @param figures most figures the scale can hold
 */
export function staircase(
  joints: readonly number[],
  earthed: number | null,
  box: { left: number; right: number; top: number; bottom: number },
  figures: number,
): Staircase {
  const sections = joints.length - 1;
  const span = Math.max(...joints) - Math.min(...joints);
  const scaled = Number.isFinite(span) && span >= LEAST_SPAN;
  const drawn = scaled ? joints : equalShare(sections, sections, earthed);
  const highest = Math.max(0, ...drawn);
  const lowest = Math.min(0, ...drawn);
  const perVolt = (box.bottom - box.top) / (highest - lowest);
  const yOf = (volts: number) => box.bottom - (volts - lowest) * perVolt;
  const width = (box.right - box.left) / sections;
  const places = drawn.map((volts, j) => ({ x: box.left + j * width, y: yOf(volts) }));
  const steps = Array.from({ length: sections }, (_, i) => ({
    section: i + 1,
    x: places[i].x,
    width,
    low: places[i].y,
    high: places[i + 1].y,
  }));
  return {
    steps,
    joints: places,
    yOf,
    earth: yOf(0),
    scaled,
    ticks: scaled
      ? ticksBetween(
          lowest - BEYOND.below / perVolt,
          highest + BEYOND.above / perVolt,
          figures,
        ).map(({ value, major }) => ({
          volts: value,
          y: yOf(value),
          major,
        }))
      : [],
    folded:
      sections >= FOLD_FROM ||
      width < LEAST_WIDTH ||
      steps.every((s) => Math.abs(s.low - s.high) < LEAST_HEIGHT),
  };
}

/** Whether the circuit of this step can be read at its size. */
export function legible(step: Step): boolean {
  return step.low - step.high >= LEAST_HEIGHT && step.width >= LEAST_WIDTH;
}

/** The joint whose place is nearest to x. */
export function nearestJoint(stairs: Staircase, x: number): number {
  const { joints } = stairs;
  const width = joints.length > 1 ? joints[1].x - joints[0].x : 1;
  return Math.min(joints.length - 1, Math.max(0, Math.round((x - joints[0].x) / width)));
}

/** Neighbouring sections that are alike. */
export interface Alike {
  readonly from: number;
  readonly to: number;
  /** Whether they differ from what is entered for all. */
  readonly differs: boolean;
}

/**
 * The sections in runs of equal ones.
 * @param marks  for each section in order, what sets it apart ('' for nothing)
 */
export function runsOf(marks: readonly string[]): readonly Alike[] {
  const runs: Alike[] = [];
  marks.forEach((mark, i) => {
    const last = runs.at(-1);
    if (last && marks[i - 1] === mark) runs[runs.length - 1] = { ...last, to: i + 1 };
    else runs.push({ from: i + 1, to: i + 1, differs: mark !== '' });
  });
  return runs;
}
