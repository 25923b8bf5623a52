/**
 * Energy, momentum and centre of mass of a star, body by body: base, frames and wheels taken one at a time, with
 * none of the kernel's series. Allocates; for checks, reports and weighing.
 */

import { rightingArea } from './footingFloat';
import { basePose, floatHeight } from './footingMotion';
import {
  add3,
  cross3,
  dot3,
  rotate3,
  rotateSymmetric,
  rotationAbout,
  rotationOf,
  type Sym3,
  scale3,
  symmetricTimes3,
  unit3,
  type Vec3,
} from './spatial';
import type { StarModel } from './starModel';
import type { StarWork } from './starWork';

export interface StarConserved {
  readonly mass: number;
  /** World frame, m. */
  readonly centreOfMass: Vec3;
  /** World frame, m/s. */
  readonly velocity: Vec3;
  /** kg*m/s, world frame. */
  readonly linearMomentum: Vec3;
  /** About the world's origin, world frame, kg*m^2/s; wheels included. */
  readonly angularMomentum: Vec3;
  readonly kinetic: number;
  /** Gravity, springs and the water's righting, J. */
  readonly potential: number;
}

interface MovingBody {
  readonly mass: number;
  readonly com: Vec3;
  readonly velocity: Vec3;
  readonly rate: Vec3;
  readonly spinMomentum: Vec3;
}

/** Base, then each frame and wheel: mass, place, velocity, momentum about its own centre; body components. */
function bodiesOf(model: StarModel, work: StarWork, state: Float64Array): MovingBody[] {
  const V = work.place.velocity;
  const w: Vec3 = [V[0]!, V[1]!, V[2]!];
  const v: Vec3 = [V[3]!, V[4]!, V[5]!];
  const at = (w1: Vec3, c: Vec3): Vec3 => add3(v, cross3(w1, c));
  const { base } = model.description;
  const bodies: MovingBody[] = [
    {
      mass: base.mass,
      com: base.com,
      velocity: at(w, base.com),
      rate: w,
      spinMomentum: symmetricTimes3(base.inertia, w),
    },
  ];
  model.description.gyros.forEach((gyro, i) => {
    const axis = unit3(gyro.gimbalAxis);
    const R = rotationAbout(axis, state[model.tiltAt + i]!);
    const tiltRate = scale3(axis, state[model.rateAt + i]!);
    const wg = add3(w, tiltRate);
    const swung = (c: Vec3): Vec3 => add3(gyro.position, rotate3(R, c));
    const moved = (c: Vec3): Vec3 => add3(at(w, swung(c)), cross3(tiltRate, rotate3(R, c)));
    bodies.push({
      mass: gyro.frame.mass,
      com: swung(gyro.frame.com),
      velocity: moved(gyro.frame.com),
      rate: wg,
      spinMomentum: symmetricTimes3(rotateSymmetric(R, gyro.frame.inertia), wg),
    });
    const s = rotate3(R, unit3(gyro.spinAxis));
    const ww = add3(wg, scale3(s, state[model.wheelSpeedAt + i]!));
    const { axialInertia: Js, transverseInertia: Jt } = gyro.wheel;
    bodies.push({
      mass: gyro.wheel.mass,
      com: swung(gyro.wheel.centre),
      velocity: moved(gyro.wheel.centre),
      rate: ww,
      spinMomentum: add3(scale3(ww, Jt), scale3(s, (Js - Jt) * dot3(s, ww))),
    });
  });
  return bodies;
}

/**
 * Energy, momentum and centre of mass at a state. The base is the description's: legs set by setMovingBase are
 * not seen here. Reflected servo inertia and added inertia count as kinetic energy, not as momentum.
 */
export function conservedQuantities(model: StarModel, work: StarWork, state: Float64Array): StarConserved {
  const pose = new Float64Array(7);
  basePose(model, work.place, state, pose);
  const R = rotationOf(pose);
  const origin: Vec3 = [pose[4]!, pose[5]!, pose[6]!];
  const gravity: Vec3 = [model.gravity_W[0]!, model.gravity_W[1]!, model.gravity_W[2]!];
  let mass = 0;
  let kinetic = 0;
  let potential = 0;
  let first: Vec3 = [0, 0, 0];
  let linear: Vec3 = [0, 0, 0];
  let angular: Vec3 = [0, 0, 0];
  for (const body of bodiesOf(model, work, state)) {
    const place = add3(origin, rotate3(R, body.com));
    const p = scale3(rotate3(R, body.velocity), body.mass);
    mass += body.mass;
    first = add3(first, scale3(place, body.mass));
    linear = add3(linear, p);
    angular = add3(angular, add3(cross3(place, p), rotate3(R, body.spinMomentum)));
    kinetic += (body.mass * dot3(body.velocity, body.velocity) + dot3(body.rate, body.spinMomentum)) / 2;
    potential -= body.mass * dot3(gravity, place);
  }
  for (let i = 0; i < model.gimbals; i++) {
    const rate = state[model.rateAt + i]!;
    kinetic += (model.reflectedInertia[i]! * rate * rate) / 2;
    const bend = state[model.tiltAt + i]! - model.spring[3 * i + 1]!;
    potential += (model.spring[3 * i]! * bend * bend) / 2;
  }
  if (model.footing.floats !== null) {
    const V = work.place.velocity;
    const a = model.footing.axis;
    const p = V[0]! * a[0]! + V[1]! * a[1]! + V[2]! * a[2]!;
    kinetic += (model.footing.floats.addedInertia * p * p) / 2;
    potential += waterEnergy(model, work, state, origin);
  }
  return {
    mass,
    centreOfMass: scale3(first, 1 / mass),
    velocity: scale3(linear, 1 / mass),
    linearMomentum: linear,
    angularMomentum: angular,
    kinetic,
    potential,
  };
}

