/**
 * Dual numbers: a value and its derivative along one direction, carried exactly through every operation. What is
 * written over them once gives numbers and exact derivatives. Plain and allocating: for linearisation, not for a
 * loop. Source: Griewank and Walther, Evaluating Derivatives, 2nd ed. (2008), ch. 3 (forward mode).
 */
export interface Dual {
  readonly value: number;
  readonly slope: number;
}

export type Dual3 = readonly [Dual, Dual, Dual];

export const dual = (value: number, slope = 0): Dual => ({ value, slope });
export const zero: Dual = { value: 0, slope: 0 };

export const plus = (a: Dual, b: Dual): Dual => dual(a.value + b.value, a.slope + b.slope);
export const minus = (a: Dual, b: Dual): Dual => dual(a.value - b.value, a.slope - b.slope);
export const times = (a: Dual, b: Dual): Dual =>
  dual(a.value * b.value, a.slope * b.value + a.value * b.slope);
export const scaled = (a: Dual, k: number): Dual => dual(a.value * k, a.slope * k);
export const over = (a: Dual, b: Dual): Dual => {
  const q = a.value / b.value;
  return dual(q, (a.slope - q * b.slope) / b.value);
};
export const sine = (a: Dual): Dual => dual(Math.sin(a.value), Math.cos(a.value) * a.slope);
export const cosine = (a: Dual): Dual => dual(Math.cos(a.value), -Math.sin(a.value) * a.slope);
export const root = (a: Dual): Dual => {
  const r = Math.sqrt(a.value);
  return dual(r, a.slope / (2 * r));
};
export const magnitude = (a: Dual): Dual => (a.value < 0 ? scaled(a, -1) : a);
export const hyperbolicTangent = (a: Dual): Dual => {
  const t = Math.tanh(a.value);
  return dual(t, (1 - t * t) * a.slope);
};
export const exponential = (a: Dual): Dual => {
  const e = Math.exp(a.value);
  return dual(e, e * a.slope);
};
export const angleOf = (y: Dual, x: Dual): Dual =>
  dual(
    Math.atan2(y.value, x.value),
    (x.value * y.slope - y.value * x.slope) / (x.value * x.value + y.value * y.value),
  );

export const constant3 = (a: ArrayLike<number>, at = 0): Dual3 => [
  dual(a[at]!),
  dual(a[at + 1]!),
  dual(a[at + 2]!),
];
export const zero3: Dual3 = [zero, zero, zero];
export const sum3 = (a: Dual3, b: Dual3): Dual3 => [plus(a[0], b[0]), plus(a[1], b[1]), plus(a[2], b[2])];
export const difference3 = (a: Dual3, b: Dual3): Dual3 => [
  minus(a[0], b[0]),
  minus(a[1], b[1]),
  minus(a[2], b[2]),
];
export const scaled3 = (a: Dual3, k: Dual): Dual3 => [times(a[0], k), times(a[1], k), times(a[2], k)];
export const inner3 = (a: Dual3, b: Dual3): Dual =>
  plus(plus(times(a[0], b[0]), times(a[1], b[1])), times(a[2], b[2]));
export const outer3 = (a: Dual3, b: Dual3): Dual3 => [
  minus(times(a[1], b[2]), times(a[2], b[1])),
  minus(times(a[2], b[0]), times(a[0], b[2])),
  minus(times(a[0], b[1]), times(a[1], b[0])),
];

/** The vector turned about a constant unit axis by an angle. Source: Rodrigues' formula. */
export function turned3(a: Dual3, axis: Dual3, angle: Dual): Dual3 {
  const c = cosine(angle);
  const along = scaled3(axis, times(inner3(axis, a), minus(dual(1), c)));
  return sum3(sum3(scaled3(a, c), scaled3(outer3(axis, a), sine(angle))), along);
}
