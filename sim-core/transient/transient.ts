/**
 * The transient of a network under a periodic gate pattern: steps that land on every gating edge
 * and follow the need.
 *
 * Between two edges the interval is divided into equal coarse steps, each halved up to a fixed
 * number of times (its level). A step in which any device changes its piece is refused above the
 * event level; the secant tells where the change is due, and dyadic steps walk up to that point.
 * A step whose error estimate is above tolerance is refused and tried one or two levels finer.
 * After an easy step the level rises again as far as the error and the grid allow. So only few
 * lengths ever occur, and the factors of each are kept.
 */
import type { GatePattern } from '../network/gates.ts';
import type { Network, Part } from '../network/network.ts';
import type { StepFailure, StepLength } from './step.ts';
import { Stepper } from './step.ts';

/** How finely a transient is stepped. */
export interface Accuracy {
  /** Coarse steps per period at least. */
  readonly coarsePerPeriod: number;
  /** Events are located to a coarse step halved this often. */
  readonly eventLevel: number;
  /** Local error per step, as a share of each state's own peak, at which a step is refused. */
  readonly tolerance: number;
}

/** What every run uses unless told otherwise; its accuracy is measured in the tests. */
export const STANDARD_ACCURACY: Accuracy = {
  coarsePerPeriod: 64,
  eventLevel: 6,
  tolerance: 5e-5,
};

/** No step is halved below this length (s), nor more often than MOST_HALVINGS. */
const SHORTEST_STEP = 3e-11;
const MOST_HALVINGS = 22;

/** A longer step is tried when its error should stay below this share of the tolerance. */
const EASY = 0.5;

/**
 * How many tolerances an event step of the second order and one of the first may end apart: the
 * difference is mostly the first order's, and an event's error is made once, not piled up.
 */
const EVENT_SLACK = 40;

/** Above this share of the tolerance the error is worth a solve to filter. */
const FILTER = 1;

/** Share of a group's largest peak below which a state's own smallness no longer counts. */
const LEAST_SCALE = 0.02;

/**
 * Kinds of state whose magnitudes are comparable, each with the share of the tolerance it is
 * allowed. Currents of the primary and flux linkage decay slowest, so their errors pile up. The
 * output capacitances of the switches swing within nanoseconds: what counts is when, not how.
 */
export const STATE_GROUPS = [
  { name: 'voltages of the high side', share: 1 },
  { name: 'voltages of the primary side', share: 1 },
  { name: 'winding currents', share: 1 },
  { name: 'primary currents', share: 0.3 },
  { name: 'flux linkage', share: 0.3 },
  { name: 'voltages of the switches', share: 20 },
] as const;

/** One interval of the gate pattern with its step lengths by level. */
interface Interval {
  readonly gates: number;
  /** Seconds from the start of the period. */
  readonly from: number;
  readonly coarse: number;
  /** Length of the coarse step, seconds. */
  readonly h: number;
  readonly eventLevel: number;
  readonly finestLevel: number;
  /** Length of a step at the finest level, seconds. */
  readonly unit: number;
  readonly lengths: StepLength[];
}

/** A transient in progress. */
export class Transient {
  readonly stepper: Stepper;
  readonly pattern: GatePattern;
  /** Seconds since the start of the run. */
  time: number;
  /** Steps refused so far. */
  rejected = 0;
  /** Whole periods completed. */
  periods = 0;
  private readonly accuracy: Accuracy;
  private readonly intervals: Interval[];
  /** Seconds at which the period in progress began. */
  private periodStart: number;
  private readonly firstPhase: number;
  /** The interval under way, null before the first step, and its place in the pattern. */
  private under: Interval | null = null;
  private current = 0;
  /** Seconds at which it began; how far it has come, in steps of the finest level. */
  private start = 0;
  private position = 0;
  /** Level of the next step. */
  private level = 0;
  /** Position at which the next change of a device is expected; no step passes it. */
  private expected = 0;
  /** Largest magnitude of each state lately (it fades by half every period). */
  readonly peak: Float64Array;
  /** Kind of each state: STATE_GROUPS names them. */
  readonly group: Int32Array;
  /** Share of the tolerance by state. */
  private readonly share: Float64Array;

