/**
 * A run: the transient of a design, which can be advanced, left, read, changed while it runs,
 * and taken up again from a saved state. The door to the engine for the worker and the headless
 * entry.
 */
import type { Outcome, Problem } from './design/problem.ts';
import type { Design } from './design/schema.ts';
import { assemble, type Plant } from './plant/assemble.ts';
import type { Signal } from './plant/signal.ts';
import type { ReadingName, Readings } from './readings/catalogue.ts';
import { PeriodMeter, Probes } from './readings/meter.ts';
import { SETTLED_DISTANCE, Settling } from './readings/settling.ts';
import { PARTS, type StepFailure } from './transient/step.ts';
import {
  type Accuracy,
  STANDARD_ACCURACY,
  STATE_GROUPS,
  Transient,
} from './transient/transient.ts';

export { SETTLED_DISTANCE };

/** What a run holds between two steps; plain data, can be stored as JSON. */
export interface RunState {
  /** Seconds since rest. */
  readonly time: number;
  /** Place in the drive period, 0 ≤ phase < 1. */
  readonly phase: number;
  /** Charge of every capacitor (C), by name. */
  readonly charge: Readonly<Record<string, number>>;
  /** Flux linkage of every inductor and core (Wb), by name. */
  readonly fluxLinkage: Readonly<Record<string, number>>;
}

/** Signals that every run meters. The first two give the power into the primary. */
const METERED = [
  'primary voltage',
  'primary current',
  'output voltage',
  'load current',
  'flux linkage',
  'bus voltage',
  'supply current',
] as const;
const METER = Object.fromEntries(METERED.map((name, k) => [name, k])) as Record<
  (typeof METERED)[number],
  number
>;

/** Extremes and mean of a signal over the last whole period. */
export interface Extent {
  readonly min: number;
  readonly max: number;
  readonly mean: number;
}

/** Counts of the work done since the start. */
export interface Work {
  readonly steps: number;
  readonly rejected: number;
  readonly commutations: number;
  readonly factorisations: number;
  readonly solves: number;
}

/** What reads a transient: made anew for every design that is put in force. */
interface Instruments {
  readonly signals: readonly Signal[];
  readonly probes: Probes;
  readonly meter: PeriodMeter;
  readonly joints: PeriodMeter;
  readonly settling: Settling;
}

function instrumentsFor(plant: Plant, { stepper, group }: Transient): Instruments {
  const terms = (name: string) => plant.signals.find((s) => s.name === name)?.terms ?? [];
  const joints = Array.from({ length: plant.design.sections.count + 1 }, (_, k) =>
    terms(`joint ${k} potential`),
  );
  return {
    signals: plant.signals.map(({ name, unit, bay }) => ({ name, unit, bay })),
    probes: new Probes(
      stepper,
      plant.signals.map((s) => s.terms),
    ),
    meter: new PeriodMeter(stepper, METERED.map(terms)),
    joints: new PeriodMeter(stepper, joints),
    settling: new Settling(stepper.weights().map(Math.abs), group, STATE_GROUPS.length),
  };
}

/** Words for a failure of the engine. */
function failureProblem(failure: StepFailure, time: number): Problem {
  const at = `at ${(time * 1e3).toPrecision(6)} ms`;
  switch (failure.kind) {
    case 'singular':
      return {
        place: '',
        message:
          failure.stiffest === undefined
            ? `Nothing holds the potential of “${failure.name}”.`
            : `The potential of “${failure.name}” cannot be computed ${at}: “${failure.stiffest}” and “${failure.weakest}” meet there, and their conductances over a step lie more than the limit of a factor of 10¹⁵ apart, which is all that double precision can hold.`,
      };
    case 'no-convergence':
      return {
        place: '',
        message: `The conduction of “${failure.name}” could not be decided ${at}.`,
      };
    case 'not-finite':
      return {
        place: '',
        message: `The state of “${failure.name}” left the range of numbers ${at}.`,
      };
  }
}

