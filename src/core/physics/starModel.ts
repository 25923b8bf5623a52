/**
 * The star: one base body, n gimbals hinged to it, one axisymmetric wheel in each. Conventions, said once:
 *
 * - Body frame B: x forward, y left, z up, origin O wherever the description puts it. World frame W has z up;
 *   at zero pose the two coincide.
 * - Quaternions are w first, unit, and turn body components into world components.
 * - State: [ pose | tilt n | base speeds | tilt rate n | wheel speed n ]. Pose and base speeds depend on the
 *   footing (see footing.ts). Base rates and velocities are in body components, rotation before translation.
 *   A wheel's angle is no state: the wheel is axisymmetric, so only its speed Omega relative to the gimbal counts.
 * - Tilt is right-handed about the gimbal axis; wheel speed right-handed about the spin axis.
 * - Effort: [ gimbal n | motor n | wrench 6 ]. The gimbal entry is a torque (N*m, on the gimbal, reaction on the
 *   base) or, for a servo that prescribes its motion, a tilt acceleration (rad/s^2). The motor entry is the
 *   torque on the wheel along its spin axis, reaction on the gimbal. The wrench is moment about O then force,
 *   on the base, body components.
 * - Acceleration: [ base speeds' rates | tilt accelerations n | wheel speed rates n ].
 *
 * Every mass is seen from O in body components, so a star needs no transformation between bodies: gimbal i's
 * inertia about O is a trigonometric polynomial of second degree in its tilt, compiled once.
 */
import { type ArrayModel, compileArray } from './arrayLaw';
import { compileFixedLine, type FixedLineModel } from './fixedLine';
import { compileFooting, type FootingModel, type StarFooting } from './footing';
import { type GimbalFriction, noDrag, noFriction, type WheelDrag } from './losses';
import {
  add3,
  addSymmetric,
  cross3,
  dot3,
  outerSymmetric,
  pointInertia,
  rotate3,
  rotateSymmetric,
  rotationAbout,
  type Sym3,
  scale3,
  symmetricTimes3,
  unit3,
  type Vec3,
} from './spatial';

export interface RigidBody {
  /** kg. */
  readonly mass: number;
  /** Centre of mass, m; body frame, from O for the base, from the gyro's position for a gimbal frame. */
  readonly com: Vec3;
  /** About the centre of mass, body axes, kg*m^2. */
  readonly inertia: Sym3;
}

export type StarDrive =
  | { readonly kind: 'servo'; readonly input: 'torque' | 'acceleration'; readonly reflectedInertia?: number }
  | { readonly kind: 'free'; readonly stiffness: number; readonly restTilt: number; readonly damping: number }
  | { readonly kind: 'locked' };

/**
 * Whether a wheel's speed is held by its controller, left alone, or driven by a given motor torque. Coasting and driven
 * are one to the dynamics (the motor's entry of the effort acts on both); the word says which is meant.
 */
export type StarSpin = 'held' | 'coasting' | 'driven';

export interface StarWheel {
  readonly mass: number;
  /** J_s about the spin axis, kg*m^2. */
  readonly axialInertia: number;
  /** J_t across it, about the wheel's centre, kg*m^2. */
  readonly transverseInertia: number;
  /** Wheel centre from the gyro's position at rest tilt, body frame, m. */
  readonly centre: Vec3;
}

export interface StarGyro {
  /** A point on the gimbal axis, body frame, m. */
  readonly position: Vec3;
  readonly gimbalAxis: Vec3;
  /** Spin axis at zero tilt. */
  readonly spinAxis: Vec3;
  /** The gimbal's frame without the wheel, at rest tilt. */
  readonly frame: RigidBody;
  readonly wheel: StarWheel;
  readonly drive: StarDrive;
  readonly spin: StarSpin;
  readonly friction?: GimbalFriction;
  readonly drag?: WheelDrag;
}

export interface StarDescription {
  readonly base: RigidBody;
  readonly gyros: readonly StarGyro[];
  readonly footing: StarFooting;
  /** World frame, m/s^2. A slope is a gravity that leans. Default straight down, 9.80665. */
  readonly gravity?: Vec3;
}

export const standardGravity: Vec3 = [0, 0, -9.80665];

/** What a gimbal's motion is decided by. */
export const gimbalIsDynamic = 0;
export const gimbalIsPrescribed = 1;
export const gimbalIsLocked = 2;

