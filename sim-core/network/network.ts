/**
 * A network of elements between named nodes. Every element is a branch with an incidence
 * vector; node 'earth' is the reference. Passive sign convention: the current of an element
 * enters at its first terminal.
 * Source: Ho, Ruehli & Brennan, IEEE Trans. CAS-22 (1975) 504, reduced so that branch currents
 * with a companion conductance are eliminated and the matrix stays symmetric positive definite.
 */

/** Where an element belongs when losses are added up. */
export type Part = 'supply' | 'bridge' | 'tank' | 'transformer' | 'rectifier' | 'output' | 'load';

/** i = v / resistance. */
export interface Resistor {
  readonly name: string;
  readonly part: Part;
  readonly from: number;
  readonly to: number;
  readonly resistance: number;
}

/** Capacitance (F) in series with a resistance (Ω, may be 0). State: voltage of the capacitance. */
export interface Capacitor {
  readonly name: string;
  readonly part: Part;
  readonly from: number;
  readonly to: number;
  readonly capacitance: number;
  readonly resistance: number;
  readonly voltage: number;
}

/**
 * Inductance (H) in series with a resistance (Ω); with `ratio` not 0 also in series with an EMF
 * of ratio × the voltage from `starFrom` to `starTo`, which carries the reflected current: a
 * transformer winding. v = v(from) − v(to) + ratio·(v(starFrom) − v(starTo)). State: current.
 */
export interface Inductor {
  readonly name: string;
  readonly part: Part;
  readonly from: number;
  readonly to: number;
  readonly inductance: number;
  readonly resistance: number;
  readonly ratio: number;
  readonly starFrom: number;
  readonly starTo: number;
  readonly current: number;
}

/**
 * One straight piece of a characteristic: y = slope·x + offset from `low` to `high` in x.
 * Pieces are given in rising order, join continuously, and cover −∞ to ∞; slopes are ≥ 0.
 */
export interface Piece {
  readonly low: number;
  readonly high: number;
  readonly slope: number;
  readonly offset: number;
}

/**
 * A magnetising branch: current i(λ) in straight pieces (x = flux linkage, Wb; y = A).
 * State: flux linkage, dλ/dt = v.
 */
export interface Core {
  readonly name: string;
  readonly part: Part;
  readonly from: number;
  readonly to: number;
  readonly pieces: readonly Piece[];
  readonly fluxLinkage: number;
}

/**
 * A one-port without memory: current i(v) in straight pieces (x = V, y = A). A switch has two
 * characteristics, [gate off, gate on], and `gate` names its gate signal; others have one.
 * `source` is the open-circuit voltage (V) of a source, 0 for a passive part. A source delivers
 * what leaves its terminals and what its resistance, the inverse of its steepest slope, burns.
 */
export interface Characteristic {
  readonly name: string;
  readonly part: Part;
  readonly from: number;
  readonly to: number;
  readonly curves: readonly (readonly Piece[])[];
  readonly gate: number;
  readonly source: number;
}

/** A sine voltage source amplitude·sin(2πft + phase) behind a resistance (Ω, > 0). */
export interface SineSource {
  readonly name: string;
  readonly part: Part;
  readonly from: number;
  readonly to: number;
  readonly amplitude: number;
  readonly frequency: number;
  readonly phase: number;
  readonly resistance: number;
}

/** The network as data. Node 0 is earth. */
export interface Network {
  /** Node names by index; nodes that were joined share an index and keep the first name. */
  readonly nodes: readonly string[];
  readonly resistors: readonly Resistor[];
  readonly capacitors: readonly Capacitor[];
  readonly inductors: readonly Inductor[];
  readonly cores: readonly Core[];
  readonly characteristics: readonly Characteristic[];
  readonly sines: readonly SineSource[];
  /** Index of the node of a name. Throws on a name that was never used: a bug of the caller. */
  node(name: string): number;
}

/** Name of the reference node. */
export const EARTH = 'earth';

type Between<T> = Omit<T, 'from' | 'to' | 'starFrom' | 'starTo'>;

/** Collects elements between named nodes; `finish` numbers the nodes. */
export class NetworkBuilder {
  private readonly names: string[] = [EARTH];
  private readonly index = new Map<string, number>([[EARTH, 0]]);
  private readonly parent: number[] = [0];
  private readonly resistors: Resistor[] = [];
  private readonly capacitors: Capacitor[] = [];
  private readonly inductors: Inductor[] = [];
  private readonly cores: Core[] = [];
  private readonly characteristics: Characteristic[] = [];
  private readonly sines: SineSource[] = [];

  private at(name: string): number {
    let node = this.index.get(name);
    if (node === undefined) {
      node = this.names.length;
      this.names.push(name);
      this.parent.push(node);
      this.index.set(name, node);
    }
    return node;
  }

