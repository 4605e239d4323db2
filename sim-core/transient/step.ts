/**
 * One implicit step of a network: SDIRK2 with complementarity inside each stage.
 *
 * Method: two stages, γ = 1 − 1/√2, both with a = γh; stiffly accurate, L-stable, order 2.
 * Source: Alexander, SIAM J. Numer. Anal. 14 (1977) 1006. Stage 2 starts from
 * κX₁ + (1 − κ)xₙ with κ = (1 − γ)/γ, so only states are needed, never old derivatives.
 *
 * Within a stage every element is i = g·v + s. Devices with straight pieces are solved by
 * choosing the piece of each from the voltages just found until nothing changes. All
 * characteristics rise, so the stage minimises a convex function, the co-content (Millar,
 * Phil. Mag. 42 (1951) 1150), and an exact search along the line to the new point always ends.
 *
 * State vector: capacitor voltages (V), then inductor currents (A), then flux linkages (Wb).
 */
import { numberUnknowns, type System, stamp } from '../network/mna.ts';
import type { Network, Part, Piece } from '../network/network.ts';
import { factor } from '../sparse/ldl.ts';
import { FactorCache } from './factors.ts';

/** γ of the method. */
const GAMMA = 1 - Math.SQRT1_2;
const KAPPA = (1 - GAMMA) / GAMMA;

/**
 * Scale E of the error estimate h·E·(−(1−γ)f₀ + f₁ − γf₂). For x' = zx/h the step's error begins
 * with (3γ² − 2γ³ − 1/6)z³ and the bracket with (γ² − γ/2)z³; E is their quotient, −2/3. Between
 * events a network with constant sources is autonomous and affine, so that the estimate is the
 * leading error term itself.
 */
const ESTIMATE = (3 * GAMMA ** 2 - 2 * GAMMA ** 3 - 1 / 6) / (GAMMA ** 2 - GAMMA / 2);

/** Parts in the order in which energies are kept. */
export const PARTS: readonly Part[] = [
  'supply',
  'bridge',
  'tank',
  'transformer',
  'rectifier',
  'output',
  'load',
];

/** Rounds of piece changes before the line search takes over, and before the stage is given up. */
const FREE_ROUNDS = 10;
const MOST_ROUNDS = 200;

/** The least-content point is found when the search moves by less than this share of the voltages. */
const STALL = 1e-10;

/** A pivot this small beside its diagonal has lost all its digits. */
const LEAST_PIVOT = 1e-15;

/** Everything that depends on the length of the step alone. */
export interface StepLength {
  readonly h: number;
  readonly a: number;
  /** Capacitors: companion conductance, and the share of a voltage that is the capacitance's. */
  readonly gC: Float64Array;
  readonly shareC: Float64Array;
  /** Inductors: companion conductance, and the share of the old current. */
  readonly gL: Float64Array;
  readonly wL: Float64Array;
  /** The matrix without the devices. */
  readonly base: Float64Array;
  readonly keyA: number;
  readonly keyB: number;
}

/** Why a step could not be taken. */
export interface StepFailure {
  readonly kind: 'singular' | 'no-convergence' | 'not-finite';
  /** Name of the node or element concerned. */
  readonly name: string;
  /** Of a singular node: the elements there that hold it most stiffly and most weakly. */
  readonly stiffest?: string;
  readonly weakest?: string;
}

/** A well-spread 32-bit number for a small integer (finaliser of MurmurHash3, public domain). */
function mix(value: number): number {
  let x = Math.imul(value + 0x9e3779b9, 0x85ebca6b);
  x ^= x >>> 13;
  x = Math.imul(x, 0xc2b2ae35);
  x ^= x >>> 16;
  x = Math.imul(x, 0x27d4eb2f);
  return x ^ (x >>> 15);
}

/** Copies short arrays faster than `set`, whose call alone costs as much as forty elements. */
function copy(from: Float64Array, to: Float64Array): void {
  for (let i = 0; i < from.length; i++) to[i] = from[i];
}

/**
 * The working store. A loop over arrays that are constants of the module runs some three times
 * as fast as one over arrays found in an object's fields, because the compiler then knows where
 * they lie; and a step is nothing but such loops. The store serves one stepper at a time: a
 * stepper that is to attempt a step moves in, and the one before moves out. Sizes are far beyond
 * what any design needs (48 sections of 12-stage ladders: some 2,500 states, 1,200 nodes).
 */
const MOST_STATES = 8192;
const MOST_NODES = 4096;
const MOST_DEVICES = 4096;
const MOST_PIECES = 16384;
const MOST_ENTRIES = 65536;
const STATE = new Float64Array(MOST_STATES);
const HISTORY = new Float64Array(MOST_STATES);
const STAGE1 = new Float64Array(MOST_STATES);
const STAGE2 = new Float64Array(MOST_STATES);
const SPARE = new Float64Array(MOST_STATES);
const SLOPE0 = new Float64Array(MOST_STATES);
const SLOPE1 = new Float64Array(MOST_STATES);
const SLOPE2 = new Float64Array(MOST_STATES);
const SCALE = new Float64Array(MOST_STATES);
const X = new Float64Array(MOST_NODES);
const SOURCES = new Float64Array(MOST_NODES);
const TRIAL = new Float64Array(MOST_NODES);
const SPARE_X = new Float64Array(MOST_NODES);
const C_FROM = new Int32Array(MOST_STATES);
const C_TO = new Int32Array(MOST_STATES);
const C_G = new Float64Array(MOST_STATES);
const C_SHARE = new Float64Array(MOST_STATES);
const L_FROM = new Int32Array(MOST_STATES);
const L_TO = new Int32Array(MOST_STATES);
const L_STAR_FROM = new Int32Array(MOST_STATES);
const L_STAR_TO = new Int32Array(MOST_STATES);
const L_RATIO = new Float64Array(MOST_STATES);
const L_G = new Float64Array(MOST_STATES);
const L_W = new Float64Array(MOST_STATES);
const D_FROM = new Int32Array(MOST_DEVICES);
const D_TO = new Int32Array(MOST_DEVICES);
const D_PART = new Int32Array(MOST_DEVICES);
const D_PIECE = new Int32Array(MOST_DEVICES);
const D_CURRENT = new Float64Array(MOST_DEVICES);
const ROW = new Int32Array(MOST_ENTRIES);
const COLUMN = new Int32Array(MOST_ENTRIES);
const DIAGONAL = new Float64Array(MOST_NODES);
const FACTORS = new Float64Array(MOST_ENTRIES);
const PIECE_LOW = new Float64Array(MOST_PIECES);
const PIECE_HIGH = new Float64Array(MOST_PIECES);
const PIECE_SLOPE = new Float64Array(MOST_PIECES);
const PIECE_OFFSET = new Float64Array(MOST_PIECES);