/** Energy of the water's wrench: righting, pitch and heave, less the weight of the rig at rest (see addWaterWrench). */
function waterEnergy(model: StarModel, work: StarWork, state: Float64Array, origin: Vec3): number {
  const floats = model.footing.floats!;
  const R = work.place.R_WB;
  const rest = model.restRig;
  const G = model.gravity_W;
  const weight = rest[0]! * Math.sqrt(G[0]! ** 2 + G[1]! ** 2 + G[2]! ** 2);
  let energy = weight * rightingArea(floats.righting, Math.atan2(R[7]!, R[8]!));
  for (let j = 0; j < 3; j++) {
    const moment = R[3 * j]! * rest[1]! + R[3 * j + 1]! * rest[2]! + R[3 * j + 2]! * rest[3]!;
    energy += G[j]! * (moment + rest[0]! * origin[j]!);
  }
  if (model.footing.pose === 'free') {
    const height = floatHeight(model, work.place, state);
    energy += weight * floats.pitchHeight * (1 - Math.sqrt(R[7]! ** 2 + R[8]! ** 2));
    energy += (floats.heaveStiffness * height * height) / 2;
  }
  return energy;
}

/** Centre of mass at a state, body frame, m, and mass, kg. */
export function starCentre(model: StarModel, tilt: ArrayLike<number>): { mass: number; com_B: Vec3 } {
  let mass = model.description.base.mass;
  let first = scale3(model.description.base.com, mass);
  model.description.gyros.forEach((gyro, i) => {
    const R = rotationAbout(unit3(gyro.gimbalAxis), tilt[i]!);
    for (const part of [
      { mass: gyro.frame.mass, at: gyro.frame.com },
      { mass: gyro.wheel.mass, at: gyro.wheel.centre },
    ]) {
      mass += part.mass;
      first = add3(first, scale3(add3(gyro.position, rotate3(R, part.at)), part.mass));
    }
  });
  return { mass, com_B: scale3(first, 1 / mass) };
}

/** Inertia of the whole rig about a point, body axes, gimbals at the given tilts, wheels as they stand. */
export function starInertia(model: StarModel, tilt: ArrayLike<number>, about_B: Vec3): Sym3 {
  const { base, gyros } = model.description;
  const parts = [{ mass: base.mass, com: base.com, inertia: base.inertia }];
  gyros.forEach((gyro, i) => {
    const R = rotationAbout(unit3(gyro.gimbalAxis), tilt[i]!);
    const s = rotate3(R, unit3(gyro.spinAxis));
    const { axialInertia: Js, transverseInertia: Jt } = gyro.wheel;
    const d = Js - Jt;
    parts.push({
      mass: gyro.frame.mass,
      com: add3(gyro.position, rotate3(R, gyro.frame.com)),
      inertia: rotateSymmetric(R, gyro.frame.inertia),
    });
    parts.push({
      mass: gyro.wheel.mass,
      com: add3(gyro.position, rotate3(R, gyro.wheel.centre)),
      inertia: [
        Jt + d * s[0] * s[0],
        Jt + d * s[1] * s[1],
        Jt + d * s[2] * s[2],
        d * s[0] * s[1],
        d * s[0] * s[2],
        d * s[1] * s[2],
      ],
    });
  });
  const total: [number, number, number, number, number, number] = [0, 0, 0, 0, 0, 0];
  for (const part of parts) {
    const [x, y, z] = [part.com[0] - about_B[0], part.com[1] - about_B[1], part.com[2] - about_B[2]];
    const m = part.mass;
    const shift = [
      m * (y * y + z * z),
      m * (x * x + z * z),
      m * (x * x + y * y),
      -m * x * y,
      -m * x * z,
      -m * y * z,
    ];
    part.inertia.forEach((value, k) => {
      total[k] = total[k]! + value + shift[k]!;
    });
  }
  return total;
}