/** A run in progress. */
export class Run {
  private plant: Plant;
  private transient: Transient;
  private instruments: Instruments;
  private readonly accuracy: Accuracy;
  private generation = 0;
  private problem: Problem | null = null;
  /** Carried over from before the last change. */
  private pastPeriods = 0;
  private pastWork: Work = { steps: 0, rejected: 0, commutations: 0, factorisations: 0, solves: 0 };
  private pastDelivered = 0;
  private pastDissipated = 0;
  private pastGained = 0;
  private storedAtStart = 0;
  private peakStored = 0;
  /** Dissipated energy per part when the period in progress began, and over the last whole one. */
  private heatBefore = new Float64Array(PARTS.length);
  private heat = new Float64Array(PARTS.length);
  private deliveredBefore = 0;
  private deliveredLast = 0;
  /** Whether the period in progress was begun at its start. */
  private whole = true;
  /** Readings and joints from before the last change, until there are new ones. */
  private earlier: Readings | null = null;
  private earlierJoints: readonly number[] | null = null;

  private constructor(plant: Plant, transient: Transient, accuracy: Accuracy) {
    this.accuracy = accuracy;
    this.plant = plant;
    this.transient = transient;
    this.instruments = instrumentsFor(plant, transient);
    this.beginCounting();
  }

  /**
   * Open a run of a checked design.
   * @param from  a saved state to take up; without it the run starts from rest
   */
  static open(design: Design, from?: RunState, accuracy = STANDARD_ACCURACY): Outcome<Run> {
    const plant = assemble(design);
    const transient = begin(plant, accuracy, from);
    const failure = transient.prime();
    if (failure) return { ok: false, problem: failureProblem(failure, transient.time) };
    return { ok: true, value: new Run(plant, transient, accuracy) };
  }

  /** Energies are counted from where the transient in force began. */
  private beginCounting(): void {
    this.storedAtStart = this.transient.stepper.storedEnergy();
    this.peakStored = Math.max(this.peakStored, this.storedAtStart);
    this.heatBefore.fill(0);
    this.deliveredBefore = 0;
    this.whole = this.transient.phase === 0;
  }

  /** The signals that can be read, in the order of `value`. */
  get signals(): readonly Signal[] {
    return this.instruments.signals;
  }

  /** The design that runs now. */
  get design(): Design {
    return this.plant.design;
  }

  /** Seconds since rest. */
  get time(): number {
    return this.transient.time;
  }

  /** Whole drive periods done since rest. */
  get periods(): number {
    return this.pastPeriods + this.transient.periods;
  }

  /** Why the run ended, or null. */
  get failed(): Problem | null {
    return this.problem;
  }

  /** Whether the estimated distance to the steady state is below SETTLED_DISTANCE. */
  get settled(): boolean {
    return this.instruments.settling.settled;
  }

  /** Present value of a signal, by its place in `signals`. */
  value(signal: number): number {
    return this.instruments.probes.value(signal);
  }

  /**
   * Advance for ever, one accepted step per turn; leave it after any of them. It ends when the
   * design is changed (take a new one then) or the engine fails (`failed` says why).
   * @returns true at the end of a drive period, else false
   */
  *advance(): Generator<boolean, void> {
    const generation = this.generation;
    const { transient } = this;
    const { meter, joints } = this.instruments;
    let before = transient.time;
    let { periods } = transient;
    while (generation === this.generation) {
      const failure = transient.step();
      if (failure) {
        this.problem = failureProblem(failure, transient.time);
        return;
      }
      const h = transient.time - before;
      before = transient.time;
      meter.step(h);
      joints.step(h);
      const ended = transient.periods !== periods;
      if (ended) {
        periods = transient.periods;
        this.closePeriod();
      }
      yield ended;
    }
  }

