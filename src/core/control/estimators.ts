import { Matrix } from 'ml-matrix';
import { solveKalman } from './linear/riccati';

/** How roll and roll rate are told from a rate gyro and an accelerometer. */
export type EstimatorModel =
  /** Perfect sensing, for comparison. */
  | { readonly kind: 'ideal'; readonly sampleTime: number }
  /** Gyro above, accelerometer below 1/timeConstant. */
  | { readonly kind: 'complementary'; readonly sampleTime: number; readonly timeConstant: number }
  /** Roll and gyro bias, from the noise the sensors are said to have. */
  | {
      readonly kind: 'kalman';
      readonly sampleTime: number;
      /** rad/s/sqrt(Hz), angle random walk of the gyro */
      readonly gyroNoise: number;
      /** rad/s/sqrt(s), random walk of the gyro's bias */
      readonly biasWalk: number;
      /** rad, standard deviation of one roll reading of the accelerometer */
      readonly rollNoise: number;
      /** rad and rad/s, standard deviations at the start */
      readonly startRoll: number;
      readonly startBias: number;
      /** steady: constant gains; varying: gains from the running covariance, faster at the start */
      readonly gains: 'steady' | 'varying';
    };

/** Weight of the gyro branch of a complementary filter: tau / (tau + dt) (standard discretisation). */
export function weighGyro(timeConstant: number, sampleTime: number): number {
  return timeConstant / (timeConstant + sampleTime);
}

export const ESTIMATE = {
  /** rad */ roll: 0,
  /** rad/s, bias removed where it is estimated */ rate: 1,
  /** rad/s */ bias: 2,
} as const;

export interface EstimatorWork {
  /** roll, rate, bias: see ESTIMATE */
  readonly estimate: Float64Array;
  /** covariance of roll and bias: P11, P12, P22 */
  readonly covariance: Float64Array;
  /** the gains in use: a complementary filter's gyro weight, or Kalman gains on roll and bias */
  readonly gain: Float64Array;
  /** gyro, accelerometer's roll, true roll, true rate: what `updateEstimator` works on */
  readonly input: Float64Array;
}

type Kalman = Extract<EstimatorModel, { kind: 'kalman' }>;

/* Process noise of (roll, bias) over one sample, white rate noise and bias walk, bias fed into roll. */
function sampleProcessNoise(m: Kalman): { q11: number; q12: number; q22: number } {
  const dt = m.sampleTime;
  const n2 = m.gyroNoise * m.gyroNoise;
  const b2 = m.biasWalk * m.biasWalk;
  return { q11: n2 * dt + (b2 * dt ** 3) / 3, q12: (-b2 * dt * dt) / 2, q22: b2 * dt };
}

export interface KalmanDesign {
  readonly rollGain: number;
  readonly biasGain: number;
  /** 2 x 2 of roll and bias after each reading */
  readonly covariance: Matrix;
}

/**
 * Steady gains of the two-state (roll, bias) filter, from the discrete Riccati equation.
 * Undefined when the noise figures leave no steady filter (a bias said to be perfectly constant: use 'varying').
 */
export function designKalman(m: Kalman): KalmanDesign | undefined {
  const q = sampleProcessNoise(m);
  const found = solveKalman(
    new Matrix([
      [1, -m.sampleTime],
      [0, 1],
    ]),
    new Matrix([[1, 0]]),
    new Matrix([
      [q.q11, q.q12],
      [q.q12, q.q22],
    ]),
    new Matrix([[m.rollNoise * m.rollNoise]]),
  );
  if (found === undefined) return undefined;
  return { rollGain: found.gain.get(0, 0), biasGain: found.gain.get(1, 0), covariance: found.after };
}

/** The only allocation. `roll` rad is the first estimate. */
export function createEstimatorWork(model: EstimatorModel, roll = 0): EstimatorWork {
  const work = {
    estimate: new Float64Array(3),
    covariance: new Float64Array(3),
    gain: new Float64Array(2),
    input: new Float64Array(4),
  };
  resetEstimator(model, work, roll);
  return work;
}

/** Starts afresh with a roll, no bias, and the starting covariance. */
export function resetEstimator(model: EstimatorModel, work: EstimatorWork, roll: number): void {
  work.estimate[0] = roll;
  work.estimate[1] = 0;
  work.estimate[2] = 0;
  if (model.kind === 'complementary') work.gain[0] = weighGyro(model.timeConstant, model.sampleTime);
  if (model.kind !== 'kalman') return;
  work.covariance[0] = model.startRoll * model.startRoll;
  work.covariance[1] = 0;
  work.covariance[2] = model.startBias * model.startBias;
  if (model.gains !== 'steady') return;
  const steady = designKalman(model);
  if (steady === undefined)
    throw new Error('no steady Kalman filter for these noise figures: use varying gains');
  work.gain[0] = steady.rollGain;
  work.gain[1] = steady.biasGain;
}

