/** What a pointer's ray means to a handle: places along a line, angles in a plane, and the values they snap to. */
import type { Point } from './bodyPlaces';

export interface Ray {
  readonly origin: Point;
  /** Unit vector. */
  readonly direction: Point;
}

const dot = (a: Point, b: Point): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const minus = (a: Point, b: Point): Point => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
const cross = (a: Point, b: Point): Point => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

/**
 * Where along a line the pointer's ray passes closest, m from the line's origin.
 *
 * @param axis  unit vector of the line
 * @returns undefined when ray and line are so nearly parallel that the place cannot be told.
 */
export function placeOnLine(ray: Ray, origin: Point, axis: Point): number | undefined {
  const along = dot(ray.direction, axis);
  const apart = 1 - along * along;
  if (apart < 1e-4) return undefined;
  const between = minus(ray.origin, origin);
  return (dot(between, axis) - along * dot(between, ray.direction)) / apart;
}

/**
 * Angle at which the pointer's ray meets the plane of an arc, rad, right-handed about `normal` from `zero`.
 *
 * @param normal  unit vector
 * @param zero    unit vector in the plane
 * @returns undefined when the plane is seen edge-on or the ray meets it behind the eye or at the arc's middle.
 */
export function angleInPlane(ray: Ray, centre: Point, normal: Point, zero: Point): number | undefined {
  const slope = dot(ray.direction, normal);
  if (Math.abs(slope) < 0.02) return undefined;
  const distance = dot(minus(centre, ray.origin), normal) / slope;
  if (distance < 0) return undefined;
  const arm: Point = [
    ray.origin[0] + ray.direction[0] * distance - centre[0],
    ray.origin[1] + ray.direction[1] * distance - centre[1],
    ray.origin[2] + ray.direction[2] * distance - centre[2],
  ];
  const x = dot(arm, zero);
  const y = dot(arm, cross(normal, zero));
  return x * x + y * y < 1e-18 ? undefined : Math.atan2(y, x);
}

/** The angle that differs from `angle` by whole turns and lies nearest to `near`. */
export const unwrapAngle = (angle: number, near: number): number =>
  angle + 2 * Math.PI * Math.round((near - angle) / (2 * Math.PI));

/** The nearest whole number of steps; a step of nothing leaves the value as it is. */
export function snap(value: number, step: number): number {
  if (!(step > 0)) return value;
  // Dividing by the reciprocal keeps 0.1 and its like exact: 123 / 1000 is 0.123, 123 * 0.001 is not.
  const inverse = Math.round(1 / step);
  return Math.abs(1 / step - inverse) < 1e-9
    ? Math.round(value * inverse) / inverse
    : Math.round(value / step) * step;
}

/**
 * The step that lengths snap to in a drag, m: a whole millimetre, half centimetre or the like, about a
 * thousandth of the size of the thing.
 */
export function lengthStep(size: number): number {
  const steps = [0.0005, 0.001, 0.005, 0.01, 0.05, 0.1];
  return steps.find((step) => step >= size / 1000) ?? 0.1;
}

export const clamp = (value: number, min: number, max: number): number => Math.min(max, Math.max(min, value));