export interface StarModel {
  readonly description: StarDescription;
  readonly gimbals: number;
  readonly footing: FootingModel;
  readonly stateSize: number;
  readonly effortSize: number;
  readonly accelerationSize: number;
  /** Where each part of the state begins. */
  readonly tiltAt: number;
  readonly baseSpeedAt: number;
  readonly rateAt: number;
  readonly wheelSpeedAt: number;
  readonly array: ArrayModel;
  readonly gravity_W: Float64Array;
  /** Base about O: [mass, first moment 3, inertia 6]. Added inertia of water is not in it. */
  readonly base: Float64Array;
  /** Whole rig about O with gimbals at zero tilt, same layout; wheels included as they stand. */
  readonly restRig: Float64Array;
  /** 6n: hinge motion seen at O: axis, then position x axis. */
  readonly hinge: Float64Array;
  readonly mass: Float64Array;
  /** 9n: first moment about O, kg*m: c0 + c1 cos + c2 sin. */
  readonly momentSeries: Float64Array;
  /** 30n: inertia about O, kg*m^2: constant, cos, sin, cos 2, sin 2. A wheel free to spin keeps its J_s out. */
  readonly inertiaSeries: Float64Array;
  /** n: inertia about the gimbal axis with the servo's reflected inertia, kg*m^2; the same at every tilt. */
  readonly hingeInertia: Float64Array;
  readonly reflectedInertia: Float64Array;
  readonly gimbalMode: Uint8Array;
  /** 1 where the wheel's speed is held. */
  readonly isHeld: Uint8Array;
  /** 3n: stiffness, rest tilt, damping. */
  readonly spring: Float64Array;
  /** 5n, in the order of GimbalFriction. */
  readonly friction: Float64Array;
  readonly hasFriction: boolean;
  /** 3n, in the order of WheelDrag. */
  readonly drag: Float64Array;
  readonly hasDrag: boolean;
  /** Scalars of the quick route for a base on a fixed line; null otherwise. */
  readonly line: FixedLineModel | null;
}

const bodyAboutOrigin = (body: RigidBody): number[] => [
  body.mass,
  ...scale3(body.com, body.mass),
  ...addSymmetric(body.inertia, pointInertia(body.mass, body.com)),
];

/** Frame and wheel as one rigid body at a tilt, about O: [mass, first moment 3, inertia 6]. */
function gimbalAboutOrigin(gyro: StarGyro, tilt: number, axialInertia: number): number[] {
  const axis = unit3(gyro.gimbalAxis);
  const R = rotationAbout(axis, tilt);
  const spin = rotate3(R, unit3(gyro.spinAxis));
  const frameCom = add3(gyro.position, rotate3(R, gyro.frame.com));
  const centre = add3(gyro.position, rotate3(R, gyro.wheel.centre));
  const { mass, transverseInertia } = gyro.wheel;
  const wheelInertia: Sym3 = addSymmetric(
    [transverseInertia, transverseInertia, transverseInertia, 0, 0, 0],
    outerSymmetric(spin, axialInertia - transverseInertia),
  );
  const frame = bodyAboutOrigin({
    mass: gyro.frame.mass,
    com: frameCom,
    inertia: rotateSymmetric(R, gyro.frame.inertia),
  });
  const wheel = bodyAboutOrigin({ mass, com: centre, inertia: wheelInertia });
  return frame.map((value, k) => value + wheel[k]!);
}

/** Five equally spaced samples fix a trigonometric polynomial of second degree exactly. */
function fitSeries(sample: (tilt: number) => number[], terms: number): number[][] {
  const series = Array.from({ length: terms }, () => [] as number[]);
  for (let k = 0; k < 5; k++) {
    const tilt = (2 * Math.PI * k) / 5;
    const values = sample(tilt);
    const weights = [
      0.2,
      0.4 * Math.cos(tilt),
      0.4 * Math.sin(tilt),
      0.4 * Math.cos(2 * tilt),
      0.4 * Math.sin(2 * tilt),
    ];
    values.forEach((value, j) => {
      for (let t = 0; t < terms; t++) series[t]![j] = (series[t]![j] ?? 0) + weights[t]! * value;
    });
  }
  return series;
}

/** Inertia about the gimbal axis, from the axis itself rather than from O: no digits lost to distance. */
function inertiaAboutHinge(gyro: StarGyro, axialInertia: number): number {
  const about = { ...gyro, position: [0, 0, 0] as Vec3 };
  const I = gimbalAboutOrigin(about, 0, axialInertia).slice(4) as unknown as Sym3;
  const axis = unit3(gyro.gimbalAxis);
  return dot3(axis, symmetricTimes3(I, axis));
}

