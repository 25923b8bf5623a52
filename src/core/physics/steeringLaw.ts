/**
 * Steering of a general array: tilt rates for a wanted momentum rate, how near the array is to a singularity, and what
 * its envelope of momentum looks like. Not for the innermost loop: readable, small matrices, allocates.
 */
import { EigenvalueDecomposition, Matrix, SingularValueDecomposition, solve } from 'ml-matrix';
import { type ArrayModel, arrayJacobian, arrayMomentum, compileArray } from './arrayLaw';
import { cross3, dot3, norm3, scale3, subtract3, type Vec3 } from './spatial';

/** Jacobian d(momentum)/d(tilt) as a 3 x n matrix, N*m*s/rad. */
export function jacobianMatrix(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  momentum: ArrayLike<number>,
): Matrix {
  const out = new Float64Array(3 * array.count);
  arrayJacobian(array, tilt, momentum, out);
  return Matrix.from1DArray(3, array.count, out);
}

/**
 * Least tilt rates that give a momentum rate: A^T (A A^T)^-1 hdot, rad/s; null at a singularity, where there are none.
 * The body's torque is minus `momentumRate`. Source: Wie, JGCD 27(2) 2004.
 */
export function moorePenroseRates(A: Matrix, momentumRate: Vec3): number[] | null {
  const At = A.transpose();
  if (judgeSingularity(A).rank < 3) return null;
  return At.mmul(solve(A.mmul(At), Matrix.columnVector([...momentumRate]))).to1DArray();
}

/**
 * Tilt rates with error traded for size near a singularity: A^T (A A^T + lambda I)^-1 hdot. Its known defect: along the
 * singular direction itself the rates are zero, the array locks. Source: Nakamura and Hanafusa, ASME JDSMC 108 (1986).
 */
export function robustRates(A: Matrix, momentumRate: Vec3, lambda: number): number[] {
  const At = A.transpose();
  const square = A.mmul(At).add(Matrix.eye(3).mul(lambda));
  return At.mmul(solve(square, Matrix.columnVector([...momentumRate]))).to1DArray();
}

/** What kind of place in tilt space this is. */
export interface SingularityReport {
  /** sqrt(det(A A^T)): 0 at a singularity; of the size of the momentum cubed away from it. Source: Yoshikawa (1985). */
  readonly measure: number;
  /** Singular values of A, N*m*s, largest first. */
  readonly gains: readonly number[];
  readonly rank: number;
  /** Direction of body torque the array can least give, unit vector. */
  readonly weakest: Vec3;
  /** Columns: an orthonormal basis of tilt rates that leave the momentum still. */
  readonly nullMotion: Matrix;
}

/** Distance to singularity and null motion of a Jacobian. A gain under 1e-9 of the largest counts as none. */
export function judgeSingularity(A: Matrix): SingularityReport {
  const n = A.columns;
  const square = A.mmul(A.transpose());
  const eigen = new EigenvalueDecomposition(square, { assumeSymmetric: true });
  const order = [0, 1, 2].sort((a, b) => eigen.realEigenvalues[b]! - eigen.realEigenvalues[a]!);
  const singular = new SingularValueDecomposition(A, { autoTranspose: true });
  const gains = [...singular.diagonal].sort((a, b) => b - a);
  const rank = gains.filter((gain) => gain > 1e-9 * gains[0]!).length;
  const weakest = eigen.eigenvectorMatrix.getColumn(order[2]!) as unknown as Vec3;
  const measure = n < 3 ? 0 : gains.slice(0, 3).reduce((product, gain) => product * gain, 1);
  return { measure, gains, rank, weakest, nullMotion: nullBasis(A, rank) };
}

/** Orthonormal basis of the null space: eigenvectors of A^T A of its smallest eigenvalues. */
function nullBasis(A: Matrix, rank: number): Matrix {
  const n = A.columns;
  if (n === rank) return new Matrix(n, 0);
  const eigen = new EigenvalueDecomposition(A.transpose().mmul(A), { assumeSymmetric: true });
  const order = Array.from({ length: n }, (_, k) => k).sort(
    (a, b) => eigen.realEigenvalues[a]! - eigen.realEigenvalues[b]!,
  );
  const basis = new Matrix(n, n - rank);
  for (let k = 0; k < n - rank; k++) basis.setColumn(k, eigen.eigenvectorMatrix.getColumn(order[k]!));
  return basis;
}

/**
 * Whether null motion can leave a singularity. With u the singular direction, e_i = u . h_i, the form
 * sum e_i x_i^2 over the null space is definite at an elliptic singularity (no way out) and indefinite at a hyperbolic
 * one. Source: Bedrossian (1990); Wie, JGCD 27(2) 2004.
 */
export interface SingularForm {
  readonly direction: Vec3;
  readonly eigenvalues: readonly number[];
  readonly kind: 'elliptic' | 'hyperbolic' | 'degenerate';
}

