/** The base's own equations, once every gimbal has been folded into them. */
import type { StarWork } from './starWork';

/** Solves the symmetric positive definite system of order n in place by Cholesky; `x` holds right side, then result. */
function solveInPlace(A: Float64Array, x: Float64Array, n: number): void {
  for (let j = 0; j < n; j++) {
    let d = A[n * j + j]!;
    for (let k = 0; k < j; k++) d -= A[n * j + k]! * A[n * j + k]!;
    d = Math.sqrt(d);
    A[n * j + j] = d;
    for (let i = j + 1; i < n; i++) {
      let s = A[n * i + j]!;
      for (let k = 0; k < j; k++) s -= A[n * i + k]! * A[n * j + k]!;
      A[n * i + j] = s / d;
    }
    let y = x[j]!;
    for (let k = 0; k < j; k++) y -= A[n * j + k]! * x[k]!;
    x[j] = y / d;
  }
  for (let i = n - 1; i >= 0; i--) {
    let s = x[i]!;
    for (let k = i + 1; k < n; k++) s -= A[n * k + i]! * x[k]!;
    x[i] = s / A[n * i + i]!;
  }
}

/**
 * Projects the articulated inertia and force in `work` on the base's freedoms, solves, and adds the result to the
 * drive.
 *
 * @param nb   number of base speeds, 3 or 6; for 6 the subspace is the identity
 * @param out  its first nb numbers become the base speeds' rates
 *
 * O(1), allocates nothing. The matrix is positive definite for any rig with mass.
 */
export function solveBase(work: StarWork, nb: number, out: Float64Array): void {
  const S = work.place.subspace;
  const K = work.articulated;
  const A = work.matrix;
  const x = work.right;
  const drive = work.drive;
  if (nb === 6) {
    solveInPlace(K, x, 6);
    for (let j = 0; j < 6; j++) {
      out[j] = x[j]!;
      drive[j] = drive[j]! + x[j]!;
    }
    return;
  }
  for (let r = 0; r < 6; r++) for (let c = r + 1; c < 6; c++) K[6 * r + c] = K[6 * c + r]!;
  for (let j = 0; j < nb; j++) {
    for (let k = 0; k <= j; k++) {
      let sum = 0;
      for (let r = 0; r < 6; r++) {
        let row = 0;
        for (let c = 0; c < 6; c++) row += K[6 * r + c]! * S[6 * k + c]!;
        sum += S[6 * j + r]! * row;
      }
      A[nb * j + k] = sum;
    }
  }
  for (let j = 0; j < nb; j++) {
    let sum = 0;
    for (let r = 0; r < 6; r++) sum += S[6 * j + r]! * x[r]!;
    out[j] = sum;
  }
  for (let j = 0; j < nb; j++) x[j] = out[j]!;
  solveInPlace(A, x, nb);
  for (let j = 0; j < nb; j++) {
    out[j] = x[j]!;
    for (let r = 0; r < 6; r++) drive[r] = drive[r]! + S[6 * j + r]! * x[j]!;
  }
}
