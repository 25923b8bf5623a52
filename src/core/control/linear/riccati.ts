import { Matrix, solve } from 'ml-matrix';
import { columnNorm, symmetrise } from './exponential';
import { solveLyapunov } from './lyapunov';
import { findAbscissa, findSpectralRadius } from './spectrum';

export type RiccatiOutcome =
  | {
      readonly kind: 'solved';
      /** n x n, symmetric, stabilising */
      readonly X: Matrix;
      /** m x n, u = -K x */
      readonly K: Matrix;
      /** 1-norm of the equation's residual over that of its largest term */
      readonly residual: number;
      /** closed loop: largest real part (continuous) or modulus (discrete) */
      readonly slowest: number;
    }
  | { readonly kind: 'failed'; readonly reason: string };

const failed = (reason: string): RiccatiOutcome => ({ kind: 'failed', reason });
const NOT_STABILISABLE =
  'no stabilising solution: the pair cannot be stabilised, or an undetected mode lies on the stability border';

interface Doubled {
  readonly X: Matrix;
  readonly converged: boolean;
}

/* Structured doubling: Chu, Fan, Lin, Wang, Int. J. Control 77 (2004). Quadratic convergence. */
function doubleStructure(a0: Matrix, g0: Matrix, h0: Matrix): Doubled {
  const n = a0.rows;
  const identity = Matrix.eye(n, n);
  let a = a0;
  let g = g0;
  let h = h0;
  for (let i = 0; i < 60; i++) {
    const w = Matrix.add(identity, g.mmul(h));
    const wa = solve(w, a);
    const wg = solve(w, g);
    const step = a.transpose().mmul(h).mmul(wa);
    g = symmetrise(Matrix.add(g, a.mmul(wg).mmul(a.transpose())));
    h = symmetrise(Matrix.add(h, step));
    a = a.mmul(wa);
    const size = columnNorm(h);
    if (!Number.isFinite(size)) return { X: h, converged: false };
    if (columnNorm(step) <= 1e-16 * Math.max(size, 1e-300)) return { X: h, converged: true };
  }
  return { X: h, converged: false };
}

/**
 * Discrete Riccati equation X = A'XA - A'XB (R + B'XB)^-1 B'XA + Q, stabilising solution.
 *
 * @param a n x n   @param b n x m   @param q n x n, positive semidefinite   @param r m x m, positive definite
 *
 * Structured doubling. Failure: no stabilising solution found, with the reason. O(n^3).
 */
export function solveDiscreteRiccati(a: Matrix, b: Matrix, q: Matrix, r: Matrix): RiccatiOutcome {
  let doubled: Doubled;
  try {
    doubled = doubleStructure(a, symmetrise(b.mmul(solve(r, b.transpose()))), symmetrise(q));
  } catch {
    return failed('a matrix of the doubling is singular');
  }
  if (!doubled.converged) return failed(NOT_STABILISABLE);
  const X = doubled.X;
  const gain = (x: Matrix): Matrix => {
    const bx = b.transpose().mmul(x);
    return solve(Matrix.add(r, bx.mmul(b)), bx.mmul(a));
  };
  const K = gain(X);
  const closed = Matrix.sub(a, b.mmul(K));
  const slowest = findSpectralRadius(closed);
  if (!(slowest < 1)) return failed(NOT_STABILISABLE);
  const axa = a.transpose().mmul(X).mmul(closed);
  const mismatch = Matrix.sub(Matrix.add(axa, q), X);
  const residual = columnNorm(mismatch) / Math.max(columnNorm(X), columnNorm(q));
  return { kind: 'solved', X, K, residual, slowest };
}

function careResidual(a: Matrix, g: Matrix, q: Matrix, x: Matrix): Matrix {
  const xa = x.mmul(a);
  return Matrix.add(Matrix.sub(Matrix.add(xa, xa.transpose()), x.mmul(g).mmul(x)), q);
}

/**
 * Continuous Riccati equation A'X + XA - X B R^-1 B' X + Q = 0, stabilising solution.
 *
 * @param a n x n   @param b n x m   @param q n x n, positive semidefinite   @param r m x m, positive definite
 *
 * A Cayley transform, then structured doubling (Chu, Fan, Lin, Linear Algebra Appl. 396 (2005)), then two
 * Newton steps (Kleinman 1968) that remove the rounding of the transform. O(n^3).
 */
export function solveRiccati(a: Matrix, b: Matrix, q: Matrix, r: Matrix): RiccatiOutcome {
  const n = a.rows;
  const identity = Matrix.eye(n, n);
  let X: Matrix;
  const rb = solve(r, b.transpose());
  const g = symmetrise(b.mmul(rb));
  try {
    const s = Math.max(columnNorm(a), Math.sqrt(columnNorm(g) * columnNorm(q)), 1e-8);
    const shifted = Matrix.sub(a, Matrix.mul(identity, s));
    const inverse = solve(shifted, identity);
    const w = Matrix.add(shifted.transpose(), q.mmul(inverse).mmul(g));
    const wInverse = solve(w, identity);
    const a0 = Matrix.add(identity, wInverse.transpose().mul(2 * s));
    const g0 = inverse
      .mmul(g)
      .mmul(wInverse)
      .mul(2 * s);
    const h0 = wInverse
      .mmul(q)
      .mmul(inverse)
      .mul(2 * s);
    const doubled = doubleStructure(a0, symmetrise(g0), symmetrise(h0));
    if (!doubled.converged) return failed(NOT_STABILISABLE);
    X = doubled.X;
  } catch {
    return failed('a matrix of the doubling is singular');
  }
  for (let i = 0; i < 2; i++) {
    const closed = Matrix.sub(a, g.mmul(X)).transpose();
    const correction = solveLyapunov(closed, careResidual(a, g, q, X));
    if (correction === undefined) break;
    X = symmetrise(Matrix.add(X, correction));
  }
  const K = rb.mmul(X);
  const slowest = findAbscissa(Matrix.sub(a, b.mmul(K)));
  if (!(slowest < 0)) return failed(NOT_STABILISABLE);
  const size = Math.max(2 * columnNorm(X.mmul(a)), columnNorm(X.mmul(g).mmul(X)), columnNorm(q));
  return { kind: 'solved', X, K, residual: columnNorm(careResidual(a, g, q, X)) / size, slowest };
}

export interface SteadyKalman {
  /** n x p, correction per unit of innovation */
  readonly gain: Matrix;
  /** n x n, error covariance before the measurement */
  readonly before: Matrix;
  /** n x n, error covariance after the measurement */
  readonly after: Matrix;
}

/**
 * Steady Kalman gain of x+ = A x + w, y = C x + v with covariances Q and R: the dual Riccati equation.
 * Returns undefined when the pair is not detectable.
 *
 * @param a n x n   @param c p x n   @param q n x n   @param r p x p
 */
export function solveKalman(a: Matrix, c: Matrix, q: Matrix, r: Matrix): SteadyKalman | undefined {
  const dual = solveDiscreteRiccati(a.transpose(), c.transpose(), q, r);
  if (dual.kind === 'failed') return undefined;
  const before = dual.X;
  const cross = before.mmul(c.transpose());
  const innovation = Matrix.add(c.mmul(cross), r);
  const gain = solve(innovation, cross.transpose()).transpose();
  const after = symmetrise(Matrix.sub(before, gain.mmul(c).mmul(before)));
  return { gain, before, after };
}
