/** How a wheel's residual unbalance shakes the sensor of a body that is free to move. */
import { aliasFrequency, unbalanceForce } from './balanceGrade';
import { add3, cross3, dot3, type Sym3, scale3, subtract3, unit3, type Vec3 } from './spatial';
import type { RigidBody } from './starModel';

export interface SensorShake {
  /** N, turning with the wheel. */
  readonly force: number;
  /** m/s^2, greatest amplitude over all directions. */
  readonly acceleration: number;
  /** rad/s, the same of body rate: what a rate gyro takes for motion. */
  readonly rate: number;
  /** Hz, of the wheel. */
  readonly frequency: number;
  /** Hz, at which it shows in the samples of the loop when nothing filters it before. */
  readonly alias: number;
}

/** Solves S x = b for a symmetric positive definite 3 x 3 by Cramer's rule; S as xx, yy, zz, xy, xz, yz. */
function solveSymmetric(S: Sym3, b: Vec3): Vec3 {
  const [xx, yy, zz, xy, xz, yz] = S;
  const c0: Vec3 = [xx, xy, xz];
  const c1: Vec3 = [xy, yy, yz];
  const c2: Vec3 = [xz, yz, zz];
  const determinant = dot3(c0, cross3(c1, c2));
  return [
    dot3(b, cross3(c1, c2)) / determinant,
    dot3(b, cross3(c2, c0)) / determinant,
    dot3(b, cross3(c0, c1)) / determinant,
  ];
}

/** Greatest length of p cos(t) + q sin(t): the long half-axis of the ellipse they span. */
function longHalfAxis(p: Vec3, q: Vec3): number {
  const pp = dot3(p, p);
  const qq = dot3(q, q);
  const spread = Math.sqrt(((pp - qq) / 2) ** 2 + dot3(p, q) ** 2);
  return Math.sqrt((pp + qq) / 2 + spread);
}

/**
 * Shake of the sensor from one wheel's unbalance, the body free: above the resonance of what it stands on and
 * below its own first bending one.
 *
 * @param body       whole rig, inertia about its centre of mass, body frame
 * @param wheelAt    m, body frame, where the force acts
 * @param spinAxis   any length, body frame
 * @param sensorAt   m, body frame
 * @param unbalance  kg*m
 * @param speed      rad/s
 * @param loopRate   Hz
 *
 * O(1). Source: Newton and Euler for a rigid body; Den Hartog, Mechanical Vibrations.
 */
export function sensorShake(
  body: RigidBody,
  wheelAt: Vec3,
  spinAxis: Vec3,
  sensorAt: Vec3,
  unbalance: number,
  speed: number,
  loopRate: number,
): SensorShake {
  const axis = unit3(spinAxis);
  const aside: Vec3 = Math.abs(axis[0]) < 0.7 ? [1, 0, 0] : [0, 1, 0];
  const u = unit3(cross3(axis, aside));
  const v = cross3(axis, u);
  const force = unbalanceForce(unbalance, speed);
  const arm = subtract3(wheelAt, body.com);
  const reach = subtract3(sensorAt, body.com);
  const turningOf = (f: Vec3): Vec3 => solveSymmetric(body.inertia, cross3(arm, f));
  const fu = scale3(u, force);
  const fv = scale3(v, force);
  const tu = turningOf(fu);
  const tv = turningOf(fv);
  const at = (f: Vec3, turning: Vec3): Vec3 => add3(scale3(f, 1 / body.mass), cross3(turning, reach));
  const frequency = speed / (2 * Math.PI);
  return {
    force,
    acceleration: longHalfAxis(at(fu, tu), at(fv, tv)),
    rate: speed > 0 ? longHalfAxis(tu, tv) / speed : 0,
    frequency,
    alias: aliasFrequency(frequency, loopRate),
  };
}