/**
 * One sample: gyro and accelerometer in, roll, rate and bias out in `work.estimate`.
 *
 * @param gyro  rad/s, as read
 * @param accelRoll rad, roll as the accelerometer shows it
 * @param trueRoll,trueRate used by the ideal estimator alone
 *
 * O(1). Source: textbook (Simon, Optimal State Estimation, ch. 5), covariance in the plain scalar form, safe
 * because the measurement is scalar.
 */
export function stepEstimator(
  model: EstimatorModel,
  work: EstimatorWork,
  gyro: number,
  accelRoll: number,
  trueRoll: number,
  trueRate: number,
): void {
  work.input[0] = gyro;
  work.input[1] = accelRoll;
  work.input[2] = trueRoll;
  work.input[3] = trueRate;
  updateEstimator(model, work);
}

/** The same with its numbers already in `work.input`. Allocates nothing. */
export function updateEstimator(model: EstimatorModel, work: EstimatorWork): void {
  const e = work.estimate;
  const gyro = work.input[0]!;
  const accelRoll = work.input[1]!;
  if (model.kind === 'ideal') {
    e[0] = work.input[2]!;
    e[1] = work.input[3]!;
    return;
  }
  const dt = model.sampleTime;
  if (model.kind === 'complementary') {
    const weight = work.gain[0]!;
    e[0] = weight * (e[0]! + gyro * dt) + (1 - weight) * accelRoll;
    e[1] = gyro;
    return;
  }
  if (model.gains === 'varying') updateGains(model, work);
  const predicted = e[0]! + dt * (gyro - e[2]!);
  const surprise = accelRoll - predicted;
  e[0] = predicted + work.gain[0]! * surprise;
  e[2] = e[2]! + work.gain[1]! * surprise;
  e[1] = gyro - e[2]!;
}

function updateGains(m: Kalman, work: EstimatorWork): void {
  const p = work.covariance;
  const dt = m.sampleTime;
  const n2 = m.gyroNoise * m.gyroNoise;
  const b2 = m.biasWalk * m.biasWalk;
  const p11 = p[0]! - 2 * dt * p[1]! + dt * dt * p[2]! + n2 * dt + (b2 * dt * dt * dt) / 3;
  const p12 = p[1]! - dt * p[2]! - 0.5 * b2 * dt * dt;
  const p22 = p[2]! + b2 * dt;
  const innovation = p11 + m.rollNoise * m.rollNoise;
  const k1 = p11 / innovation;
  const k2 = p12 / innovation;
  p[0] = (1 - k1) * p11;
  p[1] = (1 - k1) * p12;
  p[2] = p22 - k2 * p12;
  work.gain[0] = k1;
  work.gain[1] = k2;
}

/** x+ = A x + B (gyro, accelRoll); (roll, rate) = C x + D (gyro, accelRoll), of the same sample. */
export interface LinearEstimator {
  readonly A: Matrix;
  readonly B: Matrix;
  readonly C: Matrix;
  readonly D: Matrix;
}

/** The estimator with steady gains as a linear system, for margins; undefined for 'ideal'. */
export function describeEstimator(model: EstimatorModel): LinearEstimator | undefined {
  if (model.kind === 'ideal') return undefined;
  const dt = model.sampleTime;
  if (model.kind === 'complementary') {
    const w = weighGyro(model.timeConstant, dt);
    return {
      A: new Matrix([[w]]),
      B: new Matrix([[w * dt, 1 - w]]),
      C: new Matrix([[w], [0]]),
      D: new Matrix([
        [w * dt, 1 - w],
        [1, 0],
      ]),
    };
  }
  const steady = designKalman(model);
  if (steady === undefined) throw new Error('no steady Kalman filter for these noise figures');
  const k1 = steady.rollGain;
  const k2 = steady.biasGain;
  return {
    A: new Matrix([
      [1 - k1, -(1 - k1) * dt],
      [-k2, 1 + k2 * dt],
    ]),
    B: new Matrix([
      [(1 - k1) * dt, k1],
      [-k2 * dt, k2],
    ]),
    C: new Matrix([
      [1 - k1, -(1 - k1) * dt],
      [k2, -(1 + k2 * dt)],
    ]),
    D: new Matrix([
      [(1 - k1) * dt, k1],
      [1 + k2 * dt, -k2],
    ]),
  };
}
