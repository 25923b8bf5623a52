/**
 * Small vectors, rotations and inertias as plain numbers. Readable and allocating: for compiling, checking
 * and reporting. The kernels write the same formulae out in place.
 */

export type Vec3 = readonly [number, number, number];

/** Symmetric 3 x 3 as [xx, yy, zz, xy, xz, yz]; off-diagonals are the matrix elements (products carry the minus). */
export type Sym3 = readonly [number, number, number, number, number, number];

/** Row-major 3 x 3. */
export type Mat3 = readonly [number, number, number, number, number, number, number, number, number];

/** Unit quaternion, w first: rotates body components into world components. */
export type Quaternion = readonly [number, number, number, number];

export const add3 = (a: Vec3, b: Vec3): Vec3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const subtract3 = (a: Vec3, b: Vec3): Vec3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
export const scale3 = (a: Vec3, k: number): Vec3 => [a[0] * k, a[1] * k, a[2] * k];
export const dot3 = (a: Vec3, b: Vec3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const norm3 = (a: Vec3): number => Math.sqrt(dot3(a, a));
export const cross3 = (a: Vec3, b: Vec3): Vec3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

/** Unit vector along `a`. Throws RangeError on a zero or non-finite vector: a direction must be one. */
export function unit3(a: Vec3): Vec3 {
  const n = norm3(a);
  if (!(n > 0 && Number.isFinite(n))) throw new RangeError(`a direction must not be zero: [${a.join(', ')}]`);
  return scale3(a, 1 / n);
}

/** Rotation by `angle` (rad) about the unit vector `axis`, right-handed. Source: Rodrigues' formula. */
export function rotationAbout(axis: Vec3, angle: number): Mat3 {
  const c = Math.cos(angle);
  const s = Math.sin(angle);
  const k = 1 - c;
  const [x, y, z] = axis;
  return [
    c + k * x * x,
    k * x * y - s * z,
    k * x * z + s * y,
    k * x * y + s * z,
    c + k * y * y,
    k * y * z - s * x,
    k * x * z - s * y,
    k * y * z + s * x,
    c + k * z * z,
  ];
}

export const rotate3 = (R: Mat3, a: Vec3): Vec3 => [
  R[0] * a[0] + R[1] * a[1] + R[2] * a[2],
  R[3] * a[0] + R[4] * a[1] + R[5] * a[2],
  R[6] * a[0] + R[7] * a[1] + R[8] * a[2],
];

/** R transposed times a: world components to body components when R is R_WB. */
export const rotateBack3 = (R: Mat3, a: Vec3): Vec3 => [
  R[0] * a[0] + R[3] * a[1] + R[6] * a[2],
  R[1] * a[0] + R[4] * a[1] + R[7] * a[2],
  R[2] * a[0] + R[5] * a[1] + R[8] * a[2],
];

export function quaternionAbout(axis: Vec3, angle: number): Quaternion {
  const s = Math.sin(angle / 2);
  return [Math.cos(angle / 2), axis[0] * s, axis[1] * s, axis[2] * s];
}

/** Rotation matrix of a quaternion of any length but zero (it is normalised here). */
export function rotationOf(q: ArrayLike<number>, at = 0): Mat3 {
  const w = q[at]!;
  const x = q[at + 1]!;
  const y = q[at + 2]!;
  const z = q[at + 3]!;
  const k = 2 / (w * w + x * x + y * y + z * z);
  return [
    1 - k * (y * y + z * z),
    k * (x * y - w * z),
    k * (x * z + w * y),
    k * (x * y + w * z),
    1 - k * (x * x + z * z),
    k * (y * z - w * x),
    k * (x * z - w * y),
    k * (y * z + w * x),
    1 - k * (x * x + y * y),
  ];
}

export const symmetricTimes3 = (S: Sym3, a: Vec3): Vec3 => [
  S[0] * a[0] + S[3] * a[1] + S[4] * a[2],
  S[3] * a[0] + S[1] * a[1] + S[5] * a[2],
  S[4] * a[0] + S[5] * a[1] + S[2] * a[2],
];

export const addSymmetric = (a: Sym3, b: Sym3): Sym3 => [
  a[0] + b[0],
  a[1] + b[1],
  a[2] + b[2],
  a[3] + b[3],
  a[4] + b[4],
  a[5] + b[5],
];

/** k times the outer product a a^T. */
export const outerSymmetric = (a: Vec3, k: number): Sym3 => [
  k * a[0] * a[0],
  k * a[1] * a[1],
  k * a[2] * a[2],
  k * a[0] * a[1],
  k * a[0] * a[2],
  k * a[1] * a[2],
];

/** Inertia of a point mass at `c`: m (c.c 1 - c c^T), kg*m^2. */
export function pointInertia(m: number, c: Vec3): Sym3 {
  const [x, y, z] = c;
  return [m * (y * y + z * z), m * (x * x + z * z), m * (x * x + y * y), -m * x * y, -m * x * z, -m * y * z];
}

/** R S R^T. */
export function rotateSymmetric(R: Mat3, S: Sym3): Sym3 {
  const cx = rotate3(R, symmetricTimes3(S, [R[0], R[1], R[2]]));
  const cy = rotate3(R, symmetricTimes3(S, [R[3], R[4], R[5]]));
  const cz = rotate3(R, symmetricTimes3(S, [R[6], R[7], R[8]]));
  return [cx[0], cy[1], cz[2], (cx[1] + cy[0]) / 2, (cx[2] + cz[0]) / 2, (cy[2] + cz[1]) / 2];
}
