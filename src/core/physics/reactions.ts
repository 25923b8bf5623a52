/** What the footing carries: the support's force, its centre of pressure, and what each servo must hold. */
import type { FirmFooting } from './footing';
import { footingWrench, inverseDynamics } from './inverseDynamics';
import type { Vec3 } from './spatial';
import type { StarModel } from './starModel';
import type { StarWork } from './starWork';

export interface SupportReaction {
  /** Force of the ground on the rig, body components, N. */
  readonly force: Vec3;
  /** Moment about O, body components, N*m. */
  readonly moment: Vec3;
}

export interface CentreOfPressure {
  /** Body frame, on the plane of the soles, m. Not finite when the ground carries no load. */
  readonly x: number;
  readonly y: number;
  /** Load across the soles, N; negative means the ground would have to pull. */
  readonly load: number;
  /** Moment about the vertical through the centre of pressure that friction must give, N*m. */
  readonly twist: number;
}

/**
 * Force and moment of the footing on the rig, at a state with its acceleration (from starAcceleration). Includes
 * what the legs' motion asks when work holds a moving base. Allocates; O(n).
 */
export function supportReaction(
  model: StarModel,
  work: StarWork,
  state: ArrayLike<number>,
  acceleration: ArrayLike<number>,
  wrench: ArrayLike<number>,
): SupportReaction {
  const out = new Float64Array(6);
  footingWrench(model, work, state, acceleration, wrench, out);
  return { moment: [out[0]!, out[1]!, out[2]!], force: [out[3]!, out[4]!, out[5]!] };
}

/**
 * Where flat feet press: the point of the plane z = height at which the ground's force has no moment about x and y.
 * Source: Vukobratovic and Borovac, Int. J. Humanoid Robotics 1(1), 2004 (from memory).
 */
export function centreOfPressure(reaction: SupportReaction, height: number): CentreOfPressure {
  const [fx, fy, fz] = reaction.force;
  const [mx, my, mz] = reaction.moment;
  const x = (height * fx - my) / fz;
  const y = (mx + height * fy) / fz;
  return { x, y, load: fz, twist: mz - (x * fy - y * fx) };
}

/** How the centre of pressure sits in the support polygon. */
export interface SupportMargin {
  /** Distance to the nearest side, m; negative outside. */
  readonly distance: number;
  /** That side: from corner `side` to the next; the one it would tip about. */
  readonly side: number;
}

/** Distance from the centre of pressure to the nearest side of the support polygon. O(corners). */
export function supportMargin(
  footing: FirmFooting,
  cop: { readonly x: number; readonly y: number },
): SupportMargin {
  let distance = Number.POSITIVE_INFINITY;
  let side = 0;
  const { support } = footing;
  support.forEach(([x, y], k) => {
    const [nextX, nextY] = support[(k + 1) % support.length]!;
    const length = Math.hypot(nextX - x, nextY - y);
    const inside = ((nextX - x) * (cop.y - y) - (nextY - y) * (cop.x - x)) / length;
    if (inside < distance) {
      distance = inside;
      side = k;
    }
  });
  return { distance, side };
}

/** Torques the drives must give for a motion: gimbal servos (or locks) and wheel motors, N*m. */
export interface DriveTorques {
  readonly gimbal: Float64Array;
  readonly motor: Float64Array;
}

/** Servo and motor torques a motion asks for, springs, friction and drag allowed for. Allocates; O(n). */
export function driveTorques(
  model: StarModel,
  work: StarWork,
  state: ArrayLike<number>,
  acceleration: ArrayLike<number>,
  wrench: ArrayLike<number>,
): DriveTorques {
  const out = new Float64Array(model.accelerationSize);
  inverseDynamics(model, work, state, acceleration, wrench, out);
  const nb = model.footing.speeds;
  return { gimbal: out.slice(nb, nb + model.gimbals), motor: out.slice(nb + model.gimbals) };
}