/** The stepper that has the working store, and the step length that is loaded there. */
let resident: Stepper | null = null;
let loaded: StepLength | null = null;

const int = (values: readonly number[]): Int32Array => Int32Array.from(values);
const real = (values: readonly number[]): Float64Array => Float64Array.from(values);

/** A network ready to be stepped. Fields hold the present state; all arrays are reused. */
export class Stepper {
  readonly network: Network;
  readonly system: System;
  /** The state now; see the head of this file. */
  readonly state: Float64Array;
  /** Node voltages at the end of the last step, by unknown; the last entry is earth. */
  readonly x: Float64Array;
  /** Currents of the characteristics at the end of the last step. */
  readonly deviceCurrent: Float64Array;
  /** Magnitude to which each state's error is compared. */
  readonly scale: Float64Array;
  /** Energy delivered by sources, and turned to heat in each part, since the start (J). */
  delivered = 0;
  readonly dissipated = new Float64Array(PARTS.length);
  steps = 0;
  commutations = 0;
  factorisations = 0;
  solves = 0;
  /** Of the last attempted step: did a device change its piece; error over scale. */
  changed = false;
  error = 0;
  /** Of the last step reconsidered: how far the two methods end apart, over scale. */
  spread = 0;
  failure: StepFailure | null = null;

  private readonly nC: number;
  private readonly nL: number;
  private readonly nF: number;
  private readonly nR: number;
  private readonly nS: number;

  private readonly cFrom: Int32Array;
  private readonly cTo: Int32Array;
  private readonly cValue: Float64Array;
  private readonly cResistance: Float64Array;
  private readonly cPart: Int32Array;
  private readonly lFrom: Int32Array;
  private readonly lTo: Int32Array;
  private readonly lStarFrom: Int32Array;
  private readonly lStarTo: Int32Array;
  private readonly lRatio: Float64Array;
  private readonly lValue: Float64Array;
  private readonly lResistance: Float64Array;
  private readonly lPart: Int32Array;
  private readonly rFrom: Int32Array;
  private readonly rTo: Int32Array;
  private readonly rConductance: Float64Array;
  private readonly rPart: Int32Array;
  private readonly sFrom: Int32Array;
  private readonly sTo: Int32Array;
  private readonly sConductance: Float64Array;
  private readonly sPart: Int32Array;

  /** Devices: the cores, then the characteristics. */
  private readonly dFrom: Int32Array;
  private readonly dTo: Int32Array;
  private readonly dPart: Int32Array;
  /** Devices that are sources, and the resistance of each. */
  private readonly active: Int32Array;
  private readonly activeResistance: Float64Array;
  private readonly dCurves: Int32Array[];
  private readonly dGate: Int32Array;
  private readonly pieceLow: Float64Array;
  private readonly pieceHigh: Float64Array;
  private readonly pieceSlope: Float64Array;
  private readonly pieceOffset: Float64Array;
  private readonly pieceKeyA: Int32Array;
  private readonly pieceKeyB: Int32Array;
  /** Devices that have a gate. */
  private readonly gated: Int32Array;
  /** Capacitors that have a series resistance. */
  private readonly resistive: Int32Array;
  private readonly piece: Int32Array;
  private readonly pieceBefore: Int32Array;
  private readonly dSlope: Float64Array;
  private keyA = 0;
  private keyB = 0;

  private readonly cache: FactorCache;
  private readonly lengths = new Map<number, StepLength>();
  private readonly xBefore: Float64Array;
  private readonly spareHeat = new Float64Array(PARTS.length);
  /** Slopes at the end of the last step, while another stepper has the working store. */
  private readonly slope0: Float64Array;
  private slopeKnown = false;
  private readonly assembled: Float64Array;
  private readonly heat = new Float64Array(PARTS.length);
  private work = 0;
  /** Length of the step attempted last, seconds. */
  private attempted = 0;
  private factorsFor: StepLength | null = null;
  private factorsA = 0;
  private factorsB = 0;

