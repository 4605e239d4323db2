/**
 * Numbering of a network's unknowns and the places its elements take in the matrix.
 * The matrix is Σ g·d·dᵀ over all elements, d being the incidence vector; see network.ts.
 */
import { analyse, entry, type Pattern } from '../sparse/ldl.ts';
import { minimumDegree } from '../sparse/order.ts';
import type { Network } from './network.ts';

/** Where the elements of one kind stamp: element e fills entries first[e] … first[e+1] − 1. */
export interface Stamps {
  readonly first: Int32Array;
  /** Position in the value array of the matrix. */
  readonly position: Int32Array;
  /** Product of the two incidence coefficients. */
  readonly weight: Float64Array;
}

/** The numbered network. */
export interface System {
  readonly pattern: Pattern;
  /** Node name of each unknown. */
  readonly nodeOf: readonly string[];
  /** Unknown of each node of the network; earth has the extra number n, held at 0 V. */
  readonly unknown: Int32Array;
  readonly resistors: Stamps;
  readonly capacitors: Stamps;
  readonly inductors: Stamps;
  readonly cores: Stamps;
  readonly characteristics: Stamps;
  readonly sines: Stamps;
}

/** Terms [node, coefficient] of an element's incidence vector. */
type Incidence = readonly (readonly [number, number])[];

interface TwoEnds {
  readonly from: number;
  readonly to: number;
}

const between = (e: TwoEnds): Incidence => [
  [e.from, 1],
  [e.to, -1],
];

/** Number the unknowns of a network for little fill and find every element's stamps. */
export function numberUnknowns(network: Network): System {
  const n = network.nodes.length - 1;
  const windings = network.inductors.map((e): Incidence => {
    if (e.ratio === 0) return between(e);
    // Terminals may coincide (an end of the section on the primary's return): add them up.
    const sum = new Map<number, number>();
    for (const [node, k] of [
      [e.from, 1],
      [e.to, -1],
      [e.starFrom, e.ratio],
      [e.starTo, -e.ratio],
    ])
      sum.set(node, (sum.get(node) ?? 0) + k);
    return [...sum];
  });
  const groups = {
    resistors: network.resistors.map(between),
    capacitors: network.capacitors.map(between),
    inductors: windings,
    cores: network.cores.map(between),
    characteristics: network.characteristics.map(between),
    sines: network.sines.map(between),
  };

  const pairs: [number, number][] = [];
  for (const incidences of Object.values(groups)) {
    for (const d of incidences) {
      for (const [i] of d) for (const [j] of d) if (i > j && j > 0) pairs.push([i - 1, j - 1]);
    }
  }
  const order = minimumDegree(n, pairs);
  const unknown = new Int32Array(n + 1);
  unknown[0] = n;
  order.forEach((node, k) => {
    unknown[node + 1] = k;
  });
  const pattern = analyse(
    n,
    pairs.map(([i, j]) => [unknown[i + 1], unknown[j + 1]]),
  );

  const stampsOf = (incidences: readonly Incidence[]): Stamps => {
    const first = new Int32Array(incidences.length + 1);
    const position: number[] = [];
    const weight: number[] = [];
    incidences.forEach((d, e) => {
      d.forEach(([i, ci], a) => {
        for (const [j, cj] of d.slice(a)) {
          if (i === 0 || j === 0) continue;
          position.push(entry(pattern, unknown[i], unknown[j]));
          weight.push(ci * cj);
        }
      });
      first[e + 1] = position.length;
    });
    return { first, position: Int32Array.from(position), weight: Float64Array.from(weight) };
  };

  return {
    pattern,
    nodeOf: Array.from(order, (node) => network.nodes[node + 1]),
    unknown,
    resistors: stampsOf(groups.resistors),
    capacitors: stampsOf(groups.capacitors),
    inductors: stampsOf(groups.inductors),
    cores: stampsOf(groups.cores),
    characteristics: stampsOf(groups.characteristics),
    sines: stampsOf(groups.sines),
  };
}

/**
 * Add conductances to a matrix: values[position] += weight · g[from + e] for every element e of
 * the stamps. Allocates nothing.
 */
export function stamp(stamps: Stamps, g: Float64Array, values: Float64Array, from = 0): void {
  const { first, position, weight } = stamps;
  for (let e = 0, p = 0; e < first.length - 1; e++) {
    const conductance = g[from + e];
    for (const end = first[e + 1]; p < end; p++) values[position[p]] += weight[p] * conductance;
  }
}
