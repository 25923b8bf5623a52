import type { Control, Sensing, Servo } from '../rig';
import type { Controller } from './controllers';
import type { Law } from './loopModel';
import type { RollTiltPlant } from './plantModels';
import { summariseServo } from './servoMotion';

/** The body and array of a rig about one line, as physics works them out. */
export interface LoopBody {
  /** kg*m^2 about the line, array carried along */
  readonly inertia: number;
  /** N*m/rad, positive when it topples */
  readonly stiffness: number;
  /** N*m*s/rad */
  readonly damping: number;
  /** N*m*s of roll momentum per unit of sin(tilt); unused for a reaction wheel */
  readonly momentum: number;
  /** m, the roll line above the ground from which the sensor's height is counted */
  readonly lineHeight: number;
  readonly gravity: number;
}

/** The linear plant of a rig whose gimbals are driven by a servo: loop delay, servo delay and half its frame add up. */
export function assembleTiltPlant(body: LoopBody, servo: Servo, sensing: Sensing): RollTiltPlant {
  const felt = summariseServo(servo);
  return {
    actuator: 'tilt',
    inertia: body.inertia,
    stiffness: body.stiffness,
    damping: body.damping,
    momentum: body.momentum,
    servoLag: felt.lag,
    delay: felt.delay + sensing.loopDelay,
    sampleTime: 1 / sensing.loopRate,
    sensorHeight: sensing.height - body.lineHeight,
    gravity: body.gravity,
  };
}

/** The linear plant of a rig with a reaction wheel, whose motor answers with a first-order lag (s). */
export function assembleWheelPlant(body: LoopBody, torqueLag: number, sensing: Sensing): RollTiltPlant {
  return {
    actuator: 'wheelTorque',
    inertia: body.inertia,
    stiffness: body.stiffness,
    damping: body.damping,
    momentum: 0,
    servoLag: torqueLag,
    delay: sensing.loopDelay,
    sampleTime: 1 / sensing.loopRate,
    sensorHeight: sensing.height - body.lineHeight,
    gravity: body.gravity,
  };
}

/** The law a rig names, or the one to compute gains for when it leaves them to be computed. */
export type NamedLaw =
  | { readonly kind: 'given'; readonly controller: Controller }
  | { readonly kind: 'to-compute'; readonly law: Law };

/**
 * The controller of a rig's control entry.
 *
 * @param isReactionWheel what `computed` gains are for
 */
export function nameLaw(control: Control, isReactionWheel: boolean): NamedLaw {
  switch (control.kind) {
    case 'computed':
      return { kind: 'to-compute', law: isReactionWheel ? 'reactionWheel' : 'feedback' };
    case 'feedback':
      return {
        kind: 'given',
        controller: {
          kind: 'feedback',
          lean: control.lean,
          leanRate: control.leanRate,
          tilt: control.tilt,
          tiltRate: control.tiltRate,
          trim: control.trim,
        },
      };
    case 'pidTilt':
    case 'pidTiltRate':
      return {
        kind: 'given',
        controller: { kind: control.kind, kp: control.kp, ki: control.ki, kd: control.kd },
      };
    case 'passive':
      return { kind: 'given', controller: { kind: 'passive' } };
    case 'reactionWheel':
      return {
        kind: 'given',
        controller: {
          kind: 'reactionWheel',
          lean: control.lean,
          leanRate: control.leanRate,
          speed: control.speed,
        },
      };
  }
}