  constructor(network: Network) {
    const system = numberUnknowns(network);
    this.network = network;
    this.system = system;
    const { resistors, capacitors, inductors, cores, characteristics, sines } = network;
    const at = (node: number): number => system.unknown[node];
    const part = (e: { readonly part: Part }): number => PARTS.indexOf(e.part);
    this.nC = capacitors.length;
    this.nL = inductors.length;
    this.nF = cores.length;
    this.nR = resistors.length;
    this.nS = this.nC + this.nL + this.nF;

    this.cFrom = int(capacitors.map((e) => at(e.from)));
    this.cTo = int(capacitors.map((e) => at(e.to)));
    this.cValue = real(capacitors.map((e) => e.capacitance));
    this.cResistance = real(capacitors.map((e) => e.resistance));
    this.cPart = int(capacitors.map(part));
    this.lFrom = int(inductors.map((e) => at(e.from)));
    this.lTo = int(inductors.map((e) => at(e.to)));
    this.lStarFrom = int(inductors.map((e) => at(e.starFrom)));
    this.lStarTo = int(inductors.map((e) => at(e.starTo)));
    this.lRatio = real(inductors.map((e) => e.ratio));
    this.lValue = real(inductors.map((e) => e.inductance));
    this.lResistance = real(inductors.map((e) => e.resistance));
    this.lPart = int(inductors.map(part));
    this.rFrom = int(resistors.map((e) => at(e.from)));
    this.rTo = int(resistors.map((e) => at(e.to)));
    this.rConductance = real(resistors.map((e) => 1 / e.resistance));
    this.rPart = int(resistors.map(part));
    this.sFrom = int(sines.map((e) => at(e.from)));
    this.sTo = int(sines.map((e) => at(e.to)));
    this.sConductance = real(sines.map((e) => 1 / e.resistance));
    this.sPart = int(sines.map(part));

    const devices = [...cores, ...characteristics];
    this.dFrom = int(devices.map((e) => at(e.from)));
    this.dTo = int(devices.map((e) => at(e.to)));
    this.dPart = int(devices.map(part));
    this.dGate = int(devices.map((e) => ('gate' in e ? e.gate : -1)));
    const pieces: Piece[] = [];
    this.dCurves = devices.map((e) => {
      const curves = 'curves' in e ? e.curves : [e.pieces];
      return int(
        curves.map((curve) => {
          const first = pieces.length;
          pieces.push(...curve);
          return first;
        }),
      );
    });
    this.pieceLow = real(pieces.map((p) => p.low));
    this.pieceHigh = real(pieces.map((p) => p.high));
    this.pieceSlope = real(pieces.map((p) => p.slope));
    this.pieceOffset = real(pieces.map((p) => p.offset));
    this.pieceKeyA = int(pieces.map((_, p) => mix(2 * p)));
    this.pieceKeyB = int(pieces.map((_, p) => mix(2 * p + 1)));
    this.active = int(characteristics.flatMap((e, k) => (e.source === 0 ? [] : [this.nF + k])));
    this.activeResistance = real(
      characteristics.flatMap((e) =>
        e.source === 0 ? [] : [1 / Math.max(...e.curves.flat().map((p) => p.slope))],
      ),
    );
    this.gated = int([...this.dGate.keys()].filter((d) => this.dGate[d] >= 0));
    this.resistive = int([...capacitors.keys()].filter((e) => capacitors[e].resistance > 0));
    this.piece = new Int32Array(devices.length);
    this.pieceBefore = new Int32Array(devices.length);
    this.dSlope = new Float64Array(devices.length);

    const n = system.pattern.n;
    const size = n + system.pattern.nnz;
    if (
      this.nS > MOST_STATES ||
      n >= MOST_NODES ||
      system.pattern.nnz > MOST_ENTRIES ||
      devices.length > MOST_DEVICES ||
      pieces.length > MOST_PIECES
    ) {
      throw new RangeError('the network is larger than any design can make it');
    }
    this.x = new Float64Array(n + 1);
    this.xBefore = new Float64Array(n + 1);
    this.assembled = new Float64Array(size);
    this.cache = new FactorCache(size);
    this.state = new Float64Array(this.nS);
    this.scale = new Float64Array(this.nS).fill(1);
    this.slope0 = new Float64Array(this.nS);
    this.deviceCurrent = new Float64Array(devices.length);

    this.state.set(capacitors.map((e) => e.voltage));
    this.state.set(
      inductors.map((e) => e.current),
      this.nC,
    );
    this.state.set(
      cores.map((e) => e.fluxLinkage),
      this.nC + this.nL,
    );
    for (let d = 0; d < devices.length; d++) {
      const start = d < this.nF ? this.state[this.nC + this.nL + d] : 0;
      this.place(d, this.dCurves[d][0], start);
    }
  }

  /** Number of capacitors, inductors and cores: where the parts of the state vector begin. */
  get counts(): {
    readonly capacitors: number;
    readonly inductors: number;
    readonly cores: number;
  } {
    return { capacitors: this.nC, inductors: this.nL, cores: this.nF };
  }

  /** Index of a characteristic's current in `deviceCurrent`, by its place in the network. */
  deviceOf(characteristic: number): number {
    return this.nF + characteristic;
  }

  /** Put device d on the piece of a curve (its first piece given) that holds x. */
  private place(d: number, curve: number, x: number): void {
    let p = curve;
    while (x > this.pieceHigh[p]) p++;
    this.move(d, p);
  }

  private move(d: number, p: number): void {
    const old = this.piece[d];
    // Each piece belongs to one device, so the exclusive or of all pieces' keys is a key of all.
    this.keyA ^= this.pieceKeyA[old] ^ this.pieceKeyA[p];
    this.keyB ^= this.pieceKeyB[old] ^ this.pieceKeyB[p];
    this.piece[d] = p;
    if (resident === this) D_PIECE[d] = p;
  }

  /**
   * Set the gate signals. Devices whose gate changed go to the piece of their other curve that
   * holds their present voltage; the state is not touched.
   * @param on  gate signal → on or off
   */
  setGates(on: (gate: number) => boolean): void {
    for (const d of this.gated) {
      const curves = this.dCurves[d];
      this.place(d, curves[on(this.dGate[d]) ? 1 : 0], this.x[this.dFrom[d]] - this.x[this.dTo[d]]);
    }
    // The slope at the start of the next step is not the slope at the end of the last.
    this.slopeKnown = false;
  }