const modeOf = (drive: StarDrive): number => {
  if (drive.kind === 'locked') return gimbalIsLocked;
  return drive.kind === 'servo' && drive.input === 'acceleration' ? gimbalIsPrescribed : gimbalIsDynamic;
};

/**
 * Compiles a description into the frozen numbers the kernel reads. Throws RangeError on a direction of no
 * length or a gimbal with no inertia about its axis: a description is made by code that has checked the rig.
 * O(n).
 */
export function compileStar(description: StarDescription): StarModel {
  const gyros = description.gyros;
  const n = gyros.length;
  const footing = compileFooting(description.footing);
  const base = Float64Array.from(bodyAboutOrigin(description.base));
  const restRig = Float64Array.from(base);
  const model = {
    hinge: new Float64Array(6 * n),
    mass: new Float64Array(n),
    momentSeries: new Float64Array(9 * n),
    inertiaSeries: new Float64Array(30 * n),
    hingeInertia: new Float64Array(n),
    reflectedInertia: new Float64Array(n),
    gimbalMode: new Uint8Array(n),
    isHeld: new Uint8Array(n),
    spring: new Float64Array(3 * n),
    friction: new Float64Array(5 * n),
    drag: new Float64Array(3 * n),
  };
  gyros.forEach((gyro, i) => {
    const axis = unit3(gyro.gimbalAxis);
    const axial = gyro.spin === 'held' ? gyro.wheel.axialInertia : 0;
    model.hinge.set([...axis, ...cross3(gyro.position, axis)], 6 * i);
    model.mass[i] = gyro.frame.mass + gyro.wheel.mass;
    const moment = fitSeries((tilt) => gimbalAboutOrigin(gyro, tilt, axial).slice(1, 4), 3);
    const inertia = fitSeries((tilt) => gimbalAboutOrigin(gyro, tilt, axial).slice(4), 5);
    model.momentSeries.set(moment.flat(), 9 * i);
    model.inertiaSeries.set(inertia.flat(), 30 * i);
    model.reflectedInertia[i] = gyro.drive.kind === 'servo' ? (gyro.drive.reflectedInertia ?? 0) : 0;
    model.hingeInertia[i] = inertiaAboutHinge(gyro, axial) + model.reflectedInertia[i]!;
    if (!(model.hingeInertia[i]! > 0)) throw new RangeError(`gyro ${i} has no inertia about its gimbal axis`);
    model.gimbalMode[i] = modeOf(gyro.drive);
    model.isHeld[i] = gyro.spin === 'held' ? 1 : 0;
    if (gyro.drive.kind === 'free')
      model.spring.set([gyro.drive.stiffness, gyro.drive.restTilt, gyro.drive.damping], 3 * i);
    const f = gyro.friction ?? noFriction;
    model.friction.set([f.coulomb, f.stiction, f.viscous, f.stribeckRate, f.creepRate], 5 * i);
    const d = gyro.drag ?? noDrag;
    model.drag.set([d.constant, d.viscous, d.quadratic], 3 * i);
    gimbalAboutOrigin(gyro, 0, gyro.wheel.axialInertia).forEach((value, k) => {
      restRig[k] = restRig[k]! + value;
    });
  });
  const tiltAt = footing.poseSize;
  const baseSpeedAt = tiltAt + n;
  const rateAt = baseSpeedAt + footing.speeds;
  const array = compileArray(gyros.map((g) => ({ ...g, axialInertia: g.wheel.axialInertia })));
  const gravity_W = new Float64Array(description.gravity ?? standardGravity);
  const line = compileFixedLine({ ...model, gimbals: n, array, gravity_W, base, restRig }, footing);
  return Object.freeze({
    description,
    gimbals: n,
    footing,
    line,
    array,
    gravity_W,
    stateSize: rateAt + 2 * n,
    effortSize: 2 * n + 6,
    accelerationSize: footing.speeds + 2 * n,
    tiltAt,
    baseSpeedAt,
    rateAt,
    wheelSpeedAt: rateAt + n,
    base,
    restRig,
    hasFriction: gyros.some((g) => g.friction !== undefined),
    hasDrag: gyros.some((g) => g.drag !== undefined),
    ...model,
  });
}

/** A state at rest: upright, every tilt and speed zero. The caller fills in what differs. */
export function restState(model: StarModel): Float64Array {
  const state = new Float64Array(model.stateSize);
  if (model.footing.poseSize >= 4) state[0] = 1;
  return state;
}