  private root(node: number): number {
    let at = node;
    while (this.parent[at] !== at) at = this.parent[at];
    return at;
  }

  /** Make two nodes one: an ideal connection. */
  join(a: string, b: string): void {
    const x = this.root(this.at(a));
    const y = this.root(this.at(b));
    this.parent[Math.max(x, y)] = Math.min(x, y);
  }

  /** A resistor; 0 Ω joins its nodes, null leaves it out. */
  resistor(name: string, part: Part, from: string, to: string, resistance: number | null): void {
    if (resistance === null) {
      this.at(from);
      this.at(to);
    } else if (resistance === 0) this.join(from, to);
    else this.resistors.push({ name, part, from: this.at(from), to: this.at(to), resistance });
  }

  /** A capacitor; 0 F or null leaves it out. */
  capacitor(
    name: string,
    part: Part,
    from: string,
    to: string,
    capacitance: number | null,
    resistance = 0,
    voltage = 0,
  ): void {
    const ends = { from: this.at(from), to: this.at(to) };
    if (capacitance === null || capacitance === 0) return;
    this.capacitors.push({ name, part, ...ends, capacitance, resistance, voltage });
  }

  /** An inductor, or a winding when a ratio and its star nodes are given. */
  inductor(
    name: string,
    part: Part,
    from: string,
    to: string,
    inductance: number,
    resistance: number,
    star?: { readonly ratio: number; readonly from: string; readonly to: string },
  ): void {
    this.inductors.push({
      name,
      part,
      from: this.at(from),
      to: this.at(to),
      inductance,
      resistance,
      ratio: star?.ratio ?? 0,
      starFrom: this.at(star?.from ?? EARTH),
      starTo: this.at(star?.to ?? EARTH),
      current: 0,
    });
  }

  /** A magnetising branch. */
  core(from: string, to: string, core: Between<Core>): void {
    this.cores.push({ ...core, from: this.at(from), to: this.at(to) });
  }

  /** A one-port without memory. */
  characteristic(from: string, to: string, element: Between<Characteristic>): void {
    this.characteristics.push({ ...element, from: this.at(from), to: this.at(to) });
  }

  /** A sine source behind a resistance. */
  sine(from: string, to: string, source: Between<SineSource>): void {
    this.sines.push({ ...source, from: this.at(from), to: this.at(to) });
  }

  /** Number the nodes (joined ones become one) and drop elements with both ends on one node. */
  finish(): Network {
    const number = new Int32Array(this.names.length).fill(-1);
    const nodes: string[] = [];
    for (let i = 0; i < this.names.length; i++) {
      const root = this.root(i);
      if (number[root] < 0) {
        number[root] = nodes.length;
        nodes.push(this.names[root]);
      }
      number[i] = number[root];
    }
    const ends = <T extends { readonly from: number; readonly to: number }>(e: T): T => ({
      ...e,
      from: number[e.from],
      to: number[e.to],
    });
    const open = (e: { readonly from: number; readonly to: number }): boolean => e.from !== e.to;
    const index = this.index;
    return {
      nodes,
      resistors: this.resistors.map(ends).filter(open),
      capacitors: this.capacitors.map(ends).filter(open),
      inductors: this.inductors
        .map((e) => ({ ...ends(e), starFrom: number[e.starFrom], starTo: number[e.starTo] }))
        .filter((e) => open(e) || e.ratio !== 0),
      cores: this.cores.map(ends).filter(open),
      characteristics: this.characteristics.map(ends).filter(open),
      sines: this.sines.map(ends).filter(open),
      node(name: string): number {
        const at = index.get(name);
        if (at === undefined) throw new Error(`no node is named "${name}"`);
        return number[at];
      },
    };
  }
}

/**
 * Straight pieces through corners: y rises from (x₀, y₀) … with a slope before the first
 * corner, between corners by connection, and a slope after the last.
 * @param corners  [x, y] in rising x, at least one
 */
export function piecesThrough(
  corners: readonly (readonly [number, number])[],
  slopeBefore: number,
  slopeAfter: number,
): Piece[] {
  const line = (low: number, high: number, slope: number, [x, y]: readonly [number, number]) => ({
    low,
    high,
    slope,
    offset: y - slope * x,
  });
  const last = corners.length - 1;
  const pieces: Piece[] = [line(-Infinity, corners[0][0], slopeBefore, corners[0])];
  for (let k = 0; k < last; k++) {
    const [x0, y0] = corners[k];
    const [x1, y1] = corners[k + 1];
    pieces.push(line(x0, x1, (y1 - y0) / (x1 - x0), corners[k]));
  }
  pieces.push(line(corners[last][0], Infinity, slopeAfter, corners[last]));
  return pieces;
}