  /**
   * @param time   seconds at which the run starts
   * @param phase  where in the drive period it starts, 0 ≤ phase < 1
   */
  constructor(
    network: Network,
    pattern: GatePattern,
    accuracy = STANDARD_ACCURACY,
    time = 0,
    phase = 0,
  ) {
    this.accuracy = accuracy;
    this.stepper = new Stepper(network);
    this.pattern = pattern;
    this.time = time;
    this.firstPhase = phase * pattern.period;
    this.periodStart = time - this.firstPhase;
    this.intervals = pattern.start.map((from, k) => {
      const span = (pattern.start[k + 1] ?? pattern.period) - from;
      // A relative hair less, so that a span of exactly so many steps is not divided once more.
      const coarse = Math.max(
        1,
        Math.ceil((span * accuracy.coarsePerPeriod) / pattern.period - 1e-9),
      );
      return this.interval(pattern.on[k], from, span, coarse);
    });
    // Capacitor voltages are compared with those of their own side, windings with each other.
    const { network: net } = this.stepper;
    const kind = (part: Part): number =>
      part === 'bridge' ? 5 : part === 'supply' || part === 'tank' ? 1 : 0;
    this.group = Int32Array.from([
      ...net.capacitors.map((e) => kind(e.part)),
      ...net.inductors.map((e) => (e.ratio !== 0 ? 2 : 3)),
      ...net.cores.map(() => 4),
    ]);
    this.share = Float64Array.from(this.group, (kind) => STATE_GROUPS[kind].share);
    this.peak = new Float64Array(this.group.length);
    this.guessScale();
  }

  /** Magnitudes for the first period, when no peak is known yet: a thousandth of a rough guess. */
  private guessScale(): void {
    const { capacitors, inductors, cores, characteristics, sines } = this.stepper.network;
    const volts =
      Math.max(
        ...characteristics.map((e) => Math.abs(e.source)),
        ...sines.map((e) => Math.abs(e.amplitude)),
        ...capacitors.map((e) => Math.abs(e.voltage)),
        0,
      ) || 1;
    const ratio = Math.max(1, ...inductors.map((e) => Math.abs(e.ratio)));
    const { period } = this.pattern;
    const guess = [
      ...capacitors.map((_, i) => volts * (this.group[i] === 0 ? ratio : 1)),
      ...inductors.map(
        (e) =>
          (volts * Math.max(1, Math.abs(e.ratio)) * period) /
          (e.inductance + e.resistance * period),
      ),
      ...cores.map(() => volts * period),
    ];
    this.stepper.scale.set(guess.map((size, i) => 1e-3 * this.share[i] * size));
  }

  private interval(gates: number, from: number, span: number, coarse: number): Interval {
    // Rounding the length lets intervals of equal span share their factors.
    const h = Number((span / coarse).toPrecision(12));
    const event =
      this.pattern.period / (this.accuracy.coarsePerPeriod * 2 ** this.accuracy.eventLevel);
    const eventLevel = Math.max(0, Math.ceil(Math.log2(h / event) - 1e-6));
    const halvings = Math.min(MOST_HALVINGS, Math.ceil(Math.log2(h / SHORTEST_STEP)));
    const finestLevel = Math.max(eventLevel, halvings);
    const unit = h / 2 ** finestLevel;
    return { gates, from, coarse, h, eventLevel, finestLevel, unit, lengths: [] };
  }

  private length(interval: Interval, level: number): StepLength {
    interval.lengths[level] ??= this.stepper.length(interval.h / 2 ** level);
    return interval.lengths[level];
  }

  /** Where in the drive period the run stands, 0 ≤ phase < 1. */
  get phase(): number {
    const phase = (this.time - this.periodStart) / this.pattern.period;
    // Rounding of the time itself leaves an end that is also a beginning.
    return phase >= 1 - 1e-9 || phase < 1e-9 ? 0 : phase;
  }

  /** Solve the network at the present state, so that every voltage can be read before a step. */
  prime(): StepFailure | null {
    const at = this.intervalAt(this.time - this.periodStart);
    this.setGates(this.intervals[at]);
    const instant = this.length(this.intervals[at], this.intervals[at].eventLevel);
    const { stepper } = this;
    if (!stepper.attempt(instant, this.time)) return stepper.failure;
    if (stepper.changed && !stepper.reconsider(instant, this.time)) return stepper.failure;
    stepper.reject(true);
    return null;
  }

  private setGates({ gates, from }: Interval): void {
    const first = Math.abs(this.periodStart) < 1e-9 * this.pattern.period;
    const quiet = first && from < this.pattern.quiet * (1 - 1e-9);
    const bits = quiet ? 0 : gates;
    this.stepper.setGates((gate) => ((bits >> gate) & 1) === 1);
  }

  private intervalAt(phase: number): number {
    let k = this.intervals.length - 1;
    while (k > 0 && this.intervals[k].from > phase) k--;
    return k;
  }

  /** Take up the run where it stands: find the interval and what is left of it. */
  private takeUp(): void {
    let k = this.intervalAt(this.firstPhase);
    const { from, coarse, h, gates } = this.intervals[k];
    const into = this.firstPhase - from;
    const left = coarse * h - into;
    // What is left must stand out from the rounding of the time, or there is no step to take.
    const least = Math.max(1e-9 * this.pattern.period, 16 * Number.EPSILON * this.time);
    if (into > 0 && left > least) {
      // A run taken up inside an interval walks the rest of it as an interval of its own.
      this.enter(k, this.interval(gates, from + into, left, Math.max(1, Math.ceil(left / h))));
      return;
    }
    if (into > 0) k++;
    this.enter(k % this.intervals.length, this.intervals[k % this.intervals.length]);
  }

