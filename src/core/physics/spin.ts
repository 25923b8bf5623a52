/** The Spin up station's work on one gyro and on a rig: everything that follows from wheel, bearings, drive and housing. */
import { type Gyro, MATERIALS, type Power, type Rig } from '../rig';
import { type Caution, cautionsFor } from './cautions';
import { packEnergy, runTime } from './drive';
import { combineBodies, rigPieces } from './massProperties';
import { type SensorShake, sensorShake } from './sensorShake';
import { type Braking, brakeWheel, type SpinDown, type SpinUpOutcome, spinDown, spinUp } from './spinCurve';
import {
  BODY_RATE,
  gimbalRateOf,
  type SpinChoices,
  type SpinStanding,
  standGyro,
  usualSpinChoices,
} from './spinStanding';
import type { WheelFault } from './wheelProperties';

export interface SpinReport extends SpinStanding {
  readonly spinUp: SpinUpOutcome;
  readonly coast: SpinDown;
  readonly braking: Braking;
}

export type SpinOutcome =
  | { readonly kind: 'spun'; readonly report: SpinReport }
  | { readonly kind: 'refused'; readonly faults: readonly WheelFault[] };

/**
 * Everything the Spin up station says of one gyro at its running speed; arguments as for `standGyro`.
 *
 * Cost: about 2 ms, most of it drag along the spin-up and down. Sources: with the formulas of each part.
 */
export function spinGyro(
  gyro: Gyro,
  power: Power,
  gimbalRate: number,
  choices: SpinChoices = usualSpinChoices(gyro),
): SpinOutcome {
  const stood = standGyro(gyro, power, gimbalRate, choices);
  if (stood.kind === 'refused') return stood;
  const { standing } = stood;
  const { drive, wheel, restDrag } = standing;
  // A wheel slower than a turn a minute counts as at rest, and has no momentum.
  const speed = standing.momentum > 0 ? gyro.speed : 0;
  const friction = drive.torqueConstant * drive.noLoadCurrent;
  const brakeCurrent = Math.min(choices.brakeCurrent, drive.currentLimit);
  return {
    kind: 'spun',
    report: {
      ...standing,
      spinUp: spinUp(drive, wheel.spinInertia, restDrag.total, speed),
      coast: spinDown(wheel.spinInertia, restDrag.total, friction, speed),
      braking: brakeWheel(drive, wheel.spinInertia, restDrag.total, speed, brakeCurrent),
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
  /** W, as given. */
  readonly gimbalPower: number;
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
 * @param choices      in place of the usual ones, for every gyro
 */
export function spinRig(rig: Rig, gimbalPower = 0, choices: Partial<SpinChoices> = {}): RigSpin {
  const gyros = spinGyros(rig, choices);
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
    if (gyro.spin.kind !== 'coasting')
      power += hold.kind === 'held' ? hold.flows.battery : Number.POSITIVE_INFINITY;
    spinUpEnergy += up.kind === 'reaches' ? up.spinUp.batteryEnergy : Number.POSITIVE_INFINITY;
    spinUpTime += up.kind === 'reaches' ? up.spinUp.duration : Number.POSITIVE_INFINITY;
  }
  return {
    gyros,
    shakes: shakesOf(rig, gyros),
    stored,
    power,
    gimbalPower,
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

/** Spins every gyro; those alike in all that matters are worked out once. */
function spinGyros(rig: Rig, choices: Partial<SpinChoices>): readonly SpinOutcome[] {
  const done = new Map<string, SpinOutcome>();
  return rig.array.gyros.map((gyro) => {
    const { wheel, speed, motor, bearing, housing } = gyro;
    const rate = gimbalRateOf(rig, gyro);
    const key = JSON.stringify([wheel.parts, wheel.balanceGrade, speed, motor, bearing, housing, rate]);
    const outcome =
      done.get(key) ?? spinGyro(gyro, rig.power, rate, { ...usualSpinChoices(gyro), ...choices });
    done.set(key, outcome);
    return outcome.kind === 'spun' ? { kind: 'spun', report: { ...outcome.report, gyro } } : outcome;
  });
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
