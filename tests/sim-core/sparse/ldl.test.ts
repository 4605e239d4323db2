import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { analyse, entry, factor, type Pattern } from '../../../sim-core/sparse/ldl.ts';
import { minimumDegree } from '../../../sim-core/sparse/order.ts';

/**
 * Solve A x = b in place. Allocates nothing.
 * @param factors  from `factor`
 * @param x        right-hand side of length at least n, overwritten by the solution
 */
function solve(pattern: Pattern, factors: Float64Array, x: Float64Array): void {
  const { n, start, row } = pattern;
  for (let j = 0, p = 0; j < n; j++) {
    const value = x[j];
    const end = start[j + 1];
    for (; p < end; p++) x[row[p]] -= factors[n + p] * value;
  }
  for (let j = n - 1, p = start[n] - 1; j >= 0; j--) {
    let value = x[j] * factors[j];
    const end = start[j];
    for (; p >= end; p--) value -= factors[n + p] * x[row[p]];
    x[j] = value;
  }
}

type Dense = number[][];

/** Gaussian elimination with row exchanges: the independent answer. */
function denseSolve(matrix: Dense, right: readonly number[]): number[] {
  const n = right.length;
  const rows = matrix.map((row, i) => [...row, right[i]]);
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(rows[i][k]) > Math.abs(rows[pivot][k])) pivot = i;
    [rows[k], rows[pivot]] = [rows[pivot], rows[k]];
    for (let i = k + 1; i < n; i++) {
      const share = rows[i][k] / rows[k][k];
      for (let j = k; j <= n; j++) rows[i][j] -= share * rows[k][j];
    }
  }
  const x = new Array<number>(n).fill(0);
  for (let i = n - 1; i >= 0; i--) {
    let sum = rows[i][n];
    for (let j = i + 1; j < n; j++) sum -= rows[i][j] * x[j];
    x[i] = sum / rows[i][i];
  }
  return x;
}

/** A conductance matrix: branches between unknowns or to the reference, each at least to it. */
interface Conductances {
  readonly n: number;
  readonly matrix: Dense;
  readonly pairs: [number, number][];
}

const conductance = fc.double({ min: -6, max: 6, noNaN: true }).map((x) => 10 ** x);

const anyConductances: fc.Arbitrary<Conductances> = fc.integer({ min: 1, max: 24 }).chain((n) =>
  fc
    .record({
      toReference: fc.array(conductance, { minLength: n, maxLength: n }),
      branches: fc.array(
        fc.tuple(
          fc.integer({ min: 0, max: n - 1 }),
          fc.integer({ min: 0, max: n - 1 }),
          conductance,
        ),
        { maxLength: 3 * n },
      ),
    })
    .map(({ toReference, branches }) => {
      const matrix: Dense = toReference.map((g, i) => toReference.map((_, j) => (i === j ? g : 0)));
      const pairs: [number, number][] = [];
      for (const [i, j, g] of branches) {
        if (i === j) continue;
        matrix[i][i] += g;
        matrix[j][j] += g;
        matrix[i][j] -= g;
        matrix[j][i] -= g;
        pairs.push([i, j]);
      }
      return { n, matrix, pairs };
    }),
);

function valuesOf(pattern: Pattern, matrix: Dense): Float64Array {
  const values = new Float64Array(pattern.n + pattern.nnz);
  for (let i = 0; i < pattern.n; i++) {
    for (let j = 0; j <= i; j++) {
      const at = entry(pattern, i, j);
      if (at >= 0) values[at] = matrix[i][j];
    }
  }
  return values;
}

/** ‖Ax − b‖ over ‖A‖‖x‖ + ‖b‖ in the maximum norm: rounding alone makes some n·2⁻⁵³ of it. */
function scaledResidual(matrix: Dense, x: ArrayLike<number>, b: readonly number[]): number {
  let residual = 0;
  let sizeA = 0;
  let sizeX = 0;
  let sizeB = 0;
  matrix.forEach((row, i) => {
    const product = row.reduce((sum, a, j) => sum + a * x[j], 0);
    residual = Math.max(residual, Math.abs(product - b[i]));
    sizeA = Math.max(
      sizeA,
      row.reduce((sum, a) => sum + Math.abs(a), 0),
    );
    sizeX = Math.max(sizeX, Math.abs(x[i]));
    sizeB = Math.max(sizeB, Math.abs(b[i]));
  });
  return residual / (sizeA * sizeX + sizeB);
}

