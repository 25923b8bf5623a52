/** Roll of a floating body in waves step by step in time, its array held to its limits. */
import { rightingArm } from '../physics';
import type { RollArray, RollBody, RollFigures } from './seakeeping';
import { sampleWaveMoment, type WaveTrain } from './waveLoad';

export interface RollRun extends RollFigures {
  /** s, rad, rad. */
  readonly time: Float64Array;
  readonly roll: Float64Array;
  readonly tilt: Float64Array;
  /** Share of the time in which a limit of the array held it back. */
  readonly limitedShare: number;
  /** W, mean size of servo torque times tilt rate: what drives that give nothing back draw and brake. */
  readonly drivePower: number;
  /** Whether it stayed within a right angle. */
  readonly isUpright: boolean;
}

/** Steps in one natural period. */
const STEPS_PER_PERIOD = 200;

/**
 * Roll in a train of waves in time: righting arms, quadratic damping, and the array held to its limits.
 * Starts upright and at rest; figures are taken from `settle` on.
 *
 * @param gain      N*m*s/rad; 0 for no array
 * @param duration  s
 * @param settle    s, left out of the figures
 *
 * O(duration x components). Runge-Kutta of order 4, fixed step of a two-hundredth of the natural period or less.
 */
export function rollInTime(
  body: RollBody,
  train: WaveTrain,
  array: RollArray,
  gain: number,
  duration: number,
  settle: number,
): RollRun {
  const natural = 2 * Math.PI * Math.sqrt(body.inertia / body.stiffness);
  const steps = Math.max(2, Math.ceil((duration * STEPS_PER_PERIOD) / natural));
  const h = duration / steps;
  const run = {
    time: new Float64Array(steps + 1),
    roll: new Float64Array(steps + 1),
    tilt: new Float64Array(steps + 1),
  };
  const moments = new Float64Array(2 * steps + 1);
  sampleWaveMoment(train, body.waves, 0, h / 2, moments);
  const y = new Float64Array(3);
  const work = [0, 1, 2, 3, 4].map(() => new Float64Array(3));
  const rates = new Float64Array(3);
  const sums = createSums();
  let isUpright = true;
  for (let k = 0; k <= steps; k++) {
    run.time[k] = k * h;
    run.roll[k] = y[0];
    run.tilt[k] = array.momentum > 0 ? Math.asin(Math.max(-1, Math.min(1, y[2] / array.momentum))) : 0;
    if (Math.abs(y[0]) > Math.PI / 2) isUpright = false;
    const isLimited = rollRates(body, array, gain, moments[2 * k], y, rates);
    if (k * h >= settle) addSample(sums, array, y, rates, h, isLimited);
    if (k < steps) stepRoll(body, array, gain, moments, 2 * k, h, y, work);
  }
  return { ...run, ...finishSums(sums), isUpright };
}

/**
 * Rates of roll, roll rate and momentum held. Momentum follows gain x roll through the servos' lag and is held
 * back by tilt, by the ellipse of the tilt rate and by torque.
 *
 * @returns whether a limit held it back
 */
function rollRates(
  body: RollBody,
  array: RollArray,
  gain: number,
  moment: number,
  y: Float64Array,
  out: Float64Array,
): boolean {
  const roll = y[0];
  const rate = y[1];
  let momentumRate = 0;
  let isLimited = false;
  if (gain > 0) {
    const most = array.momentum * Math.sin(array.tilt);
    const wanted = Math.max(-most, Math.min(most, gain * roll));
    const isAtStop = wanted !== gain * roll;
    // What the law asks for with a lag made up for: gain x rate, and the pull back to where it should be.
    const asked = (isAtStop ? 0 : gain * rate) + (wanted - y[2]) / Math.max(array.lag, 1e-3);
    const room = array.momentum * array.momentum - y[2] * y[2];
    const limit = Math.min(array.torque, array.tiltRate * Math.sqrt(Math.max(0, room)));
    momentumRate = Math.max(-limit, Math.min(limit, asked));
    isLimited = isAtStop || momentumRate !== asked;
  }
  const righting = body.righting
    ? body.righting.weight * rightingArm(body.righting.arms, roll)
    : body.stiffness * roll;
  const damping = (body.linearDamping + body.quadraticDamping * Math.abs(rate)) * rate;
  out[0] = rate;
  out[1] = (moment - righting - damping - momentumRate) / body.inertia;
  out[2] = momentumRate;
  return isLimited;
}

