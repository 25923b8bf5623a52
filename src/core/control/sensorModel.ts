import type { Sensing } from '../rig';
import type { EstimatorModel } from './estimators';
import { drawNormal, fillNormal, type RandomState } from './randomness';

/**
 * Rate gyro and accelerometer on the body, sampled by the loop.
 *
 * Noise density N is the figure with Allan deviation N / sqrt(tau): a sample averaged over dt has standard
 * deviation N / sqrt(dt) (IEEE Std 952 annex C). Bias instability B is the floor of the Allan deviation over
 * 0.664; it is made by a first-order Gauss-Markov process whose Allan deviation peaks at that floor.
 */
export interface SensorModel {
  /** s between samples */
  readonly sampleTime: number;
  /** rad/s/sqrt(Hz) */
  readonly gyroNoise: number;
  /** rad/s */
  readonly gyroBias: number;
  /** rad/s, bias instability */
  readonly gyroDrift: number;
  /** s, correlation time of the drift */
  readonly driftTime: number;
  /** rad/s, reads no further */
  readonly gyroRange: number;
  /** rad/s a count; 0 for none */
  readonly gyroResolution: number;
  /** m/s^2/sqrt(Hz) */
  readonly accelNoise: number;
  /** m/s^2, on the lateral axis */
  readonly accelBias: number;
  /** m above the roll line */
  readonly height: number;
  /** m/s^2 */
  readonly gravity: number;
  readonly vibration: Vibration;
}

/** Shaking by a wheel's unbalance as the sensors see it, before sampling. */
export interface Vibration {
  /** rad/s, the wheel's spin */
  readonly frequency: number;
  /** rad/s */
  readonly rateAmplitude: number;
  /** m/s^2 */
  readonly accelAmplitude: number;
}

export const NO_VIBRATION: Vibration = { frequency: 0, rateAmplitude: 0, accelAmplitude: 0 };

/** sqrt(2 ln 2 / pi): Allan deviation floor of flicker noise of bias instability 1 (IEEE Std 952 annex C). */
export const FLICKER_FLOOR = Math.sqrt((2 * Math.LN2) / Math.PI);

/**
 * Allan deviation at averaging time tau of a Gauss-Markov process of standard deviation 1 and correlation
 * time 1. Source: IEEE Std 952 annex C.
 */
export function expectMarkovAllan(tau: number): number {
  const bracket = 1 - (3 - 4 * Math.exp(-tau) + Math.exp(-2 * tau)) / (2 * tau);
  return Math.sqrt((2 / tau) * bracket);
}

/* Its largest value: the top is flat, so a fine scan fixes it to rounding. */
const MARKOV_PEAK = (() => {
  let peak = 0;
  for (let tau = 1.5; tau < 2.5; tau += 1e-4) peak = Math.max(peak, expectMarkovAllan(tau));
  return peak;
})();

/** rad/s, standard deviation of the Gauss-Markov drift whose Allan deviation peaks at the floor of `instability`. */
export const spreadDrift = (instability: number): number => (FLICKER_FLOOR * instability) / MARKOV_PEAK;

/** deg/sqrt(h) from deg/s/sqrt(Hz) (IEEE Std 952). */
export const convertAngleWalk = (noise: number): number => 60 * noise;

/** Allan deviation of white noise of density N at averaging time tau. */
export const expectWhiteAllan = (noise: number, tau: number): number => noise / Math.sqrt(tau);

/** Standard deviation of the angle after integrating white rate noise of density N for t seconds. */
export const expectAngleWalk = (noise: number, time: number): number => noise * Math.sqrt(time);

/** Hz at which a vibration appears after sampling at `rate` Hz: folded to the nearest multiple. */
export function foldFrequency(frequency: number, rate: number): number {
  return Math.abs(frequency - rate * Math.round(frequency / rate));
}

