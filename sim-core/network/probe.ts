/** A probe reads one signal of a network: a weighted sum of voltages, currents and flux linkages. */

/** One term of a probe: `weight` times the present value of something in the network. */
export type Term =
  | { readonly of: 'node'; readonly node: string; readonly weight: number }
  | { readonly of: 'inductor'; readonly name: string; readonly weight: number }
  | { readonly of: 'core'; readonly name: string; readonly weight: number }
  | { readonly of: 'characteristic'; readonly name: string; readonly weight: number };

/** The voltage from one node to another. */
export function voltageBetween(from: string, to: string, weight = 1): Term[] {
  return [
    { of: 'node', node: from, weight },
    { of: 'node', node: to, weight: -weight },
  ];
}