  /** The tables for steps of length h seconds, h > 0; made once per length. */
  length(h: number): StepLength {
    const known = this.lengths.get(h);
    if (known) return known;
    const a = GAMMA * h;
    const gC = new Float64Array(this.nC);
    const shareC = new Float64Array(this.nC);
    for (let e = 0; e < this.nC; e++) {
      const reactance = a / this.cValue[e];
      gC[e] = 1 / (reactance + this.cResistance[e]);
      shareC[e] = this.cResistance[e] === 0 ? 1 : reactance * gC[e];
    }
    const gL = new Float64Array(this.nL);
    const wL = new Float64Array(this.nL);
    for (let e = 0; e < this.nL; e++) {
      const denominator = this.lValue[e] + a * this.lResistance[e];
      gL[e] = a / denominator;
      wL[e] = this.lValue[e] / denominator;
    }
    const base = new Float64Array(this.assembled.length);
    stamp(this.system.resistors, this.rConductance, base);
    stamp(this.system.capacitors, gC, base);
    stamp(this.system.inductors, gL, base);
    stamp(this.system.sines, this.sConductance, base);
    const serial = this.lengths.size + 1;
    const keyA = mix(-2 * serial);
    const keyB = mix(-2 * serial - 1);
    const made: StepLength = { h, a, gC, shareC, gL, wL, base, keyA, keyB };
    this.lengths.set(h, made);
    return made;
  }

  /**
   * Attempt one step. On success `state` is untouched still: `accept` takes the step,
   * `reject` forgets it. Allocates nothing.
   * @param step  from `length`
   * @param time  seconds, at the start of the step
   * @returns false if a stage could not be solved; `failure` then says why
   */
  attempt(step: StepLength, time: number): boolean {
    const { nS, state, scale } = this;
    const { a, h } = step;
    if (resident !== this) this.moveIn();
    for (let i = 0; i < nS; i++) {
      const now = state[i];
      STATE[i] = now;
      HISTORY[i] = now;
      SCALE[i] = scale[i];
    }
    this.attempted = h;
    const { piece, pieceBefore } = this;
    for (let d = 0; d < piece.length; d++) pieceBefore[d] = piece[d];
    copy(this.x, this.xBefore);
    const keyA = this.keyA;
    const keyB = this.keyB;
    for (let k = 0; k < this.heat.length; k++) this.heat[k] = 0;
    this.work = 0;
    this.failure = null;

    if (!this.stage(step, time + GAMMA * h, (1 - GAMMA) * h)) return this.fail();
    this.changed = this.keyA !== keyA || this.keyB !== keyB;
    for (let i = 0; i < nS; i++) {
      const reached = STAGE2[i];
      STAGE1[i] = reached;
      HISTORY[i] = STATE[i] + KAPPA * (reached - STATE[i]);
    }
    if (!this.stage(step, time + h, a)) return this.fail();
    this.changed ||= this.keyA !== keyA || this.keyB !== keyB;

    const inverse = 1 / a;
    let worst = 0;
    let sum = 0;
    for (let i = 0; i < nS; i++) {
      const f1 = (STAGE1[i] - STATE[i]) * inverse;
      const f2 = (STAGE2[i] - HISTORY[i]) * inverse;
      SLOPE1[i] = f1;
      SLOPE2[i] = f2;
      const error = Math.abs(f1 - GAMMA * f2 - (1 - GAMMA) * SLOPE0[i]);
      if (error > worst * SCALE[i]) worst = error / SCALE[i];
      sum += STAGE2[i];
    }
    this.showEnd();
    this.error = this.slopeKnown ? Math.abs(ESTIMATE) * h * worst : 0;
    // A sum is finite only if all its terms are.
    if (!(sum - sum === 0)) {
      let bad = 0;
      while (bad < nS - 1 && Number.isFinite(STAGE2[bad])) bad++;
      this.failure = { kind: 'not-finite', name: this.nameOfState(bad) };
      return false;
    }
    return true;
  }

  /** Take the working store from whoever has it. */
  private moveIn(): void {
    if (resident) resident.slope0.set(SLOPE0.subarray(0, resident.nS));
    resident = this;
    loaded = null;
    SLOPE0.set(this.slope0);
    C_FROM.set(this.cFrom);
    C_TO.set(this.cTo);
    L_FROM.set(this.lFrom);
    L_TO.set(this.lTo);
    L_STAR_FROM.set(this.lStarFrom);
    L_STAR_TO.set(this.lStarTo);
    L_RATIO.set(this.lRatio);
    D_FROM.set(this.dFrom);
    D_TO.set(this.dTo);
    D_PART.set(this.dPart);
    D_PIECE.set(this.piece);
    const { n, start, row } = this.system.pattern;
    ROW.set(row);
    for (let j = 0; j < n; j++) COLUMN.fill(j, start[j], start[j + 1]);
    this.factorsFor = null;
    PIECE_LOW.set(this.pieceLow);
    PIECE_HIGH.set(this.pieceHigh);
    PIECE_SLOPE.set(this.pieceSlope);
    PIECE_OFFSET.set(this.pieceOffset);
  }

  /** Bring the tables of a step length into the working store. */
  private load(step: StepLength): void {
    loaded = step;
    C_G.set(step.gC);
    C_SHARE.set(step.shareC);
    L_G.set(step.gL);
    L_W.set(step.wL);
  }

  /** Show node voltages and device currents to those who read them. */
  private showEnd(): void {
    const { x, deviceCurrent } = this;
    for (let i = 0; i < x.length; i++) x[i] = X[i];
    for (let d = 0; d < deviceCurrent.length; d++) deviceCurrent[d] = D_CURRENT[d];
  }

  private fail(): false {
    this.showEnd();
    return false;
  }