  private closePeriod(): void {
    const { transient } = this;
    const { stepper } = transient;
    const { meter, joints, settling } = this.instruments;
    // A period that was taken up in its middle has no readings of its own.
    meter.close(this.whole);
    joints.close(this.whole);
    this.whole = true;
    settling.period(stepper.state, transient.peak);
    this.peakStored = Math.max(this.peakStored, stepper.storedEnergy());
    for (let k = 0; k < this.heat.length; k++) {
      this.heat[k] = stepper.dissipated[k] - this.heatBefore[k];
      this.heatBefore[k] = stepper.dissipated[k];
    }
    this.deliveredLast = stepper.delivered - this.deliveredBefore;
    this.deliveredBefore = stepper.delivered;
  }

  /** Extremes and mean over the last whole period; null before there is one. */
  extent(name: (typeof METERED)[number]): Extent | null {
    const { meter } = this.instruments;
    if (meter.periods === 0) return null;
    const k = METER[name];
    return { min: meter.min[k], max: meter.max[k], mean: meter.mean[k] };
  }

  /** Mean potentials of joints 0 … S over the last whole period (V); null before there is one. */
  joints(): readonly number[] | null {
    const { joints } = this.instruments;
    return joints.periods === 0 ? this.earlierJoints : Array.from(joints.mean);
  }

  /** Counts of the work done since the start. */
  work(): Work {
    const { stepper, rejected } = this.transient;
    const past = this.pastWork;
    return {
      steps: past.steps + stepper.steps,
      rejected: past.rejected + rejected,
      commutations: past.commutations + stepper.commutations,
      factorisations: past.factorisations + stepper.factorisations,
      solves: past.solves + stepper.solves,
    };
  }

  /** Energy in − dissipated − gained since the start, as a share (see model of the readings). */
  audit(): number | null {
    const { stepper } = this.transient;
    const delivered = this.pastDelivered + stepper.delivered;
    let rest = delivered - this.pastDissipated - this.pastGained;
    for (const heat of stepper.dissipated) rest -= heat;
    const stored = stepper.storedEnergy();
    rest -= stored - this.storedAtStart;
    const whole = Math.max(delivered, this.peakStored, stored);
    return whole > 0 ? rest / whole : null;
  }

  /** All readings; those of a period are null before the first whole one. */
  readings(): Readings {
    const audit = this.audit();
    const { meter, settling } = this.instruments;
    const always = {
      energyAudit: audit === null ? null : audit * 100,
      settledDistance:
        // Beyond its own size an estimate says no more than that the run is far from settled.
        settling.distance === null || settling.distance > 1 ? null : settling.distance * 100,
      stackEnergy: this.transient.stepper.chargedEnergy(['rectifier', 'output']),
    };
    if (meter.periods === 0) return { ...(this.earlier ?? NO_READINGS), ...always };
    const { period } = this.plant.pattern;
    const output = METER['output voltage'];
    const primary = METER['primary current'];
    const flux = METER['flux linkage'];
    const size = (k: number): number => Math.max(Math.abs(meter.min[k]), Math.abs(meter.max[k]));
    const power = (part: (typeof PARTS)[number]): number => this.heat[PARTS.indexOf(part)] / period;
    const share = (a: number, b: number): number | null => (b > 0 ? a / b : null);
    const percent = (a: number, b: number): number | null => {
      const value = share(a, b);
      return value === null ? null : value * 100;
    };
    const ripple = meter.max[output] - meter.min[output];
    const direct = meter.min[output] * meter.max[output] > 0;
    const supplyPower = this.deliveredLast / period;
    const loadPower = power('load');
    return {
      ...always,
      outputVoltage: meter.mean[output],
      outputPeak: size(output),
      outputRms: Math.sqrt(meter.meanSquare[output]),
      outputCurrent: meter.mean[METER['load current']],
      ripplePeakToPeak: ripple,
      rippleAmplitude: ripple / 2,
      // Of an alternating output there is no ripple to speak of.
      rippleFactor: direct ? percent(ripple / 2, Math.abs(meter.mean[output])) : null,
      percentageRipple: direct ? percent(ripple, size(output)) : null,
      primaryPeak: size(primary),
      primaryRms: Math.sqrt(meter.meanSquare[primary]),
      primaryMean: meter.mean[primary],
      fluxPeak: size(flux),
      busVoltage: meter.mean[METER['bus voltage']],
      supplyCurrent: meter.mean[METER['supply current']],
      supplyPower,
      loadPower,
      efficiency: percent(loadPower, supplyPower),
      powerFactor: share(
        meter.meanProduct,
        Math.sqrt(meter.meanSquare[METER['primary voltage']] * meter.meanSquare[primary]),
      ),
      bridgeLoss: power('supply') + power('bridge'),
      tankLoss: power('tank'),
      transformerLoss: power('transformer'),
      rectifierLoss: power('rectifier'),
      outputLoss: power('output'),
    };
  }