describe('LDLᵀ factors', () => {
  test('solve what dense elimination with row exchanges solves, to a scaled residual of 1e-12·n', () => {
    fc.assert(
      fc.property(
        anyConductances,
        fc.infiniteStream(fc.double({ min: -1, max: 1, noNaN: true })),
        (a, stream) => {
          const { n, matrix, pairs } = a;
          const b = [...stream.take(n)];
          const order = minimumDegree(n, pairs);
          const place = new Int32Array(n);
          order.forEach((unknown, k) => {
            place[unknown] = k;
          });
          const permuted = Array.from(order, (i) => Array.from(order, (j) => matrix[i][j]));
          const pattern = analyse(
            n,
            pairs.map(([i, j]) => [place[i], place[j]]),
          );
          const factors = valuesOf(pattern, permuted);
          expect(factor(pattern, factors)).toBe(-1);
          const x = Float64Array.from(order, (i) => b[i]);
          solve(pattern, factors, x);
          const found = Array.from(place, (k) => x[k]);
          expect(scaledResidual(matrix, found, b)).toBeLessThanOrEqual(1e-12 * n);
          // Conductances over twelve decades: the answers agree as far as the condition allows,
          // so the dense answer is held to the same residual rather than to the same digits.
          expect(scaledResidual(matrix, denseSolve(matrix, b), b)).toBeLessThanOrEqual(1e-12 * n);
        },
      ),
      { seed: 1, numRuns: 120 },
    );
  });

  test('agree with dense elimination digit by digit on well-conditioned matrices', () => {
    fc.assert(
      fc.property(anyConductances, ({ n, matrix, pairs }) => {
        const largest = Math.max(...matrix.flat().map(Math.abs));
        const firm = matrix.map((row, i) =>
          row.map((a, j) => (i === j ? a + largest : a) / largest),
        );
        const b = firm.map((_, i) => Math.cos(i));
        const pattern = analyse(n, pairs);
        const factors = valuesOf(pattern, firm);
        expect(factor(pattern, factors)).toBe(-1);
        const x = Float64Array.from(b);
        solve(pattern, factors, x);
        const error = denseSolve(firm, b).map((value, i) => Math.abs(x[i] - value));
        expect(Math.max(...error)).toBeLessThanOrEqual(1e-12 * n);
      }),
      { seed: 2, numRuns: 80 },
    );
  });

  test('multiply back to the matrix', () => {
    // 4 −2 0; −2 5 −3; 0 −3 6 = L D Lᵀ with D = 4, 4, 3.75 (by hand).
    const matrix = [
      [4, -2, 0],
      [-2, 5, -3],
      [0, -3, 6],
    ];
    const pattern = analyse(3, [
      [0, 1],
      [1, 2],
    ]);
    const factors = valuesOf(pattern, matrix);
    expect(factor(pattern, factors)).toBe(-1);
    expect(Array.from(factors)).toEqual([1 / 4, 1 / 4, 1 / 3.75, -0.5, -0.75]);
  });

  test('name the unknown whose pivot vanished, was negative or was no number', () => {
    const pattern = analyse(3, [
      [0, 1],
      [1, 2],
    ]);
    const floating = [
      [1, -1, 0],
      [-1, 1, 0],
      [0, 0, 1],
    ];
    expect(factor(pattern, valuesOf(pattern, floating))).toBe(1);
    expect(factor(pattern, Float64Array.of(1, 1, -1, 0, 0))).toBe(2);
    expect(factor(pattern, Float64Array.of(Number.NaN, 1, 1, 0, 0))).toBe(0);
    expect(factor(pattern, Float64Array.of(1, Infinity, 1, 0, 0))).toBe(1);
  });

  test('ignore repeated positions, and those on the diagonal', () => {
    const once = analyse(4, [
      [0, 2],
      [3, 1],
    ]);
    const often = analyse(4, [
      [2, 0],
      [0, 2],
      [1, 3],
      [3, 1],
      [2, 2],
    ]);
    expect(often).toEqual(once);
  });
});

describe('a pattern', () => {
  test('finds an entry from either side, and no entry where there is none', () => {
    const pattern = analyse(3, [[0, 2]]);
    expect(entry(pattern, 0, 2)).toBe(3);
    expect(entry(pattern, 2, 0)).toBe(3);
    expect(entry(pattern, 1, 1)).toBe(1);
    expect(entry(pattern, 0, 1)).toBe(-1);
  });

  test('holds exactly the fill of elimination', () => {
    // A star eliminated from its centre fills completely; from its leaves, not at all.
    const fromCentre = analyse(
      5,
      [1, 2, 3, 4].map((leaf) => [0, leaf]),
    );
    expect(fromCentre.nnz).toBe(10);
    const fromLeaves = analyse(
      5,
      [0, 1, 2, 3].map((leaf) => [leaf, 4]),
    );
    expect(fromLeaves.nnz).toBe(4);
  });
});
