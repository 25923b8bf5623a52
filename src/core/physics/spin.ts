/** The Spin up station's work on one gyro: everything that follows from its wheel, bearings, drive and housing. */
import { type Gyro, MATERIALS, type Power, type Rig } from '../rig';
import { permissibleUnbalance } from './balanceGrade';
import {
  type BearingLoad,
  bearingLoads,
  equivalentDynamicLoad,
  lifeSeconds,
  staticSafety,
  swingingMeanLoad,
} from './bearings';
import { type Caution, cautionsFor } from './cautions';
import { compileDrive, type DriveModel, type HoldOutcome, holdSpeed, packEnergy, runTime } from './drive';
import { combineBodies, rigPieces } from './massProperties';
import { type SensorShake, sensorShake } from './sensorShake';
import { type Braking, brakeWheel, type SpinDown, type SpinUpOutcome, spinDown, spinUp } from './spinCurve';
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

export interface SpinReport {
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
  readonly spinUp: SpinUpOutcome;
  readonly coast: SpinDown;
  readonly braking: Braking;
  /** The same wheel in still open air, to show what the housing saves. */
  readonly openAir: Windage;
  readonly windage: Windage;
}

export type SpinOutcome =
  | { readonly kind: 'spun'; readonly report: SpinReport }
  | { readonly kind: 'refused'; readonly faults: readonly WheelFault[] };

/** Rate at which a body that walks or rolls turns a locked or free wheel, rad/s; common practice. */
const BODY_RATE = 2;

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
 * Everything the Spin up station says of one gyro at its running speed.
 *
 * @param gyro        wheel, motor, bearings and housing
 * @param power       battery; the wheel is taken as alone on it
 * @param gimbalRate  rad/s, greatest rate the spin axis is turned at
 * @param choices     what the rig does not hold
 * @returns           the report, or what cannot be a wheel
 *
 * Cost: about 2 ms, most of it drag along the spin-up and down. Sources: with the formulas of each part.
 */
export function spinGyro(
  gyro: Gyro,
  power: Power,
  gimbalRate: number,
  choices: SpinChoices = usualSpinChoices(gyro),
): SpinOutcome {
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
  const friction = drive.torqueConstant * drive.noLoadCurrent;
  const brakeCurrent = Math.min(choices.brakeCurrent, drive.currentLimit);
  return {
    kind: 'spun',
    report: {
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
      spinUp: spinUp(drive, wheel.spinInertia, restDrag.total, speed),
      coast: spinDown(wheel.spinInertia, restDrag.total, friction, speed),
      braking: brakeWheel(drive, wheel.spinInertia, restDrag.total, speed, brakeCurrent),
      openAir: windage(envelope.radius, envelope.width, speed, airAt(), { kind: 'open' }),
      windage: drag.windageAt(speed),
    },
  };
}

export interface RigSpin {
  /** One for each gyro, in order. */
  readonly gyros: readonly SpinOutcome[];
  /** What each wheel's unbalance does to the sensor; empty when a wheel is refused. */
  readonly shakes: readonly SensorShake[];
  /** J. */
  readonly stored: number;
  /** W, to hold all wheels and everything else the rig runs; gimbals at work come on top. */
  readonly power: number;
  /** J, to bring all wheels up, one after another. */
  readonly spinUpEnergy: number;
  /** s, to bring all wheels up one after another; infinite when one cannot reach its speed. */
  readonly spinUpTime: number;
  /** J. */
  readonly batteryEnergy: number;
  /** s, on one charge, with spin-up and `gimbalPower` counted. */
  readonly runTime: number;
  readonly cautions: readonly Caution[];
}

/**
 * The Spin up station's work on a rig.
 *
 * @param gimbalPower  W, mean power of all gimbal drives and legs, from the plan; 0 when not known
 */
export function spinRig(rig: Rig, gimbalPower = 0): RigSpin {
  const gyros = rig.array.gyros.map((gyro) => spinGyro(gyro, rig.power, gimbalRateOf(rig, gyro)));
  const batteryEnergy = packEnergy(rig.power.cells, rig.power.cellVoltage, rig.power.capacity);
  let stored = 0;
  let power = rig.power.otherPower;
  let spinUpEnergy = 0;
  let spinUpTime = 0;
  let rimSpeed = 0;
  let throwHeight = 0;
  let gimbalTorque = 0;
  let printedParts = 0;
  for (const outcome of gyros) {
    if (outcome.kind === 'refused') continue;
    const { burst, hold, spinUp: up, gyro, momentum, gimbalRate } = outcome.report;
    stored += burst.energy;
    rimSpeed = Math.max(rimSpeed, burst.rimSpeed);
    throwHeight = Math.max(throwHeight, burst.throwHeight);
    gimbalTorque = Math.max(gimbalTorque, gyro.drive.kind === 'servo' ? gyro.drive.servo.stallTorque : 0);
    gimbalTorque = Math.max(gimbalTorque, momentum * Math.min(gimbalRate, BODY_RATE));
    if (gyro.speed > 0) printedParts += gyro.wheel.parts.filter(isPrinted).length;
    power += hold.kind === 'held' ? hold.flows.battery : Number.POSITIVE_INFINITY;
    spinUpEnergy += up.kind === 'reaches' ? up.spinUp.batteryEnergy : Number.POSITIVE_INFINITY;
    spinUpTime += up.kind === 'reaches' ? up.spinUp.duration : Number.POSITIVE_INFINITY;
  }
  return {
    gyros,
    shakes: shakesOf(rig, gyros),
    stored,
    power,
    spinUpEnergy,
    spinUpTime,
    batteryEnergy,
    runTime: Number.isFinite(power + spinUpEnergy)
      ? runTime(batteryEnergy, spinUpEnergy, [power, gimbalPower])
      : 0,
    cautions: cautionsFor({
      rimSpeed,
      spinEnergy: stored,
      throwHeight,
      printedParts,
      gimbalTorque,
      batteryEnergy,
    }),
  };
}

function shakesOf(rig: Rig, gyros: readonly SpinOutcome[]): readonly SensorShake[] {
  if (!gyros.every((outcome) => outcome.kind === 'spun')) return [];
  const body = combineBodies(rigPieces(rig));
  const { height, loopRate } = rig.sensing;
  return gyros.map(({ report }) => {
    const { position, spinAxis, speed } = report.gyro;
    return sensorShake(body, position, spinAxis, [0, 0, height], report.unbalance, speed, loopRate);
  });
}

const isPrinted = (part: Gyro['wheel']['parts'][number]): boolean =>
  part.kind !== 'bolts' && MATERIALS[part.material].kind === 'printed';
