/**
 * LDLᵀ factors of a symmetric positive definite matrix whose pattern never changes.
 * The pattern is analysed once; a numeric factorisation then runs over flat index lists and
 * allocates nothing. No pivoting: a positive definite matrix needs none.
 * Source: George & Liu, Computer Solution of Large Sparse Positive Definite Systems, 1981.
 *
 * A matrix or its factors is one Float64Array of length n + nnz: the n diagonal entries, then
 * the entries below the diagonal, column by column. In a factored array the diagonal holds 1/D.
 */

/** The analysed pattern. Unknowns are numbered in the order of elimination. */
export interface Pattern {
  readonly n: number;
  /** Entries below the diagonal, fill included. */
  readonly nnz: number;
  /** Column pointers, length n + 1: column j has entries start[j] … start[j+1] − 1. */
  readonly start: Int32Array;
  /** Row of each entry, length nnz, rising within a column. */
  readonly row: Int32Array;
  /** Where each update of the factorisation goes, in the order the updates are made. */
  readonly target: Int32Array;
}

/**
 * Analyse a pattern whose unknowns are already in the order of elimination.
 * @param n      number of unknowns
 * @param pairs  off-diagonal positions [i, j], in any order, repeats allowed
 */
export function analyse(n: number, pairs: readonly (readonly [number, number])[]): Pattern {
  const columns: Set<number>[] = Array.from({ length: n }, () => new Set());
  for (const [i, j] of pairs) if (i !== j) columns[Math.min(i, j)].add(Math.max(i, j));
  const start = new Int32Array(n + 1);
  const rows: number[][] = [];
  let updates = 0;
  for (let j = 0; j < n; j++) {
    const sorted = [...columns[j]].sort((a, b) => a - b);
    rows.push(sorted);
    // Fill: the rest of column j joins the column of its first entry.
    if (sorted.length > 1) {
      const parent = columns[sorted[0]];
      for (let p = 1; p < sorted.length; p++) parent.add(sorted[p]);
    }
    start[j + 1] = start[j] + sorted.length;
    updates += (sorted.length * (sorted.length + 1)) / 2;
  }
  const row = Int32Array.from(rows.flat());
  const pattern = { n, nnz: row.length, start, row, target: new Int32Array(updates) };
  let t = 0;
  for (let k = 0; k < n; k++) {
    for (let p = start[k]; p < start[k + 1]; p++) {
      for (let q = p; q < start[k + 1]; q++) pattern.target[t++] = entry(pattern, row[q], row[p]);
    }
  }
  return pattern;
}

/** Position of entry (i, j) in the value array of a pattern, or −1 if it is not in the pattern. */
export function entry(pattern: Pattern, i: number, j: number): number {
  if (i === j) return i;
  const column = Math.min(i, j);
  const wanted = Math.max(i, j);
  let low = pattern.start[column];
  let high = pattern.start[column + 1] - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const found = pattern.row[middle];
    if (found === wanted) return pattern.n + middle;
    if (found < wanted) low = middle + 1;
    else high = middle - 1;
  }
  return -1;
}

/**
 * Factor in place. Allocates nothing.
 * @param a  matrix values, overwritten by the factors
 * @returns −1, or the unknown at which a pivot was not positive beside its own diagonal:
 *          the matrix then is singular to double precision, and `a` is left half done
 */
export function factor(pattern: Pattern, a: Float64Array): number {
  const { n, start, target } = pattern;
  let t = 0;
  for (let k = 0; k < n; k++) {
    const d = a[k];
    if (!(d > 0 && d < Infinity)) return k;
    const inverse = 1 / d;
    a[k] = inverse;
    const end = n + start[k + 1];
    for (let p = n + start[k]; p < end; p++) {
      const value = a[p];
      const scaled = value * inverse;
      for (let q = p; q < end; q++) a[target[t++]] -= scaled * a[q];
      a[p] = scaled;
    }
  }
  return -1;
}
