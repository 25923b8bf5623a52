/** Three by three arithmetic in place, row-major, for the yard's bodies: no garbage in the step. */

/** Inverse of a 3 x 3 matrix, written to `out`; may not alias. A singular one gives infinities. O(1). */
export function invert3(a: Float64Array, out: Float64Array): void {
  const c0 = a[4] * a[8] - a[5] * a[7];
  const c1 = a[5] * a[6] - a[3] * a[8];
  const c2 = a[3] * a[7] - a[4] * a[6];
  const k = 1 / (a[0] * c0 + a[1] * c1 + a[2] * c2);
  out[0] = c0 * k;
  out[1] = (a[2] * a[7] - a[1] * a[8]) * k;
  out[2] = (a[1] * a[5] - a[2] * a[4]) * k;
  out[3] = c1 * k;
  out[4] = (a[0] * a[8] - a[2] * a[6]) * k;
  out[5] = (a[2] * a[3] - a[0] * a[5]) * k;
  out[6] = c2 * k;
  out[7] = (a[1] * a[6] - a[0] * a[7]) * k;
  out[8] = (a[0] * a[4] - a[1] * a[3]) * k;
}

/** A x, written to `out`; may not alias `x`. O(1). */
export function times3(a: Float64Array, x: Float64Array, out: Float64Array): void {
  out[0] = a[0] * x[0] + a[1] * x[1] + a[2] * x[2];
  out[1] = a[3] * x[0] + a[4] * x[1] + a[5] * x[2];
  out[2] = a[6] * x[0] + a[7] * x[1] + a[8] * x[2];
}

/** A transposed times x, written to `out`; may not alias `x`. O(1). */
export function transposedTimes3(a: Float64Array, x: Float64Array, out: Float64Array): void {
  out[0] = a[0] * x[0] + a[3] * x[1] + a[6] * x[2];
  out[1] = a[1] * x[0] + a[4] * x[1] + a[7] * x[2];
  out[2] = a[2] * x[0] + a[5] * x[1] + a[8] * x[2];
}

/** R A R^T, written to `out`; may not alias. O(1). */
export function turnMatrix(R: Float64Array, a: Float64Array, out: Float64Array): void {
  for (let i = 0; i < 3; i++) {
    const x = R[3 * i] * a[0] + R[3 * i + 1] * a[3] + R[3 * i + 2] * a[6];
    const y = R[3 * i] * a[1] + R[3 * i + 1] * a[4] + R[3 * i + 2] * a[7];
    const z = R[3 * i] * a[2] + R[3 * i + 1] * a[5] + R[3 * i + 2] * a[8];
    for (let j = 0; j < 3; j++) out[3 * i + j] = x * R[3 * j] + y * R[3 * j + 1] + z * R[3 * j + 2];
  }
}

/** Rotation matrix of a unit quaternion given as x, y, z, w. O(1). */
export function matrixOf(q: { x: number; y: number; z: number; w: number }, out: Float64Array): void {
  const { x, y, z, w } = q;
  out[0] = 1 - 2 * (y * y + z * z);
  out[1] = 2 * (x * y - w * z);
  out[2] = 2 * (x * z + w * y);
  out[3] = 2 * (x * y + w * z);
  out[4] = 1 - 2 * (x * x + z * z);
  out[5] = 2 * (y * z - w * x);
  out[6] = 2 * (x * z - w * y);
  out[7] = 2 * (y * z + w * x);
  out[8] = 1 - 2 * (x * x + y * y);
}

/**
 * exp(-[turn]x) v: what a vector at rest outside looks like from a body that has turned by `turn`. `out` may not
 * alias an input. O(1). Source: Rodrigues' formula.
 */
export function turnBack(turn: Float64Array, v: Float64Array, out: Float64Array): void {
  const square = turn[0] * turn[0] + turn[1] * turn[1] + turn[2] * turn[2];
  const angle = Math.sqrt(square);
  const s = angle < 1e-4 ? 1 - square / 6 : Math.sin(angle) / angle;
  const c = angle < 1e-4 ? 0.5 - square / 24 : (1 - Math.cos(angle)) / square;
  const x = turn[1] * v[2] - turn[2] * v[1];
  const y = turn[2] * v[0] - turn[0] * v[2];
  const z = turn[0] * v[1] - turn[1] * v[0];
  out[0] = v[0] - s * x + c * (turn[1] * z - turn[2] * y);
  out[1] = v[1] - s * y + c * (turn[2] * x - turn[0] * z);
  out[2] = v[2] - s * z + c * (turn[0] * y - turn[1] * x);
}
