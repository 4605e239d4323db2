/**
 * Fill-reducing ordering of a symmetric sparsity pattern.
 * Source: minimum degree, Tinney & Walker, Proc. IEEE 55 (1967) 1801.
 */

/**
 * Order the unknowns of a symmetric matrix by minimum degree.
 * @param n       number of unknowns
 * @param pairs   off-diagonal positions [i, j], in any order, repeats allowed
 * @returns order, length n: order[k] is the unknown that is eliminated k-th
 */
export function minimumDegree(
  n: number,
  pairs: readonly (readonly [number, number])[],
): Int32Array {
  const neighbours: Set<number>[] = Array.from({ length: n }, () => new Set());
  for (const [i, j] of pairs) {
    if (i === j) continue;
    neighbours[i].add(j);
    neighbours[j].add(i);
  }
  // Unknowns wait in one bucket per degree; the lowest non-empty bucket is eliminated next.
  const buckets: Set<number>[] = Array.from({ length: n }, () => new Set());
  for (let i = 0; i < n; i++) buckets[neighbours[i].size].add(i);
  const order = new Int32Array(n);
  let lowest = 0;
  for (let k = 0; k < n; k++) {
    while (buckets[lowest].size === 0) lowest++;
    const pivot = buckets[lowest].values().next().value as number;
    buckets[lowest].delete(pivot);
    order[k] = pivot;
    const clique = [...neighbours[pivot]];
    for (const i of clique) {
      const adjacent = neighbours[i];
      buckets[adjacent.size].delete(i);
      adjacent.delete(pivot);
      for (const j of clique) if (j !== i) adjacent.add(j);
      buckets[adjacent.size].add(i);
      if (adjacent.size < lowest) lowest = adjacent.size;
    }
  }
  return order;
}
