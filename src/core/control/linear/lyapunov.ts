import { Matrix, solve } from 'ml-matrix';
import { columnNorm, symmetrise } from './exponential';

/**
 * Solves X = A X A' + Q for a stable A (all eigenvalues inside the unit circle).
 * Returns undefined when the doubling does not converge, which means A is not stable.
 *
 * Smith's doubled iteration: Smith, SIAM J. Appl. Math. 16 (1968). O(n^3) for each doubling.
 */
export function solveDiscreteLyapunov(a: Matrix, q: Matrix): Matrix | undefined {
  let x = symmetrise(q);
  let power = a.clone();
  for (let i = 0; i < 60; i++) {
    const step = power.mmul(x).mmul(power.transpose());
    x = symmetrise(Matrix.add(x, step));
    const size = columnNorm(x);
    if (!Number.isFinite(size)) return undefined;
    if (columnNorm(step) <= 1e-17 * size) return x;
    power = power.mmul(power);
  }
  return undefined;
}

/**
 * Solves A X + X A' + Q = 0 for a stable A (all eigenvalues in the left half plane).
 * Returns undefined when A is not stable.
 *
 * The Cayley transform A -> (A + s)(A - s)^-1 turns it into the discrete equation; s near the spectrum's size.
 */
export function solveLyapunov(a: Matrix, q: Matrix): Matrix | undefined {
  const n = a.rows;
  const s = Math.max(Math.sqrt(columnNorm(a)), 1e-12);
  const identity = Matrix.eye(n, n).mul(s);
  const minus = Matrix.sub(a, identity);
  let inverse: Matrix;
  try {
    inverse = solve(minus, Matrix.eye(n, n));
  } catch {
    return undefined;
  }
  const cayley = inverse.mmul(Matrix.add(a, identity));
  const forcing = inverse
    .mmul(q)
    .mmul(inverse.transpose())
    .mul(2 * s);
  return solveDiscreteLyapunov(cayley, forcing);
}
