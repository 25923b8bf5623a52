/** How the rig on the bench differs from the drawing, and the parts of its models that follow from it. */
import { type CompiledRig, combineBodies, fallOf, type RigidBody, STANDARD_GRAVITY } from '../physics';
import type { LeanPlanSetting } from '../planning';
import type { Gyro, Servo } from '../rig';

/** What a preview takes to differ. */
export interface Doubt {
  /** m, centre of mass to the left of where it is drawn. */
  readonly centreAcross: number;
  /** Wheel speed over the one asked for. */
  readonly wheelSpeed: number;
}

/** Usual for careful work, common practice. */
export const USUAL_DOUBT: Doubt = { centreAcross: 0.004, wheelSpeed: 0.97 };

/** One rig as built. Every ratio is the real figure over the drawn one. */
export interface Build extends Doubt {
  /** Ratio of mass and inertia of everything but the gyros. */
  readonly mass: number;
  /** m, centre of mass of the whole above where it is drawn. */
  readonly centreUp: number;
  readonly servoLag: number;
  readonly backlash: number;
  /** Ratio of all random errors of the sensors, shaking by the wheels included; their steady bias is kept. */
  readonly noise: number;
  /** Ratio of stiction and viscous friction of the gimbals. */
  readonly friction: number;
  /** Ratio of every shove. */
  readonly shove: number;
}

export const AS_DRAWN: Build = {
  centreAcross: 0,
  wheelSpeed: 1,
  mass: 1,
  centreUp: 0,
  servoLag: 1,
  backlash: 1,
  noise: 1,
  friction: 1,
  shove: 1,
};

/** The body without its gyros as built, the shift across left to whoever runs it. */
export function builtCarrier({ carrier, whole }: CompiledRig, build: Build): RigidBody {
  const up = (build.centreUp * whole.mass) / carrier.mass;
  const [xx, yy, zz, xy, xz, yz] = carrier.inertia;
  return {
    mass: carrier.mass * build.mass,
    com: [carrier.com[0], carrier.com[1], carrier.com[2] + up],
    inertia: [
      xx * build.mass,
      yy * build.mass,
      zz * build.mass,
      xy * build.mass,
      xz * build.mass,
      yz * build.mass,
    ],
  };
}

/** Everything as built: the drawn whole with the difference of the two carriers put in. */
export function builtWhole(compiled: CompiledRig, build: Build): RigidBody {
  const { carrier, whole } = compiled;
  if (build.mass === 1 && build.centreUp === 0) return whole;
  const [xx, yy, zz, xy, xz, yz] = carrier.inertia;
  const taken: RigidBody = {
    mass: -carrier.mass,
    com: carrier.com,
    inertia: [-xx, -yy, -zz, -xy, -xz, -yz],
  };
  return combineBodies([whole, taken, builtCarrier(compiled, build)]);
}

/**
 * A servo on its gimbal as built. Friction takes its share of the straight speed-torque line: stiction off the
 * torque at every speed, viscous friction as a steeper line. Exact while the motor drives, which is when the
 * line binds.
 */
export function builtServo(servo: Servo, gimbals: readonly Gyro['gimbal'][], build: Build): Servo {
  const sum = (of: (gimbal: Gyro['gimbal']) => number): number =>
    build.friction * gimbals.reduce((total, gimbal) => total + of(gimbal), 0);
  const stall = Math.max(0.01 * servo.stallTorque, servo.stallTorque - sum(({ stiction }) => stiction));
  const slope = servo.stallTorque / servo.noLoadSpeed + sum(({ friction }) => friction);
  return {
    ...servo,
    stallTorque: stall,
    noLoadSpeed: stall / slope,
    lag: servo.lag * build.servoLag,
    backlash: servo.backlash * build.backlash,
  };
}

/** Roll inertia (kg*m^2) and toppling stiffness (N*m/rad) of a body that leans, as built. */
export function builtFall(
  { compiled, inertia, stiffness }: LeanPlanSetting,
  build: Build,
): { readonly inertia: number; readonly stiffness: number } {
  if (build.mass === 1 && build.centreUp === 0) return { inertia, stiffness: -stiffness };
  const whole = builtWhole(compiled, build);
  const fall = fallOf({ ...compiled, whole });
  // A float's metacentric height is counted from the centre as drawn.
  const raised = compiled.floating ? STANDARD_GRAVITY * compiled.whole.mass * build.centreUp : 0;
  return { inertia: fall.inertia, stiffness: -fall.stiffness + raised };
}