  private enter(k: number, interval: Interval): void {
    this.current = k;
    this.under = interval;
    this.start = this.periodStart + interval.from;
    this.position = 0;
    this.expected = 0;
    // Devices react to the edge at once: the first step is an event.
    this.level = interval.eventLevel;
    this.setGates(interval);
  }

  private endPeriod(): void {
    this.periods++;
    this.periodStart += this.pattern.period;
    this.rescale(0.5);
  }

  /**
   * Take one accepted step, after as many refused ones as it needs. Allocates nothing once the
   * lengths of the pattern have been met.
   * @returns the failure that ends the run, or null
   */
  step(): StepFailure | null {
    const { stepper } = this;
    if (this.under === null) this.takeUp();
    let interval = this.under as Interval;
    if (this.position >= interval.coarse << interval.finestLevel) {
      const next = (this.current + 1) % this.intervals.length;
      this.enter(next, this.intervals[next]);
      interval = this.under as Interval;
    }
    const { eventLevel, finestLevel } = interval;
    const { tolerance } = this.accuracy;
    for (;;) {
      const { level, position } = this;
      const stride = 1 << (finestLevel - level);
      const step = this.length(interval, level);
      if (!stepper.attempt(step, this.time)) {
        if (level === finestLevel) return stepper.failure;
        this.refuse(Math.min(finestLevel, level + 3));
        continue;
      }
      let error = stepper.error / tolerance;
      if (!stepper.changed && error > FILTER) error = stepper.filteredError(step) / tolerance;
      if (stepper.changed && level < eventLevel) {
        const finest = 1 << (finestLevel - eventLevel);
        this.expected = position + Math.floor((stepper.firstChange() * stride) / finest) * finest;
        let finer = level + 1;
        while (finer < eventLevel && position + (1 << (finestLevel - finer)) > this.expected)
          finer++;
        this.refuse(finer);
        continue;
      }
      if (!stepper.changed && error > 1 && level < finestLevel) {
        this.refuse(Math.min(finestLevel, level + (error > 12 ? 2 : 1)));
        continue;
      }
      if (stepper.changed) {
        const solved = stepper.reconsider(step, this.time);
        if (!solved && level === finestLevel) return stepper.failure;
        if (!solved || (stepper.spread > EVENT_SLACK * tolerance && level < finestLevel)) {
          this.refuse(Math.min(finestLevel, level + 2));
          continue;
        }
      }
      stepper.accept();
      this.position += stride;
      this.time = this.start + this.position * interval.unit;
      // Peaks are known well enough from every fourth step; at the start every one counts.
      if (this.periods < 2 || (stepper.steps & 3) === 0) this.notePeaks();
      this.chooseLevel(interval, error);
      const last = this.current === this.intervals.length - 1;
      if (last && this.position >= interval.coarse << finestLevel) this.endPeriod();
      return null;
    }
  }

  private refuse(level: number): void {
    this.stepper.reject();
    this.rejected++;
    this.level = level;
  }

  /** After an accepted step: the longest next step that the error and the grid allow. */
  private chooseLevel({ eventLevel, finestLevel }: Interval, error: number): void {
    const { position, expected } = this;
    if (position === expected) {
      // The change is due in the very next step.
      this.level = Math.max(this.level, eventLevel);
      return;
    }
    let { level } = this;
    // The error grows as the cube of the step.
    let grown = this.stepper.changed ? 1 : error * 8;
    for (; level > 0 && grown < EASY; grown *= 8) {
      const longer = 2 << (finestLevel - level);
      if ((position & (longer - 1)) !== 0) break;
      if (position < expected && position + longer > expected) break;
      level--;
    }
    while (position < expected && position + (1 << (finestLevel - level)) > expected) level++;
    this.level = level;
  }

  private notePeaks(): void {
    const { peak, share } = this;
    const { state, scale } = this.stepper;
    for (let i = 0; i < peak.length; i++) {
      const size = Math.abs(state[i]);
      if (size > peak[i]) {
        peak[i] = size;
        if (size * share[i] > scale[i]) scale[i] = size * share[i];
      }
    }
  }

  /** Set the magnitudes that errors are compared with from the peaks; let old peaks fade. */
  private rescale(keep: number): void {
    const { peak, group } = this;
    const { state, scale } = this.stepper;
    const largest = STATE_GROUPS.map(() => 0);
    for (let i = 0; i < peak.length; i++) {
      peak[i] = Math.max(peak[i], Math.abs(state[i]));
      if (peak[i] > largest[group[i]]) largest[group[i]] = peak[i];
    }
    for (let i = 0; i < peak.length; i++) {
      const floor = LEAST_SCALE * largest[group[i]];
      scale[i] = this.share[i] * Math.max(peak[i], floor, 1e-30);
      peak[i] *= keep;
    }
  }
}