/** The quadratic form at a singular tilt. `momentum` is n, each wheel's. Throws RangeError at a regular tilt. */
export function singularForm(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  momentum: ArrayLike<number>,
): SingularForm {
  const A = jacobianMatrix(array, tilt, momentum);
  const report = judgeSingularity(A);
  if (report.rank === 3)
    throw new RangeError('not a singular tilt: the array can give torque about every axis');
  const n = array.count;
  const one = new Float64Array(n);
  const h = new Float64Array(3);
  const total = new Float64Array(3);
  arrayMomentum(array, tilt, momentum, total);
  const sign = dot3(report.weakest, [total[0]!, total[1]!, total[2]!]) < 0 ? -1 : 1;
  const direction = scale3(report.weakest, sign);
  const diagonal = Array.from({ length: n }, (_, i) => {
    one.fill(0);
    one[i] = momentum[i]!;
    arrayMomentum(array, tilt, one, h);
    return dot3(direction, [h[0]!, h[1]!, h[2]!]);
  });
  const N = report.nullMotion;
  const Q = N.transpose().mmul(Matrix.diag(diagonal)).mmul(N);
  const values = new EigenvalueDecomposition(Q.add(Q.transpose()).mul(0.5), { assumeSymmetric: true });
  const eigenvalues = [...values.realEigenvalues].sort((a, b) => a - b);
  const small = 1e-9 * Math.max(...diagonal.map(Math.abs));
  const positive = eigenvalues.filter((v) => v > small).length;
  const negative = eigenvalues.filter((v) => v < -small).length;
  const kind =
    positive > 0 && negative > 0
      ? 'hyperbolic'
      : positive + negative < eigenvalues.length
        ? 'degenerate'
        : 'elliptic';
  return { direction, eigenvalues, kind };
}

/** A singular surface of momentum: for each direction u, the momentum whose weakest direction u is. */
export interface MomentumSurface {
  /** Sense of each wheel along u: +1 for all is the outer envelope. */
  readonly senses: readonly number[];
  /** 3 per point, N*m*s; NaN where u lies along a gimbal axis. */
  readonly points: Float64Array;
  /** Points in rings of `columns`, from pole to pole of the sphere of directions. */
  readonly rows: number;
  readonly columns: number;
}

/**
 * Momentum at the singularity of direction u: each wheel turned as far along (+1) or against (-1) u as its gimbal lets
 * it. Each wheel must be perpendicular to its gimbal axis. Source: Margulies and Aubrun, J. Astronautical Sci. 26(2) 1978.
 */
export function singularMomentum(
  array: ArrayModel,
  size: ArrayLike<number>,
  senses: readonly number[],
  u: Vec3,
): Vec3 {
  let total: Vec3 = [0, 0, 0];
  for (let i = 0; i < array.count; i++) {
    const g: Vec3 = [array.gimbalAxis[3 * i]!, array.gimbalAxis[3 * i + 1]!, array.gimbalAxis[3 * i + 2]!];
    const across = subtract3(u, scale3(g, dot3(g, u)));
    const k = (senses[i]! * size[i]!) / norm3(across);
    total = [total[0] + k * across[0], total[1] + k * across[1], total[2] + k * across[2]];
  }
  return total;
}

/**
 * Momentum envelope of an array with unlimited tilt: the outer surface (all wheels along u) and, for four units, the
 * inner ones (one wheel, or two, against u).
 *
 * @param size  n, N*m*s, each wheel's momentum, positive
 * @param rows  rings from pole to pole, at least 2
 */
export function momentumEnvelope(
  array: ArrayModel,
  size: ArrayLike<number>,
  rows: number,
  columns: number,
): { readonly outer: MomentumSurface; readonly inner: readonly MomentumSurface[] } {
  const surface = (senses: readonly number[]): MomentumSurface => {
    const points = new Float64Array(3 * rows * columns);
    for (let r = 0; r < rows; r++) {
      const polar = (Math.PI * (r + 0.5)) / rows;
      for (let c = 0; c < columns; c++) {
        const around = (2 * Math.PI * c) / columns;
        const u: Vec3 = [
          Math.sin(polar) * Math.cos(around),
          Math.sin(polar) * Math.sin(around),
          Math.cos(polar),
        ];
        points.set(singularMomentum(array, size, senses, u), 3 * (r * columns + c));
      }
    }
    return { senses, points, rows, columns };
  };
  const n = array.count;
  const outer = surface(Array.from({ length: n }, () => 1));
  if (n !== 4) return { outer, inner: [] };
  const against = [[0], [1], [2], [3], [0, 1], [0, 2], [0, 3]];
  return {
    outer,
    inner: against.map((which) => surface([0, 1, 2, 3].map((i) => (which.includes(i) ? -1 : 1)))),
  };
}

/**
 * Four units on the sides of a pyramid at skew beta, rad: gimbal axes stand square to the sides, which rise at beta from
 * the base; spin axes at zero tilt run level, anticlockwise round it. beta = pi/2 is a box. Source: Wie, JGCD 27(2) 2004.
 */
export function pyramidArray(beta: number, axialInertia = 1): ArrayModel {
  const sides: readonly Vec3[] = [
    [1, 0, 0],
    [0, 1, 0],
    [-1, 0, 0],
    [0, -1, 0],
  ];
  return compileArray(
    sides.map((out) => {
      const gimbalAxis: Vec3 = [Math.sin(beta) * out[0], Math.sin(beta) * out[1], Math.cos(beta)];
      return { gimbalAxis, spinAxis: cross3([0, 0, 1], out), axialInertia };
    }),
  );
}