  /** The state now. */
  state(): RunState {
    return stateOf(this.transient);
  }

  /**
   * Put another checked design in force without starting over: every capacitor keeps its
   * charge, every inductor and the core their flux linkage. Refused, the old one runs on.
   */
  change(design: Design): Outcome<void> {
    const plant = assemble(design);
    const transient = begin(plant, this.accuracy, this.state());
    const failure = transient.prime();
    if (failure) return { ok: false, problem: failureProblem(failure, this.time) };
    const old = this.transient.stepper;
    this.earlier = this.readings();
    this.earlierJoints =
      this.joints()?.length === plant.design.sections.count + 1 ? this.joints() : null;
    this.pastPeriods = this.periods;
    this.pastWork = this.work();
    this.pastDelivered += old.delivered;
    for (const heat of old.dissipated) this.pastDissipated += heat;
    this.pastGained += old.storedEnergy() - this.storedAtStart;
    this.plant = plant;
    this.transient = transient;
    this.generation++;
    this.problem = null;
    this.instruments = instrumentsFor(plant, transient);
    this.beginCounting();
    return { ok: true, value: undefined };
  }
}

const NO_READINGS = {
  outputVoltage: null,
  outputPeak: null,
  outputRms: null,
  outputCurrent: null,
  ripplePeakToPeak: null,
  rippleAmplitude: null,
  rippleFactor: null,
  percentageRipple: null,
  primaryPeak: null,
  primaryRms: null,
  primaryMean: null,
  fluxPeak: null,
  busVoltage: null,
  supplyCurrent: null,
  supplyPower: null,
  loadPower: null,
  efficiency: null,
  powerFactor: null,
  bridgeLoss: null,
  tankLoss: null,
  transformerLoss: null,
  rectifierLoss: null,
  outputLoss: null,
  stackEnergy: null,
} satisfies Partial<Record<ReadingName, null>>;

/** A transient at the start of a design, or at a saved state as far as its parts are still there. */
function begin(plant: Plant, accuracy: Accuracy, from?: RunState): Transient {
  const transient = new Transient(
    plant.network,
    plant.pattern,
    accuracy,
    from?.time ?? 0,
    from?.phase ?? 0,
  );
  if (from) {
    const { network, state, counts } = transient.stepper;
    network.capacitors.forEach((e, i) => {
      state[i] = (from.charge[e.name] ?? 0) / e.capacitance;
    });
    network.inductors.forEach((e, i) => {
      const linkage = from.fluxLinkage[e.name] ?? 0;
      state[counts.capacitors + i] = e.inductance > 0 ? linkage / e.inductance : 0;
    });
    network.cores.forEach((e, i) => {
      state[counts.capacitors + counts.inductors + i] = from.fluxLinkage[e.name] ?? 0;
    });
  }
  return transient;
}

function stateOf(transient: Transient): RunState {
  const { network, state, counts } = transient.stepper;
  const { capacitors, inductors } = counts;
  return {
    time: transient.time,
    phase: transient.phase,
    charge: Object.fromEntries(
      network.capacitors.map((e, i) => [e.name, state[i] * e.capacitance]),
    ),
    fluxLinkage: Object.fromEntries([
      ...network.inductors.map((e, i) => [e.name, state[capacitors + i] * e.inductance] as const),
      ...network.cores.map((e, i) => [e.name, state[capacitors + inductors + i]] as const),
    ]),
  };
}
