/** Righting of a floating body: a metacentric height, or a righting-arm curve from hydrostatics. */

/**
 * Righting arm GZ of the whole rig (weight included, gimbals at rest) against roll.
 * `metacentric`: GZ = GM sin(roll). `curve`: points at rising angles from 0, odd in roll, joined by a natural
 * cubic spline; beyond the last point the arm keeps its last value.
 */
export type Righting =
  | { readonly kind: 'metacentric'; readonly metacentricHeight: number }
  | { readonly kind: 'curve'; readonly angle: readonly number[]; readonly arm: readonly number[] };

export interface RightingModel {
  readonly metacentricHeight: number;
  /** Empty for the metacentric kind. */
  readonly knots: Float64Array;
  /** Cubic of each interval, 4 per interval, in powers of (angle - knot). */
  readonly cubic: Float64Array;
  /** Integral of the arm from 0 to each knot. */
  readonly area: Float64Array;
}

/** Compiles a righting curve. Throws RangeError unless it starts at (0, 0) and its angles rise. O(points). */
export function compileRighting(righting: Righting): RightingModel {
  if (righting.kind === 'metacentric') {
    const none = new Float64Array(0);
    return { metacentricHeight: righting.metacentricHeight, knots: none, cubic: none, area: none };
  }
  const { angle, arm } = righting;
  const n = angle.length;
  if (n < 3 || arm.length !== n || angle[0] !== 0 || arm[0] !== 0)
    throw new RangeError('a righting curve needs three points or more, the first of them (0, 0)');
  const knots = Float64Array.from(angle);
  const curvature = naturalSpline(knots, arm);
  const cubic = new Float64Array(4 * (n - 1));
  const area = new Float64Array(n);
  for (let i = 0; i < n - 1; i++) {
    const d = knots[i + 1]! - knots[i]!;
    const a = arm[i]!;
    const b = (arm[i + 1]! - a) / d - (d * (2 * curvature[i]! + curvature[i + 1]!)) / 6;
    const c = curvature[i]! / 2;
    const e = (curvature[i + 1]! - curvature[i]!) / (6 * d);
    cubic.set([a, b, c, e], 4 * i);
    area[i + 1] = area[i]! + d * (a + d * (b / 2 + d * (c / 3 + (d * e) / 4)));
  }
  return { metacentricHeight: cubic[1]!, knots, cubic, area };
}

/** Second derivatives of the natural cubic spline; the zero one at 0 is what odd symmetry asks for. */
function naturalSpline(x: Float64Array, y: readonly number[]): Float64Array {
  const n = x.length;
  const second = new Float64Array(n);
  const u = new Float64Array(n);
  for (let i = 1; i < n - 1; i++) {
    const left = x[i]! - x[i - 1]!;
    const right = x[i + 1]! - x[i]!;
    if (!(left > 0 && right > 0)) throw new RangeError('the angles of a righting curve must rise');
    const s = left / (left + right);
    const p = s * second[i - 1]! + 2;
    second[i] = (s - 1) / p;
    const bend = (y[i + 1]! - y[i]!) / right - (y[i]! - y[i - 1]!) / left;
    u[i] = ((6 * bend) / (left + right) - s * u[i - 1]!) / p;
  }
  second[n - 1] = 0;
  for (let i = n - 2; i > 0; i--) second[i] = second[i]! * second[i + 1]! + u[i]!;
  second[0] = 0;
  return second;
}

const intervalOf = (knots: Float64Array, angle: number): number => {
  let i = knots.length - 2;
  while (i > 0 && angle < knots[i]!) i--;
  return i;
};

/** Righting arm, m, at a roll angle, rad. Allocates nothing. */
export function rightingArm(model: RightingModel, roll: number): number {
  const n = model.knots.length;
  if (n === 0) return model.metacentricHeight * Math.sin(roll);
  const x = Math.min(Math.abs(roll), model.knots[n - 1]!);
  const i = intervalOf(model.knots, x);
  const d = x - model.knots[i]!;
  const c = model.cubic;
  const k = 4 * i;
  const arm = c[k]! + d * (c[k + 1]! + d * (c[k + 2]! + d * c[k + 3]!));
  return roll < 0 ? -arm : arm;
}

/** Slope of the righting arm, m/rad. */
export function rightingSlope(model: RightingModel, roll: number): number {
  const n = model.knots.length;
  if (n === 0) return model.metacentricHeight * Math.cos(roll);
  const x = Math.abs(roll);
  if (x > model.knots[n - 1]!) return 0;
  const i = intervalOf(model.knots, x);
  const d = x - model.knots[i]!;
  const k = 4 * i;
  return model.cubic[k + 1]! + d * (2 * model.cubic[k + 2]! + d * 3 * model.cubic[k + 3]!);
}

/** Integral of the righting arm from upright to a roll angle, m*rad; times the weight it is the energy. */
export function rightingArea(model: RightingModel, roll: number): number {
  const n = model.knots.length;
  if (n === 0) return model.metacentricHeight * (1 - Math.cos(roll));
  const last = model.knots[n - 1]!;
  const x = Math.min(Math.abs(roll), last);
  const i = intervalOf(model.knots, x);
  const d = x - model.knots[i]!;
  const c = model.cubic;
  const k = 4 * i;
  const inside =
    model.area[i]! + d * (c[k]! + d * (c[k + 1]! / 2 + d * (c[k + 2]! / 3 + (d * c[k + 3]!) / 4)));
  return inside + (Math.abs(roll) - x) * rightingArm(model, last);
}