  /**
   * The error of the last attempt with its stiff part taken out: the estimate e is replaced by
   * (I − aJ)⁻¹e, one more solve with the same factors. A quick decay that the method has damped
   * leaves a large plain estimate and no error. Source: Hosea & Shampine, Appl. Numer. Math. 20
   * (1996) 21. Call only after an attempt that changed no piece.
   * @returns the filtered error over scale
   */
  filteredError(step: StepLength): number {
    const { nS, nC, nL, nF } = this;
    const { n } = this.system.pattern;
    const factor = ESTIMATE * step.h;
    for (let i = 0; i < nS; i++) {
      SPARE[i] = HISTORY[i];
      HISTORY[i] = factor * (SLOPE1[i] - GAMMA * SLOPE2[i] - (1 - GAMMA) * SLOPE0[i]);
      STAGE1[i] = STAGE2[i];
    }
    for (let i = 0; i <= n; i++) SPARE_X[i] = X[i];
    this.collectSources(step);
    for (let d = 0; d < nF; d++) {
      const s = PIECE_SLOPE[D_PIECE[d]] * HISTORY[nC + nL + d];
      SOURCES[D_FROM[d]] -= s;
      SOURCES[D_TO[d]] += s;
    }
    for (let i = 0; i <= n; i++) X[i] = SOURCES[i];
    this.solve();
    this.takeStates(step);
    let worst = 0;
    for (let i = 0; i < nS; i++) {
      const error = Math.abs(STAGE2[i]);
      if (error > worst * SCALE[i]) worst = error / SCALE[i];
      STAGE2[i] = STAGE1[i];
      HISTORY[i] = SPARE[i];
    }
    for (let i = 0; i <= n; i++) X[i] = SPARE_X[i];
    return worst;
  }

  /**
   * Look again at the step just attempted, in which a device has changed its piece. Where the
   * step is long beside a time constant, stage 2 starts from an extrapolated history, and a
   * diode may keep what only overshot: it lets charge into a capacitor and never out again. One
   * stage of implicit Euler over the whole step extrapolates nothing. Where both end on the same
   * pieces the step stands; where not, the Euler step takes its place. Allocates nothing once the
   * length has been met.
   * @returns false if the stage could not be solved; `failure` then says why
   */
  reconsider(step: StepLength, time: number): boolean {
    const { h } = step;
    const { nS } = this;
    const { n } = this.system.pattern;
    const keyA = this.keyA;
    const keyB = this.keyB;
    for (let i = 0; i < nS; i++) {
      SPARE[i] = STAGE2[i];
      HISTORY[i] = STATE[i];
    }
    for (let i = 0; i <= n; i++) SPARE_X[i] = X[i];
    const { work } = this;
    copy(this.heat, this.spareHeat);
    for (let k = 0; k < this.heat.length; k++) this.heat[k] = 0;
    this.work = 0;
    if (!this.stage(this.length(h / GAMMA), time + h, h)) return this.fail();
    let spread = 0;
    for (let i = 0; i < nS; i++) {
      const apart = Math.abs(STAGE2[i] - SPARE[i]);
      if (apart > spread * SCALE[i]) spread = apart / SCALE[i];
    }
    this.spread = spread;
    if (this.keyA === keyA && this.keyB === keyB) {
      // Device currents in the store are the Euler stage's; those shown are still the step's.
      for (let i = 0; i < nS; i++) STAGE2[i] = SPARE[i];
      for (let i = 0; i <= n; i++) X[i] = SPARE_X[i];
      copy(this.spareHeat, this.heat);
      this.work = work;
      return true;
    }
    for (let i = 0; i < nS; i++) {
      STAGE1[i] = STAGE2[i];
      SLOPE2[i] = (STAGE2[i] - STATE[i]) / h;
      SLOPE1[i] = SLOPE2[i];
    }
    this.showEnd();
    return true;
  }

  /** Take the step just attempted. */
  accept(): void {
    if (this.changed) {
      for (let d = 0; d < this.piece.length; d++) {
        if (this.piece[d] !== this.pieceBefore[d]) this.commutations++;
      }
    }
    if (this.changed || !this.slopeKnown) this.addSharpHeat(this.attempted);
    const { state, nS } = this;
    for (let i = 0; i < nS; i++) {
      state[i] = STAGE2[i];
      SLOPE0[i] = SLOPE2[i];
    }
    this.slopeKnown = true;
    this.delivered += this.work;
    for (let k = 0; k < this.heat.length; k++) this.dissipated[k] += this.heat[k];
    this.steps++;
  }

  /**
   * Heat of the sharp events in a step in which a device commutates or a gate has just moved.
   * A capacitance that discharges into a switch does so within picoseconds: charge and energy
   * come out right, but the power at the two stages does not show the pulse. For every storing
   * element, what the stages' powers say went in less what it holds more is that heat.
   */
  private addSharpHeat(h: number): void {
    const { nC, nL, nS, heat } = this;
    for (let i = 0; i < nC + nL; i++) {
      const weight = i < nC ? this.cValue[i] : this.lValue[i - nC];
      const into = h * ((1 - GAMMA) * STAGE1[i] * SLOPE1[i] + GAMMA * STAGE2[i] * SLOPE2[i]);
      const held = 0.5 * (STAGE2[i] - STATE[i]) * (STAGE2[i] + STATE[i]);
      heat[i < nC ? this.cPart[i] : this.lPart[i - nC]] += weight * (into - held);
    }
    for (let i = nC + nL; i < nS; i++) {
      const d = i - nC - nL;
      const into =
        h *
        ((1 - GAMMA) * this.coreCurrent(d, STAGE1[i]) * SLOPE1[i] +
          GAMMA * this.coreCurrent(d, STAGE2[i]) * SLOPE2[i]);
      const held = this.coreEnergy(d, STAGE2[i]) - this.coreEnergy(d, STATE[i]);
      heat[this.dPart[d]] += into - held;
    }
  }

  /** Magnetising current at a flux linkage, by search along the pieces. */
  private coreCurrent(core: number, fluxLinkage: number): number {
    let p = this.dCurves[core][0];
    while (fluxLinkage > this.pieceHigh[p]) p++;
    return this.pieceSlope[p] * fluxLinkage + this.pieceOffset[p];
  }

  /**
   * Forget the step just attempted: devices return to their pieces.
   * @param keepVoltages  leave the node voltages as the attempt found them
   */
  reject(keepVoltages = false): void {
    for (let d = 0; d < this.piece.length; d++) {
      if (this.piece[d] !== this.pieceBefore[d]) this.move(d, this.pieceBefore[d]);
    }
    if (!keepVoltages) copy(this.xBefore, this.x);
  }

