import { Matrix, solve } from 'ml-matrix';

/* Coefficients of the [13/13] Pade approximant of exp, and the 1-norm up to which it needs no scaling. */
const PADE = [
  64764752532480000, 32382376266240000, 7771770303897600, 1187353796428800, 129060195264000, 10559470521600,
  670442572800, 33522128640, 1323241920, 40840800, 960960, 16380, 182, 1,
];
const PADE_NORM = 5.371920351148152;

/** Largest absolute column sum. */
export function columnNorm(a: Matrix): number {
  let worst = 0;
  for (let j = 0; j < a.columns; j++) {
    let sum = 0;
    for (let i = 0; i < a.rows; i++) sum += Math.abs(a.get(i, j));
    worst = Math.max(worst, sum);
  }
  return worst;
}

/**
 * Matrix exponential of a square matrix.
 *
 * Scaling and squaring with the [13/13] Pade approximant: Higham, The scaling and squaring method for the
 * matrix exponential revisited, SIAM J. Matrix Anal. Appl. 26 (2005). O(n^3).
 */
export function exponentiate(a: Matrix): Matrix {
  const n = a.rows;
  if (n === 0) return new Matrix(0, 0);
  const norm = columnNorm(a);
  const squarings = norm > PADE_NORM ? Math.ceil(Math.log2(norm / PADE_NORM)) : 0;
  const x = Matrix.mul(a, 2 ** -squarings);
  const x2 = x.mmul(x);
  const x4 = x2.mmul(x2);
  const x6 = x2.mmul(x4);
  const b = PADE;
  const combine = (c6: number, c4: number, c2: number, c0: number): Matrix => {
    const sum = Matrix.eye(n, n).mul(c0);
    sum.add(Matrix.mul(x2, c2)).add(Matrix.mul(x4, c4)).add(Matrix.mul(x6, c6));
    return sum;
  };
  const u = x.mmul(x6.mmul(combine(b[13]!, b[11]!, b[9]!, 0)).add(combine(b[7]!, b[5]!, b[3]!, b[1]!)));
  const v = x6.mmul(combine(b[12]!, b[10]!, b[8]!, 0)).add(combine(b[6]!, b[4]!, b[2]!, b[0]!));
  let result = solve(Matrix.sub(v, u), Matrix.add(v, u));
  for (let i = 0; i < squarings; i++) result = result.mmul(result);
  return result;
}

export interface HeldPair {
  /** n x n, exp(A dt) */
  readonly transition: Matrix;
  /** n x m, integral of exp(A s) B over the step */
  readonly input: Matrix;
}

/**
 * Exact discretisation of dx/dt = A x + B u with u held over dt.
 *
 * Source: Van Loan, Computing integrals involving the matrix exponential, IEEE Trans. AC 23 (1978).
 */
export function holdInput(a: Matrix, b: Matrix, dt: number): HeldPair {
  const n = a.rows;
  const m = b.columns;
  const block = Matrix.zeros(n + m, n + m);
  block.setSubMatrix(Matrix.mul(a, dt), 0, 0);
  block.setSubMatrix(Matrix.mul(b, dt), 0, n);
  const e = exponentiate(block);
  return {
    transition: e.subMatrix(0, n - 1, 0, n - 1),
    input: e.subMatrix(0, n - 1, n, n + m - 1),
  };
}

/**
 * Covariance gathered over dt by dx = A x dt + dw, cov(dw) = W dt: integral of exp(A s) W exp(A' s).
 *
 * Source: Van Loan 1978.
 */
export function holdNoise(a: Matrix, w: Matrix, dt: number): Matrix {
  const n = a.rows;
  const block = Matrix.zeros(2 * n, 2 * n);
  block.setSubMatrix(Matrix.mul(a, -dt), 0, 0);
  block.setSubMatrix(Matrix.mul(w, dt), 0, n);
  block.setSubMatrix(Matrix.mul(a.transpose(), dt), n, n);
  const e = exponentiate(block);
  const transition = e.subMatrix(n, 2 * n - 1, n, 2 * n - 1).transpose();
  return symmetrise(transition.mmul(e.subMatrix(0, n - 1, n, 2 * n - 1)));
}

/** (X + X') / 2 */
export function symmetrise(x: Matrix): Matrix {
  return Matrix.add(x, x.transpose()).mul(0.5);
}