function stepRoll(
  body: RollBody,
  array: RollArray,
  gain: number,
  moments: Float64Array,
  at: number,
  h: number,
  y: Float64Array,
  work: readonly Float64Array[],
): void {
  const [k1, k2, k3, k4, trial] = work as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  rollRates(body, array, gain, moments[at], y, k1);
  for (let i = 0; i < 3; i++) trial[i] = y[i] + 0.5 * h * k1[i];
  rollRates(body, array, gain, moments[at + 1], trial, k2);
  for (let i = 0; i < 3; i++) trial[i] = y[i] + 0.5 * h * k2[i];
  rollRates(body, array, gain, moments[at + 1], trial, k3);
  for (let i = 0; i < 3; i++) trial[i] = y[i] + h * k3[i];
  rollRates(body, array, gain, moments[at + 2], trial, k4);
  for (let i = 0; i < 3; i++) y[i] += (h / 6) * (k1[i] + 2 * k2[i] + 2 * k3[i] + k4[i]);
}

/** Sums over samples: roll^2, tilt^2, torque^2, power taken, drive power, time limited, count; then peaks. */
interface Sums {
  readonly total: Float64Array;
  mostTilt: number;
  mostTiltRate: number;
  lastTiltRate: number;
}

const createSums = (): Sums => ({
  total: new Float64Array(7),
  mostTilt: 0,
  mostTiltRate: 0,
  lastTiltRate: Number.NaN,
});

/**
 * Adds one sample. A gyro does no work: what the array takes out of the rolling reaches the gimbals, so a
 * servo's power is that of its inertia less momentum rate x roll rate.
 */
function addSample(
  sums: Sums,
  array: RollArray,
  y: Float64Array,
  rates: Float64Array,
  h: number,
  isLimited: boolean,
): void {
  const momentumRate = rates[2];
  const sine = array.momentum > 0 ? y[2] / array.momentum : 0;
  const tilt = Math.asin(Math.max(-1, Math.min(1, sine)));
  const tiltRate = array.momentum > 0 ? momentumRate / (array.momentum * Math.cos(tilt)) : 0;
  const spinUp = Number.isNaN(sums.lastTiltRate) ? 0 : (tiltRate - sums.lastTiltRate) / h;
  const { total } = sums;
  total[0] += y[0] * y[0];
  total[1] += tilt * tilt;
  total[2] += momentumRate * momentumRate;
  total[3] += momentumRate * y[1];
  total[4] += Math.abs(array.gimbalInertia * spinUp * tiltRate - momentumRate * y[1]);
  total[5] += isLimited ? 1 : 0;
  total[6] += 1;
  sums.mostTilt = Math.max(sums.mostTilt, Math.abs(tilt));
  sums.mostTiltRate = Math.max(sums.mostTiltRate, Math.abs(tiltRate));
  sums.lastTiltRate = tiltRate;
}

function finishSums(sums: Sums): Omit<RollRun, 'time' | 'roll' | 'tilt' | 'isUpright'> {
  const mean = (i: number): number => sums.total[i] / Math.max(1, sums.total[6]);
  return {
    rmsRoll: Math.sqrt(mean(0)),
    rmsTilt: Math.sqrt(mean(1)),
    mostTilt: sums.mostTilt,
    mostTiltRate: sums.mostTiltRate,
    rmsTorque: Math.sqrt(mean(2)),
    powerTaken: mean(3),
    drivePower: mean(4),
    limitedShare: mean(5),
  };
}