  /**
   * Where in the step just attempted the first device left its piece, as a share of the step
   * from 0 to 1, by the secant through the ends of the step. Call before `reject`.
   */
  firstChange(): number {
    const { x, xBefore, piece, pieceBefore, pieceLow, pieceHigh, nF } = this;
    const fluxes = this.nC + this.nL;
    let first = 1;
    for (let d = 0; d < piece.length; d++) {
      const p = pieceBefore[d];
      if (piece[d] === p) continue;
      const from = this.dFrom[d];
      const to = this.dTo[d];
      const before = d < nF ? this.state[fluxes + d] : xBefore[from] - xBefore[to];
      const after = d < nF ? STAGE2[fluxes + d] : x[from] - x[to];
      const corner = after > before ? pieceHigh[p] : pieceLow[p];
      const share = (corner - before) / (after - before);
      // A device that came back within the step, or jumped at its start, says nothing: start.
      first = Math.min(first, share >= 0 && share <= 1 ? share : 0);
    }
    return first;
  }

  /** Energy stored in capacitances, inductances and cores (J). */
  storedEnergy(): number {
    let sum = 0;
    for (let e = 0; e < this.nC; e++) sum += 0.5 * this.cValue[e] * this.state[e] ** 2;
    for (let e = 0; e < this.nL; e++) sum += 0.5 * this.lValue[e] * this.state[this.nC + e] ** 2;
    for (let e = 0; e < this.nF; e++) sum += this.coreEnergy(e, this.state[this.nC + this.nL + e]);
    return sum;
  }

  /** Capacitance or inductance of each state (F, H): ½·weight·x² is its energy. */
  weights(): Float64Array {
    const { capacitors, inductors, cores } = this.network;
    return real([
      ...capacitors.map((e) => e.capacitance),
      ...inductors.map((e) => e.inductance),
      ...cores.map((e) => Math.max(...e.pieces.map((p) => p.slope))),
    ]);
  }

  /** Energy of the capacitances of some parts (J). */
  chargedEnergy(parts: readonly Part[]): number {
    let sum = 0;
    for (let e = 0; e < this.nC; e++) {
      if (parts.includes(PARTS[this.cPart[e]])) sum += 0.5 * this.cValue[e] * this.state[e] ** 2;
    }
    return sum;
  }

  /** ∫ i dλ from 0 to the flux linkage, along the pieces. */
  private coreEnergy(core: number, fluxLinkage: number): number {
    const from = Math.min(0, fluxLinkage);
    const to = Math.max(0, fluxLinkage);
    let sum = 0;
    for (const p of this.network.cores[core].pieces) {
      const low = Math.max(from, p.low);
      const high = Math.min(to, p.high);
      if (high > low) sum += (high - low) * (p.slope * 0.5 * (low + high) + p.offset);
    }
    return fluxLinkage < 0 ? -sum : sum;
  }

  /** Name of the element that owns a state. */
  nameOfState(i: number): string {
    const { capacitors, inductors, cores } = this.network;
    if (i < this.nC) return capacitors[i].name;
    if (i < this.nC + this.nL) return inductors[i - this.nC].name;
    return cores[i - this.nC - this.nL].name;
  }

  /**
   * Solve one stage: from HISTORY to STAGE2 = HISTORY + a·f(STAGE2).
   * @param weight  seconds for which this stage's powers count
   */
  private stage(step: StepLength, time: number, weight: number): boolean {
    this.collectSources(step);
    this.addEmfs(time);
    if (!this.findPieces(step)) return false;
    this.takeStates(step);
    this.addPowers(time, weight);
    return true;
  }

  /** Right-hand side of what the storing elements remember. */
  private collectSources(step: StepLength): void {
    if (loaded !== step) this.load(step);
    const { nC, nL } = this;
    const { n } = this.system.pattern;
    for (let i = 0; i <= n; i++) SOURCES[i] = 0;
    for (let e = 0; e < nC; e++) {
      const s = C_G[e] * HISTORY[e];
      SOURCES[C_FROM[e]] += s;
      SOURCES[C_TO[e]] -= s;
    }
    for (let e = 0; e < nL; e++) {
      const s = L_W[e] * HISTORY[nC + e];
      SOURCES[L_FROM[e]] -= s;
      SOURCES[L_TO[e]] += s;
      const reflected = L_RATIO[e] * s;
      SOURCES[L_STAR_FROM[e]] -= reflected;
      SOURCES[L_STAR_TO[e]] += reflected;
    }
  }

  /** Right-hand side of the sine sources. */
  private addEmfs(time: number): void {
    for (let e = 0; e < this.sFrom.length; e++) {
      const s = this.sConductance[e] * this.emf(e, time);
      SOURCES[this.sFrom[e]] += s;
      SOURCES[this.sTo[e]] -= s;
    }
  }

  private emf(sine: number, time: number): number {
    const { amplitude, frequency, phase } = this.network.sines[sine];
    return amplitude * Math.sin(2 * Math.PI * frequency * time + phase);
  }

