/**
 * Means, rms values and extremes of signals over whole drive periods, gathered step by step.
 * Between the ends of steps a signal is taken as straight.
 */
import type { Term } from '../network/probe.ts';
import type { Stepper } from '../transient/step.ts';

/** Reads signals of a stepper: each a weighted sum of what the stepper holds. */
export class Probes {
  /** Present values, one per signal; refreshed by `read`. */
  readonly values: Float64Array;
  private readonly stepper: Stepper;
  private readonly first: Int32Array;
  /** 0: node voltage, 1: state, 2: current of a characteristic. */
  private readonly kind: Uint8Array;
  private readonly index: Int32Array;
  private readonly weight: Float64Array;

  /** Throws if a term names an element that the network does not have: a bug of the caller. */
  constructor(stepper: Stepper, signals: readonly (readonly Term[])[]) {
    this.stepper = stepper;
    this.values = new Float64Array(signals.length);
    this.first = new Int32Array(signals.length + 1);
    signals.forEach((terms, k) => {
      this.first[k + 1] = this.first[k] + terms.length;
    });
    const placed = signals.flat().map((term) => place(stepper, term));
    this.kind = Uint8Array.from(placed, (p) => p.kind);
    this.index = Int32Array.from(placed, (p) => p.index);
    this.weight = Float64Array.from(placed, (p) => p.weight);
  }

  /** Present value of one signal. */
  value(signal: number): number {
    const { stepper, kind, index, weight } = this;
    let sum = 0;
    for (let p = this.first[signal]; p < this.first[signal + 1]; p++) {
      const from =
        kind[p] === 0 ? stepper.x : kind[p] === 1 ? stepper.state : stepper.deviceCurrent;
      sum += weight[p] * from[index[p]];
    }
    return sum;
  }

  /** Refresh `values`. */
  read(): void {
    for (let k = 0; k < this.values.length; k++) this.values[k] = this.value(k);
  }
}

function place(stepper: Stepper, term: Term): { kind: number; index: number; weight: number } {
  const { network, system } = stepper;
  const { weight } = term;
  const named = (list: readonly { readonly name: string }[], name: string): number => {
    const at = list.findIndex((e) => e.name === name);
    if (at < 0) throw new Error(`no element is named "${name}"`);
    return at;
  };
  const { capacitors, inductors } = stepper.counts;
  switch (term.of) {
    case 'node':
      return { kind: 0, index: system.unknown[network.node(term.node)], weight };
    case 'inductor':
      return { kind: 1, index: capacitors + named(network.inductors, term.name), weight };
    case 'core':
      return { kind: 1, index: capacitors + inductors + named(network.cores, term.name), weight };
    case 'characteristic':
      return {
        kind: 2,
        index: stepper.deviceOf(named(network.characteristics, term.name)),
        weight,
      };
  }
}

/** Statistics of a few signals over the period in progress and over the last whole one. */
export class PeriodMeter {
  /** Of the last whole period, one entry per signal. */
  readonly mean: Float64Array;
  readonly meanSquare: Float64Array;
  readonly min: Float64Array;
  readonly max: Float64Array;
  /** Mean of the product of signals 0 and 1 over the last whole period. */
  meanProduct = 0;
  /** Whole periods metered. */
  periods = 0;
  private readonly probes: Probes;
  private readonly last: Float64Array;
  private readonly sum: Float64Array;
  private readonly sumSquare: Float64Array;
  private readonly low: Float64Array;
  private readonly high: Float64Array;
  private sumProduct = 0;
  private span = 0;

  constructor(stepper: Stepper, signals: readonly (readonly Term[])[]) {
    this.probes = new Probes(stepper, signals);
    const make = (): Float64Array => new Float64Array(signals.length);
    this.mean = make();
    this.meanSquare = make();
    this.min = make();
    this.max = make();
    this.last = make();
    this.sum = make();
    this.sumSquare = make();
    this.low = make();
    this.high = make();
    this.probes.read();
    this.last.set(this.probes.values);
    this.begin();
  }

  /** Start a period from the end of the last step. */
  private begin(): void {
    this.low.set(this.last);
    this.high.set(this.last);
    this.sum.fill(0);
    this.sumSquare.fill(0);
    this.sumProduct = 0;
    this.span = 0;
  }

  /** Take in an accepted step of `h` seconds. Allocates nothing. */
  step(h: number): void {
    const { probes, last, sum, sumSquare, low, high } = this;
    probes.read();
    const { values } = probes;
    if (values.length > 1) {
      // Exact for the product of two straight lines.
      this.sumProduct +=
        (h / 6) * (last[0] * (2 * last[1] + values[1]) + values[0] * (last[1] + 2 * values[1]));
    }
    for (let k = 0; k < values.length; k++) {
      const before = last[k];
      const now = values[k];
      sum[k] += 0.5 * h * (before + now);
      sumSquare[k] += (h / 3) * (before * before + before * now + now * now);
      if (now < low[k]) low[k] = now;
      if (now > high[k]) high[k] = now;
      last[k] = now;
    }
    this.span += h;
  }

  /** Close the period: if it is a whole one, its statistics become the last whole period's. */
  close(whole = true): void {
    if (whole && this.span > 0) {
      const share = 1 / this.span;
      for (let k = 0; k < this.sum.length; k++) {
        this.mean[k] = this.sum[k] * share;
        this.meanSquare[k] = this.sumSquare[k] * share;
      }
      this.meanProduct = this.sumProduct * share;
      this.min.set(this.low);
      this.max.set(this.high);
      this.periods++;
    }
    this.begin();
  }
}