export interface UnbalanceCase {
  /** kg*m, residual static unbalance of the wheel */
  readonly unbalance: number;
  /** rad/s */
  readonly wheelSpeed: number;
  /** m above the roll line */
  readonly wheelHeight: number;
  /** m above the roll line */
  readonly sensorHeight: number;
  /** kg*m^2 about the roll line */
  readonly rollInertia: number;
  /** Hz of the sensor's own first-order filter; 0 for none */
  readonly bandwidth: number;
}

/**
 * What an unbalanced wheel does to the sensors of a rigid body pivoting about its roll line: a lateral force
 * U w^2 at the wheel's height, turning with the wheel, far above the body's own roll frequency.
 */
export function describeVibration(c: UnbalanceCase): Vibration {
  const w = c.wheelSpeed;
  const rollAcceleration = (c.unbalance * w * w * c.wheelHeight) / c.rollInertia;
  const passed = c.bandwidth > 0 ? 1 / Math.sqrt(1 + (w / (2 * Math.PI * c.bandwidth)) ** 2) : 1;
  return {
    frequency: w,
    rateAmplitude: w > 0 ? (passed * Math.abs(rollAcceleration)) / w : 0,
    accelAmplitude: passed * Math.abs(rollAcceleration * c.sensorHeight),
  };
}

export const READING = {
  /** rad/s */ gyro: 0,
  /** m/s^2, lateral specific force */ accel: 1,
  /** rad, roll as told from the accelerometer */ accelRoll: 2,
  /** rad/s, drift of the bias now */ drift: 3,
} as const;

export interface SensorWork {
  readonly reading: Float64Array;
  /** per-sample figures worked out once: gyro sigma, accel sigma, drift decay, drift kick */
  readonly scale: Float64Array;
  /** roll, roll rate, roll acceleration, time: what `takeReading` works on; then one normal draw */
  readonly input: Float64Array;
  readonly random: RandomState;
}

/** The only allocation. `random` is this sensor's own stream. */
export function createSensorWork(model: SensorModel, random: RandomState): SensorWork {
  const work = {
    reading: new Float64Array(4),
    scale: new Float64Array(4),
    input: new Float64Array(5),
    random,
  };
  resetSensor(model, work);
  return work;
}

/** Starts afresh, with a drift drawn from its long-run spread. */
export function resetSensor(model: SensorModel, work: SensorWork): void {
  const dt = model.sampleTime;
  const sigma = spreadDrift(model.gyroDrift);
  const keep = Math.exp(-dt / model.driftTime);
  work.scale[0] = model.gyroNoise / Math.sqrt(dt);
  work.scale[1] = model.accelNoise / Math.sqrt(dt);
  work.scale[2] = keep;
  work.scale[3] = sigma * Math.sqrt(1 - keep * keep);
  work.reading.fill(0);
  if (sigma > 0) work.reading[READING.drift] = sigma * drawNormal(work.random);
}

/**
 * One sample of both sensors into `work.reading`.
 *
 * The accelerometer feels specific force: lateral g sin(roll) - height * roll acceleration, vertical
 * g cos(roll) - height * roll rate^2 (z up, roll positive about x forward); a body that falls freely about its
 * roll line reads nothing at the height g sin(roll) / roll acceleration. Noise and shaking are put on the
 * lateral axis alone: on the vertical one they enter the angle at second order.
 *
 * @param roll,rollRate rad, rad/s, true, at the sample
 * @param rollAcceleration rad/s^2, mean since the last sample: the filter inside the sensor
 * @param time s, for the vibration's phase; sampling it is what folds it into the loop
 *
 * O(1).
 */
export function readSensors(
  m: SensorModel,
  work: SensorWork,
  roll: number,
  rollRate: number,
  rollAcceleration: number,
  time: number,
): void {
  work.input[0] = roll;
  work.input[1] = rollRate;
  work.input[2] = rollAcceleration;
  work.input[3] = time;
  takeReading(m, work);
}