  /** Solve for X, changing devices' pieces until all hold. */
  private findPieces(step: StepLength): boolean {
    const { nF } = this;
    const { a } = step;
    const { n } = this.system.pattern;
    const fluxes = this.nC + this.nL;
    const devices = this.piece.length;
    for (let round = 0; round < MOST_ROUNDS; round++) {
      if (round >= FREE_ROUNDS) for (let i = 0; i <= n; i++) TRIAL[i] = X[i];
      if (!this.solveNow(step)) return false;
      // Pieces may cycle; the exact minimum along the line cannot. Where it no longer moves,
      // what is left to decide is rounding at corners, where either piece is right.
      if (round >= FREE_ROUNDS && this.searchLine(step) < STALL) return true;
      let last = -1;
      for (let d = 0; d < devices; d++) {
        const from = X[D_FROM[d]];
        const to = X[D_TO[d]];
        const at = d < nF ? HISTORY[fluxes + d] + a * (from - to) : from - to;
        let p = D_PIECE[d];
        if (at <= PIECE_HIGH[p] && at >= PIECE_LOW[p]) continue;
        // Pieces join continuously: within rounding of a corner either of them is right.
        const slack = 1e-11 * (d < nF ? Math.abs(at) : Math.abs(from) + Math.abs(to));
        if (at <= PIECE_HIGH[p] + slack && at >= PIECE_LOW[p] - slack) continue;
        while (at > PIECE_HIGH[p]) p++;
        while (at < PIECE_LOW[p]) p--;
        if (!(at - at === 0)) break;
        this.move(d, p);
        last = d;
      }
      if (last < 0) return true;
      if (round === MOST_ROUNDS - 1) {
        const { cores, characteristics } = this.network;
        const name = last < nF ? cores[last].name : characteristics[last - nF].name;
        this.failure = { kind: 'no-convergence', name };
      }
    }
    return false;
  }

  /** Solve for X with the devices on their present pieces. */
  private solveNow(step: StepLength): boolean {
    const { nF } = this;
    const { n } = this.system.pattern;
    const devices = this.piece.length;
    const fluxes = this.nC + this.nL;
    if (this.factorsFor !== step || this.factorsA !== this.keyA || this.factorsB !== this.keyB) {
      if (!this.factorNow(step)) return false;
    }
    for (let i = 0; i <= n; i++) X[i] = SOURCES[i];
    for (let d = 0; d < devices; d++) {
      const p = D_PIECE[d];
      let s = PIECE_OFFSET[p];
      if (d < nF) s += PIECE_SLOPE[p] * HISTORY[fluxes + d];
      X[D_FROM[d]] -= s;
      X[D_TO[d]] += s;
    }
    this.solve();
    return true;
  }

  /** Solve L·D·Lᵀ X = X in place with the factors at hand, each triangle as one flat loop. */
  private solve(): void {
    const { n, nnz } = this.system.pattern;
    for (let p = 0; p < nnz; p++) X[ROW[p]] -= FACTORS[p] * X[COLUMN[p]];
    for (let j = 0; j < n; j++) X[j] *= DIAGONAL[j];
    for (let p = nnz - 1; p >= 0; p--) X[COLUMN[p]] -= FACTORS[p] * X[ROW[p]];
    X[n] = 0;
    this.solves++;
  }

  private factorNow(step: StepLength): boolean {
    const { pattern } = this.system;
    const a = this.keyA ^ step.keyA;
    const b = this.keyB ^ step.keyB;
    let factors = this.cache.find(a, b);
    if (!factors) {
      const { assembled, dSlope, piece, pieceSlope, nF } = this;
      for (let d = 0; d < piece.length; d++) {
        dSlope[d] = d < nF ? step.a * pieceSlope[piece[d]] : pieceSlope[piece[d]];
      }
      assembled.set(step.base);
      stamp(this.system.cores, dSlope, assembled);
      stamp(this.system.characteristics, dSlope, assembled, nF);
      factors = this.cache.add(a, b);
      factors.set(assembled);
      let bad = factor(pattern, factors);
      for (let k = 0; k < pattern.n && bad < 0; k++) {
        if (factors[k] * assembled[k] * LEAST_PIVOT > 1) bad = k;
      }
      this.factorisations++;
      if (bad >= 0) {
        this.cache.clear();
        this.factorsFor = null;
        this.failure = { kind: 'singular', name: this.system.nodeOf[bad], ...this.hold(step, bad) };
        return false;
      }
    }
    const { n, nnz } = pattern;
    for (let j = 0; j < n; j++) DIAGONAL[j] = factors[j];
    for (let p = 0; p < nnz; p++) FACTORS[p] = factors[n + p];
    this.factorsFor = step;
    this.factorsA = this.keyA;
    this.factorsB = this.keyB;
    return true;
  }

  /** The elements that hold an unknown most stiffly and most weakly. */
  private hold(step: StepLength, unknown: number): { stiffest?: string; weakest?: string } {
    const { resistors, capacitors, inductors, cores, characteristics, sines } = this.network;
    const at = (node: number): boolean => this.system.unknown[node] === unknown;
    const held = [
      ...resistors.map((e, k) => ({ e, g: this.rConductance[k] })),
      ...capacitors.map((e, k) => ({ e, g: step.gC[k] })),
      ...inductors.map((e, k) => ({ e, g: step.gL[k] })),
      ...[...cores, ...characteristics].map((e, d) => ({ e, g: this.dSlope[d] })),
      ...sines.map((e, k) => ({ e, g: this.sConductance[k] })),
    ]
      .filter(({ e, g }) => g > 0 && (at(e.from) || at(e.to)))
      .sort((a, b) => b.g - a.g);
    return { stiffest: held[0]?.e.name, weakest: held.at(-1)?.e.name };
  }

  /**
   * Move X to the point of least co-content on the line from TRIAL to X.
   * The derivative along the line is a rising function in straight pieces: halve or take the
   * secant until its change of sign is bracketed closely.
   * @returns how far X then lies from TRIAL, as a share of the largest voltage
   */
  private searchLine(step: StepLength): number {
    const { n } = this.system.pattern;
    let share = 1;
    const atFull = this.slopeAlong(step, 1);
    if (atFull > 0) {
      let low = 0;
      let high = 1;
      let atLow = this.slopeAlong(step, 0);
      let atHigh = atFull;
      for (let k = 0; atLow < 0 && k < 60 && high - low > 1e-14; k++) {
        const secant = low - (atLow * (high - low)) / (atHigh - atLow);
        const t = k % 3 === 2 || !(secant > low && secant < high) ? 0.5 * (low + high) : secant;
        const value = this.slopeAlong(step, t);
        if (value < 0) {
          low = t;
          atLow = value;
        } else {
          high = t;
          atHigh = value;
        }
      }
      share = atLow < 0 ? high : 0;
    }
    let moved = 0;
    let size = Number.MIN_VALUE;
    for (let i = 0; i <= n; i++) {
      const step = share * (X[i] - TRIAL[i]);
      X[i] = TRIAL[i] + step;
      moved = Math.max(moved, Math.abs(step));
      size = Math.max(size, Math.abs(X[i]));
    }
    return moved / size;
  }

