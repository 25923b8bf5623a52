/** The parts of one run, mounted from the rig as built. */
import {
  type Controller,
  createServoWork,
  mountServo,
  resetServo,
  type ServoModel,
  type ServoWork,
} from '../control';
import { type CompiledRig, compileStar, type StarModel } from '../physics';
import { type GimbalGroup, gimbalGroups, type PlanSetting, pivotHeight } from '../planning';
import type { Gyro } from '../rig';
import { type Build, builtCarrier, builtServo } from './build';
import type { FirmOutside } from './firmOutside';
import type { PreviewLaw } from './previewLaw';
import type { Sense } from './sensing';

/** Carries the torque of reaction wheels through the delay of the loop. */
export interface MotorLine {
  readonly servo: ServoModel;
  readonly work: ServoWork;
}

/** A blow: s, and N*m*s about the line the body leans about. */
export interface RunJump {
  readonly time: number;
  readonly roll: number;
}

export interface Actuator {
  readonly group: GimbalGroup;
  /** Sign with which the group's leader follows the planned tilt; 0 for a group that does not work in roll. */
  readonly sign: number;
  readonly servo: ServoModel;
  readonly work: ServoWork;
}

/** How a run differs from a preview. */
export interface RunChoice {
  readonly build: Build;
  readonly sense: Sense;
  /** For gains that the rig leaves to be computed. */
  readonly controller?: Controller | undefined;
  /** Shoves that no plan knows of. */
  readonly surprises?: readonly Surprise[];
  /** s */
  readonly length: number;
  /** Hz at which commands are sent. */
  readonly commandRate: number;
}

/** A shove out of the blue: N*s to the left, m above the ground. */
export interface Surprise {
  readonly time: number;
  readonly impulse: number;
  readonly height: number;
}

/** The star as built. Roll alone is run: feet tip, and a point pivots, about a line that runs forward. */
export function rollStar(compiled: CompiledRig, build: Build, isLocked: boolean): StarModel {
  const { footing } = compiled.rig;
  const isTurned = footing.kind === 'firm' || footing.kind === 'point';
  const isDrawn = build.mass === 1 && build.centreUp === 0;
  const mustLock = isLocked && compiled.star.gyros.some(({ drive }) => drive.kind === 'free');
  if (!isTurned && isDrawn && !mustLock) return compiled.model;
  return compileStar({
    ...compiled.star,
    gyros: mustLock
      ? compiled.star.gyros.map((gyro) => ({ ...gyro, drive: { kind: 'locked' } as const }))
      : compiled.star.gyros,
    base: isDrawn ? compiled.star.base : builtCarrier(compiled, build),
    footing: isTurned
      ? {
          kind: 'edge',
          point: footing.kind === 'point' ? footing.position : [0, 0, 0],
          axis: [1, 0, 0],
        }
      : compiled.star.footing,
  });
}

export function mountActuators(
  setting: PlanSetting,
  model: StarModel,
  law: PreviewLaw,
  { build, commandRate }: RunChoice,
  signOf: (gyro: number) => number,
): readonly Actuator[] {
  const { compiled } = setting;
  const { gyros } = compiled.rig.array;
  const { loopDelay, loopJitter } = compiled.rig.sensing;
  return gimbalGroups(compiled).map((group): Actuator => {
    const { min, max } = gyros[group.leader]?.tilt ?? { min: 0, max: 0 };
    const inertia = group.members.reduce((sum, { index }) => sum + model.hingeInertia[index], 0);
    const gimbals = group.members.map(({ index }) => (gyros[index] as Gyro).gimbal);
    const servo = mountServo(builtServo(group.servo, gimbals, build), {
      gimbalInertia: inertia,
      tiltMin: min,
      tiltMax: max,
    });
    const work = createServoWork(servo, commandRate, loopDelay + loopJitter);
    const sign = signOf(group.leader);
    resetServo(work, sign * law.startTilt);
    return { group, sign, servo, work };
  });
}

/** The way from loop to motors, used for its delay alone. */
export function mountMotorLine({ rig }: CompiledRig, commandRate: number): MotorLine {
  const servo: ServoModel = {
    stallTorque: 1,
    noLoadSpeed: 1,
    torqueLimit: 1,
    delay: 0,
    lag: 0,
    backlash: 0,
    deadBand: 0,
    resolution: 0,
    updateRate: 0,
    gimbalInertia: 1,
    rotorInertia: 0,
    tiltMin: 0,
    tiltMax: 0,
  };
  const { loopDelay, loopJitter } = rig.sensing;
  return { servo, work: createServoWork(servo, commandRate, loopDelay + loopJitter) };
}

export function listJumps(
  setting: PlanSetting,
  outside: FirmOutside | undefined,
  { build, surprises = [] }: RunChoice,
): readonly RunJump[] {
  const known = outside ? outside.jumps : setting.disturbances.jumps;
  const height = pivotHeight(setting.compiled);
  return [
    ...known.map(({ time, roll }) => ({ time, roll: roll * build.shove })),
    ...surprises.map((shove) => ({
      time: shove.time,
      roll: -(shove.height - height) * shove.impulse * build.shove,
    })),
  ].sort((a, b) => a.time - b.time);
}