/** The same with its numbers already in `work.input`. Allocates nothing. */
export function takeReading(m: SensorModel, work: SensorWork): void {
  const r = work.reading;
  const s = work.scale;
  const random = work.random;
  const input = work.input;
  const roll = input[0]!;
  const rollRate = input[1]!;
  let gyro = rollRate + m.gyroBias + r[READING.drift]!;
  if (s[3]! > 0) {
    fillNormal(random, input, 4);
    r[READING.drift] = s[2]! * r[READING.drift]! + s[3]! * input[4]!;
  }
  if (s[0]! > 0) {
    fillNormal(random, input, 4);
    gyro += s[0]! * input[4]!;
  }
  let lateral = m.gravity * Math.sin(roll) - m.height * input[2]! + m.accelBias;
  if (s[1]! > 0) {
    fillNormal(random, input, 4);
    lateral += s[1]! * input[4]!;
  }
  if (m.vibration.frequency > 0) {
    const phase = m.vibration.frequency * input[3]!;
    gyro += m.vibration.rateAmplitude * Math.cos(phase);
    /* the accelerometer shakes with the rate's derivative */
    lateral += m.vibration.accelAmplitude * Math.sin(phase);
  }
  gyro = Math.min(Math.max(gyro, -m.gyroRange), m.gyroRange);
  if (m.gyroResolution > 0) gyro = Math.round(gyro / m.gyroResolution) * m.gyroResolution;
  const vertical = m.gravity * Math.cos(roll) - m.height * rollRate * rollRate;
  r[READING.gyro] = gyro;
  r[READING.accel] = lateral;
  r[READING.accelRoll] = Math.atan2(lateral, vertical);
}

/** What a rig's sensing entry leaves out. */
export interface SensorMounting {
  /** m, the roll line above the ground, from which the rig counts the sensor's height */
  readonly rollLineHeight: number;
  readonly gravity: number;
  readonly vibration: Vibration;
}

/** s, correlation time of the drift where the data sheet gives the instability alone: our own choice. */
export const USUAL_DRIFT_TIME = 100;

/** A rig's sensing entry as a sensor model. */
export function mountSensor(sensing: Sensing, mounting: SensorMounting): SensorModel {
  return {
    sampleTime: 1 / sensing.loopRate,
    gyroNoise: sensing.gyroNoise,
    gyroBias: sensing.gyroBias,
    gyroDrift: sensing.gyroDrift,
    driftTime: USUAL_DRIFT_TIME,
    gyroRange: sensing.gyroRange,
    gyroResolution: sensing.gyroResolution,
    accelNoise: sensing.accelNoise,
    accelBias: sensing.accelBias,
    height: sensing.height - mounting.rollLineHeight,
    gravity: mounting.gravity,
    vibration: mounting.vibration,
  };
}

/**
 * A rig's estimator for its sensor. A Kalman filter takes its noise from the sensor: the drift as a random walk
 * of the same short-term strength, and for the accelerometer at least what body motion puts into it, since a
 * filter that trusts a swaying accelerometer leans with it.
 *
 * @param swayNoise m/s^2, standard deviation of lateral acceleration that is not gravity
 */
export function chooseEstimator(sensing: Sensing, sensor: SensorModel, swayNoise: number): EstimatorModel {
  const dt = sensor.sampleTime;
  if (sensing.estimator.kind === 'complementary') {
    return { kind: 'complementary', sampleTime: dt, timeConstant: sensing.estimator.timeConstant };
  }
  const drift = spreadDrift(Math.max(sensor.gyroDrift, 1e-7));
  const white = sensor.accelNoise / Math.sqrt(dt);
  return {
    kind: 'kalman',
    sampleTime: dt,
    gyroNoise: Math.max(sensor.gyroNoise, 1e-7),
    biasWalk: drift * Math.sqrt(2 / sensor.driftTime),
    rollNoise: Math.max(Math.sqrt(white * white + swayNoise * swayNoise) / sensor.gravity, 1e-7),
    startRoll: 0.1,
    startBias: Math.max(Math.abs(sensor.gyroBias), drift, 1e-4),
    gains: 'varying',
  };
}
