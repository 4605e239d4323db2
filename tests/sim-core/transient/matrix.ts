/** Exact answers of two-state linear circuits x' = A x + b, by the matrix exponential. */

export type Pair = readonly [number, number];
/** Rows of a 2×2 matrix. */
export type Matrix = readonly [Pair, Pair];

export const times = ([p, q]: Matrix, x: Pair): Pair => [
  p[0] * x[0] + p[1] * x[1],
  q[0] * x[0] + q[1] * x[1],
];

const add = (x: Pair, y: Pair): Pair => [x[0] + y[0], x[1] + y[1]];

/** x with M x = r (Cramer's rule). */
export function solvePair([p, q]: Matrix, r: Pair): Pair {
  const determinant = p[0] * q[1] - p[1] * q[0];
  return [(r[0] * q[1] - p[1] * r[1]) / determinant, (p[0] * r[1] - r[0] * q[0]) / determinant];
}

/**
 * e^{At} for a pair of complex eigenvalues −α ± jω:
 * e^{−αt}(cos ωt·1 + sin ωt/ω·(A + α·1)), by the theorem of Cayley and Hamilton.
 */
export function exponential([p, q]: Matrix, t: number): Matrix {
  const alpha = -(p[0] + q[1]) / 2;
  const omega = Math.sqrt(p[0] * q[1] - p[1] * q[0] - alpha ** 2);
  const decay = Math.exp(-alpha * t);
  const c = decay * Math.cos(omega * t);
  const s = (decay * Math.sin(omega * t)) / omega;
  return [
    [c + s * (p[0] + alpha), s * p[1]],
    [s * q[0], c + s * (q[1] + alpha)],
  ];
}

/** Series R-L-C as x' = A x + b·e, x = (capacitor voltage, inductor current), e = source voltage. */
export function seriesCircuit(r: number, l: number, c: number): { a: Matrix; b: Pair } {
  return {
    a: [
      [0, 1 / c],
      [-1 / l, -r / l],
    ],
    b: [0, 1 / l],
  };
}

/** x(t) from x(0) with constant e. */
export function advance(a: Matrix, forcing: Pair, x: Pair, t: number): Pair {
  const rest = solvePair(a, [-forcing[0], -forcing[1]]);
  return add(rest, times(exponential(a, t), [x[0] - rest[0], x[1] - rest[1]]));
}