  /** Derivative of the co-content along TRIAL → X, at the share t of the way. */
  private slopeAlong(step: StepLength, t: number): number {
    const { nC, nL, nF } = this;
    const { n } = this.system.pattern;
    const voltage = (from: number, to: number): number =>
      TRIAL[from] - TRIAL[to] + t * (X[from] - TRIAL[from] - (X[to] - TRIAL[to]));
    const direction = (from: number, to: number): number =>
      X[from] - TRIAL[from] - (X[to] - TRIAL[to]);
    let sum = 0;
    for (let i = 0; i < n; i++) sum -= SOURCES[i] * (X[i] - TRIAL[i]);
    for (let e = 0; e < nC; e++) {
      sum +=
        step.gC[e] * voltage(this.cFrom[e], this.cTo[e]) * direction(this.cFrom[e], this.cTo[e]);
    }
    for (let e = 0; e < nL; e++) {
      const v =
        voltage(this.lFrom[e], this.lTo[e]) +
        this.lRatio[e] * voltage(this.lStarFrom[e], this.lStarTo[e]);
      const dv =
        direction(this.lFrom[e], this.lTo[e]) +
        this.lRatio[e] * direction(this.lStarFrom[e], this.lStarTo[e]);
      sum += step.gL[e] * v * dv;
    }
    for (let e = 0; e < this.nR; e++) {
      const { rFrom, rTo } = this;
      sum += this.rConductance[e] * voltage(rFrom[e], rTo[e]) * direction(rFrom[e], rTo[e]);
    }
    for (let e = 0; e < this.sFrom.length; e++) {
      const { sFrom, sTo } = this;
      sum += this.sConductance[e] * voltage(sFrom[e], sTo[e]) * direction(sFrom[e], sTo[e]);
    }
    for (let d = 0; d < this.piece.length; d++) {
      const v = voltage(this.dFrom[d], this.dTo[d]);
      const at = d < nF ? HISTORY[nC + nL + d] + step.a * v : v;
      let p = this.piece[d];
      while (at > this.pieceHigh[p]) p++;
      while (at < this.pieceLow[p]) p--;
      sum +=
        (this.pieceSlope[p] * at + this.pieceOffset[p]) * direction(this.dFrom[d], this.dTo[d]);
    }
    return sum;
  }

  /** States at the end of a stage, from the node voltages: STAGE2 from HISTORY and X. */
  private takeStates({ a }: StepLength): void {
    const { nC, nL, nF } = this;
    for (let e = 0; e < nC; e++) {
      const old = HISTORY[e];
      STAGE2[e] = old + C_SHARE[e] * (X[C_FROM[e]] - X[C_TO[e]] - old);
    }
    for (let e = 0; e < nL; e++) {
      const v = X[L_FROM[e]] - X[L_TO[e]] + L_RATIO[e] * (X[L_STAR_FROM[e]] - X[L_STAR_TO[e]]);
      STAGE2[nC + e] = L_W[e] * HISTORY[nC + e] + L_G[e] * v;
    }
    for (let d = 0; d < nF; d++) {
      const i = nC + nL + d;
      STAGE2[i] = HISTORY[i] + a * (X[D_FROM[d]] - X[D_TO[d]]);
    }
  }

  /** Add this stage's powers × weight to the work and heat of the step. */
  private addPowers(time: number, weight: number): void {
    const { nC, nL, nF, nR, heat, active } = this;
    const devices = this.piece.length;
    for (let d = 0; d < nF; d++) {
      const p = D_PIECE[d];
      D_CURRENT[d] = PIECE_SLOPE[p] * STAGE2[nC + nL + d] + PIECE_OFFSET[p];
    }
    let work = 0;
    for (let d = nF; d < devices; d++) {
      const v = X[D_FROM[d]] - X[D_TO[d]];
      const p = D_PIECE[d];
      const i = PIECE_SLOPE[p] * v + PIECE_OFFSET[p];
      D_CURRENT[d] = i;
      heat[D_PART[d]] += weight * v * i;
    }
    for (let k = 0; k < active.length; k++) {
      const d = active[k];
      const i = D_CURRENT[d];
      const delivered = i * (this.activeResistance[k] * i - (X[D_FROM[d]] - X[D_TO[d]]));
      heat[D_PART[d]] += weight * delivered;
      work += delivered;
    }
    this.work += weight * work;
    for (let e = 0; e < nR; e++) {
      const v = X[this.rFrom[e]] - X[this.rTo[e]];
      heat[this.rPart[e]] += weight * this.rConductance[e] * v * v;
    }
    for (let e = 0; e < nL; e++) {
      const i = STAGE2[nC + e];
      heat[this.lPart[e]] += weight * this.lResistance[e] * i * i;
    }
    for (let k = 0; k < this.resistive.length; k++) {
      const e = this.resistive[k];
      const v = X[this.cFrom[e]] - X[this.cTo[e]] - STAGE2[e];
      heat[this.cPart[e]] += (weight * v * v) / this.cResistance[e];
    }
    for (let e = 0; e < this.sFrom.length; e++) {
      const emf = this.emf(e, time);
      const i = this.sConductance[e] * (X[this.sFrom[e]] - X[this.sTo[e]] - emf);
      heat[this.sPart[e]] += (weight * i * i) / this.sConductance[e];
      this.work -= weight * emf * i;
    }
  }
}
