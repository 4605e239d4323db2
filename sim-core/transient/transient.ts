/**
 * The transient of a network under a periodic gate pattern: steps that land on every gating edge
 * and follow the need.
 *
 * Between two edges the interval is divided into equal coarse steps, each halved up to a fixed
 * number of times (its level). A step in which any device changes its piece is refused and tried
 * two levels finer, down to the event level; a step whose error estimate is above tolerance is
 * refused and tried one or two levels finer. After an easy step the level rises again as soon as
 * the time is a multiple of the longer step. So only few lengths ever occur, and the factors of
 * each are kept.
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

/** Share of a group's largest peak below which a state's own smallness no longer counts. */
const LEAST_SCALE = 0.02;

/**
 * Kinds of state whose magnitudes are comparable, each with the share of the tolerance it is
 * allowed. Currents of the primary and flux linkage decay slowest, so their errors pile up.
 */
export const STATE_GROUPS = [
  { name: 'voltages of the high side', share: 1 },
  { name: 'voltages of the primary side', share: 1 },
  { name: 'winding currents', share: 1 },
  { name: 'primary currents', share: 0.3 },
  { name: 'flux linkage', share: 0.3 },
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
  periodStart: number;
  private readonly firstPhase: number;
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
    const low = (part: Part): boolean => part === 'supply' || part === 'bridge' || part === 'tank';
    this.group = Int32Array.from([
      ...net.capacitors.map((e) => (low(e.part) ? 1 : 0)),
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
    return { gates, from, coarse, h, eventLevel, finestLevel, lengths: [] };
  }

  private length(interval: Interval, level: number): StepLength {
    interval.lengths[level] ??= this.stepper.length(interval.h / 2 ** level);
    return interval.lengths[level];
  }

  /** Where in the drive period the run stands, 0 ≤ phase < 1. */
  get phase(): number {
    const phase = (this.time - this.periodStart) / this.pattern.period;
    return phase >= 1 - 1e-12 ? 0 : Math.max(0, phase);
  }

  /** Solve the network at the present state, so that every voltage can be read before a step. */
  prime(): StepFailure | null {
    const at = this.intervalAt(this.time - this.periodStart);
    this.setGates(this.intervals[at]);
    const instant = this.length(this.intervals[at], this.intervals[at].eventLevel);
    if (!this.stepper.attempt(instant, this.time)) return this.stepper.failure;
    this.stepper.reject();
    return null;
  }

  private setGates({ gates, from }: Interval): void {
    const quiet = this.periodStart === 0 && from < this.pattern.quiet * (1 - 1e-9);
    const bits = quiet ? 0 : gates;
    this.stepper.setGates((gate) => ((bits >> gate) & 1) === 1);
  }

  private intervalAt(phase: number): number {
    let k = this.intervals.length - 1;
    while (k > 0 && this.intervals[k].from > phase) k--;
    return k;
  }

  /**
   * Advance for ever, one accepted step per turn; can be left after any of them.
   * @returns the failure that ended it
   */
  *advance(): Generator<void, StepFailure> {
    let k = this.intervalAt(this.firstPhase);
    // A run taken up inside an interval walks the rest of it as an interval of its own.
    let rest: Interval | null = null;
    const into = this.firstPhase - this.intervals[k].from;
    if (into > 0) {
      const { gates, from, coarse, h } = this.intervals[k];
      const left = coarse * h - into;
      if (left > 1e-12 * this.pattern.period) {
        rest = this.interval(gates, from + into, left, Math.max(1, Math.ceil(left / h)));
      } else k++;
    }
    for (;;) {
      for (; k < this.intervals.length; k++) {
        const failure = yield* this.walk(rest ?? this.intervals[k]);
        rest = null;
        if (failure) return failure;
      }
      k = 0;
      this.periods++;
      this.periodStart += this.pattern.period;
      this.rescale(0.5);
    }
  }

  private *walk(interval: Interval): Generator<void, StepFailure | null> {
    const { stepper } = this;
    const start = this.periodStart + interval.from;
    const { eventLevel, finestLevel } = interval;
    const { tolerance } = this.accuracy;
    const unit = interval.h / 2 ** finestLevel;
    const total = interval.coarse * 2 ** finestLevel;
    this.setGates(interval);
    let position = 0;
    // Devices react to the edge at once: the first step is an event.
    let level = eventLevel;
    // Where the next change of a device is expected; until then no longer step is tried.
    let expected = 0;
    while (position < total) {
      const stride = 2 ** (finestLevel - level);
      const step = this.length(interval, level);
      if (!stepper.attempt(step, this.time)) {
        if (level === finestLevel) return stepper.failure;
        stepper.reject();
        this.rejected++;
        level = Math.min(finestLevel, level + 3);
        continue;
      }
      const error = stepper.error / tolerance;
      if (stepper.changed ? level < eventLevel : error > 1 && level < finestLevel) {
        if (stepper.changed) {
          const finest = 2 ** (finestLevel - eventLevel);
          expected = position + Math.floor((stepper.firstChange() * stride) / finest) * finest;
          do level++;
          while (level < eventLevel && position + 2 ** (finestLevel - level) > expected);
        } else level = Math.min(finestLevel, level + (error > 12 ? 2 : 1));
        stepper.reject();
        this.rejected++;
        continue;
      }
      stepper.accept();
      position += stride;
      this.time = start + position * unit;
      this.notePeaks();
      if (position === expected) {
        // The change is due in the very next step.
        level = Math.max(level, eventLevel);
      } else {
        // The error grows as the cube of the step: rise as far as that and the grid allow.
        for (let grown = stepper.changed ? 1 : error * 8; level > 0 && grown < EASY; grown *= 8) {
          const longer = 2 ** (finestLevel - level + 1);
          if (position % longer !== 0) break;
          if (position < expected && position + longer > expected) break;
          level--;
        }
        while (position < expected && position + 2 ** (finestLevel - level) > expected) level++;
      }
      yield;
    }
    return null;
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
