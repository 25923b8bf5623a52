/** What the Spin up station says of one gyro before any curve is drawn: loads, stresses, drag, and whether it holds. */
import type { Gyro, Power, Rig } from '../rig';
import { permissibleUnbalance } from './balanceGrade';
import {
  type BearingLoad,
  bearingLoads,
  equivalentDynamicLoad,
  lifeSeconds,
  staticSafety,
  swingingMeanLoad,
} from './bearings';
import { compileDrive, type DriveModel, type HoldOutcome, holdSpeed, topSpeed } from './drive';
import { type WheelBurst, wheelBurst } from './wheelBurst';
import { type WheelDragParts, type WheelEnvelope, wheelDragParts, wheelEnvelope } from './wheelDrag';
import { type WheelFault, type WheelProperties, wheelProperties } from './wheelProperties';
import { USUAL_SPEED_SQUARED_FACTOR, type WheelStress, wheelStress } from './wheelStress';
import { airAt, type Windage, windage } from './windage';

/** What is not in the rig, with usual starts. */
export interface SpinChoices {
  /** Allowable stress over stress to keep. */
  readonly factor: number;
  /** N, axial preload of the bearings. */
  readonly preload: number;
  /** A, braking current when it is stopped; the controller's limit at most. */
  readonly brakeCurrent: number;
}

export const usualSpinChoices = (gyro: Gyro): SpinChoices => ({
  factor: USUAL_SPEED_SQUARED_FACTOR,
  preload: 0,
  brakeCurrent: gyro.motor.currentLimit / 2,
});

export interface SpinStanding {
  readonly gyro: Gyro;
  readonly choices: SpinChoices;
  /** rad/s, greatest rate the gimbal turns the wheel at. */
  readonly gimbalRate: number;
  readonly wheel: WheelProperties;
  readonly envelope: WheelEnvelope;
  readonly stress: WheelStress;
  readonly burst: WheelBurst;
  /** kg*m^2/s. */
  readonly momentum: number;
  /** kg*m, the residual unbalance the grade permits. */
  readonly unbalance: number;
  /** Each of the two, wheel in the middle. */
  readonly bearing: BearingLoad;
  /** N, steady load that wears as the swinging one. */
  readonly meanLoad: number;
  /** s, L10 at running speed. */
  readonly bearingLife: number;
  readonly staticSafety: number;
  /** With the gimbal swinging at its greatest rate: what holding speed has to meet. */
  readonly drag: WheelDragParts;
  /** With the gimbal at rest: what spinning up, coasting and braking meet. */
  readonly restDrag: WheelDragParts;
  readonly drive: DriveModel;
  readonly hold: HoldOutcome;
  /** rad/s, the most this drive reaches. */
  readonly topSpeed: number;
  /** The same wheel in still open air, to show what the housing saves. */
  readonly openAir: Windage;
  readonly windage: Windage;
}

export type StandingOutcome =
  | { readonly kind: 'stands'; readonly standing: SpinStanding }
  | { readonly kind: 'refused'; readonly faults: readonly WheelFault[] };

/** Rate at which a body that walks or rolls turns a locked or free wheel, rad/s; common practice. */
export const BODY_RATE = 2;

/** The greatest rate a gyro's gimbal can reach, rad/s: its servo's no-load speed; the body's own rate without one. */
export function gimbalRateOf(rig: Rig, gyro: Gyro): number {
  const { drive } = gyro;
  switch (drive.kind) {
    case 'servo':
      return drive.servo.noLoadSpeed;
    case 'geared': {
      const leader = rig.array.gyros[drive.leader];
      return leader?.drive.kind === 'servo'
        ? Math.abs(drive.ratio) * leader.drive.servo.noLoadSpeed
        : BODY_RATE;
    }
    case 'free':
    case 'locked':
      return BODY_RATE;
  }
}

/** Slower than a turn a minute, a wheel counts as at rest: a balance grade would allow it any unbalance. */
const SLOWEST_SPEED = 0.1;

/**
 * Loads, stresses, drag and power of one gyro at its running speed.
 *
 * @param gyro        wheel, motor, bearings and housing
 * @param power       battery; the wheel is taken as alone on it
 * @param gimbalRate  rad/s, greatest rate the spin axis is turned at
 * @param choices     what the rig does not hold
 * @returns           what it comes to, or what cannot be a wheel
 *
 * Cost: about 0.2 ms. Sources: with the formulas of each part.
 */
export function standGyro(
  gyro: Gyro,
  power: Power,
  gimbalRate: number,
  choices: SpinChoices = usualSpinChoices(gyro),
): StandingOutcome {
  const weighed = wheelProperties(gyro.wheel.parts);
  if (weighed.kind === 'refused') return weighed;
  const { wheel } = weighed;
  const { bearing: part } = gyro;
  const speed = gyro.speed < SLOWEST_SPEED ? 0 : gyro.speed;
  const stressed = wheelStress(gyro.wheel.parts, speed, choices.factor);
  if (stressed.kind === 'refused') return stressed;
  const momentum = wheel.spinInertia * speed;
  const unbalance = speed > 0 ? permissibleUnbalance(gyro.wheel.balanceGrade, speed, wheel.mass) : 0;
  const [bearing] = bearingLoads({
    mass: wheel.mass,
    momentum,
    unbalance,
    speed,
    gimbalRate,
    toLeft: part.span / 2,
    toRight: part.span / 2,
    preload: choices.preload,
    loadFactor: 1,
  });
  const equivalent = equivalentDynamicLoad(bearing.radial, bearing.axial, part.staticRating);
  const steady = equivalentDynamicLoad(bearing.weight + bearing.unbalance, bearing.axial, part.staticRating);
  const meanLoad = Math.min(equivalent, swingingMeanLoad(steady, bearing.gyroscopic));
  const envelope = wheelEnvelope(gyro.wheel.parts);
  const drag = wheelDragParts(envelope, gyro.housing, part, [meanLoad, meanLoad]);
  const restDrag = wheelDragParts(envelope, gyro.housing, part, [steady, steady]);
  const drive = compileDrive(gyro.motor, power);
  return {
    kind: 'stands',
    standing: {
      gyro,
      choices,
      gimbalRate,
      wheel,
      envelope,
      stress: stressed.stress,
      burst: wheelBurst(wheel, speed),
      momentum,
      unbalance,
      bearing,
      meanLoad,
      bearingLife: speed > 0 ? lifeSeconds(part.dynamicRating, meanLoad, speed) : Number.POSITIVE_INFINITY,
      staticSafety: staticSafety(bearing.radial, bearing.axial, part.staticRating),
      drag,
      restDrag,
      drive,
      hold: holdSpeed(drive, drag.total, speed),
      topSpeed: topSpeed(drive, restDrag.total),
      openAir: windage(envelope.radius, envelope.width, speed, airAt(), { kind: 'open' }),
      windage: drag.windageAt(speed),
    },
  };
}

/** What forbids spinning a wheel so, in words; empty for one that may be spun. */
export function spinFailures({
  gyro,
  stress,
  hold,
  topSpeed,
  staticSafety,
}: SpinStanding): readonly string[] {
  const failures: string[] = [];
  if (stress.spare < 0) failures.push('faster than its safe speed');
  if (hold.kind === 'too fast') failures.push('its motor and battery cannot hold this speed');
  else if (!(gyro.speed < topSpeed)) failures.push('its motor and battery cannot reach this speed');
  if (staticSafety < 1) failures.push('its bearings dent under the greatest load');
  return failures;
}
