/** What the firmware believes of the body: perfect in a preview, by sensors and estimator in a trial. */
import {
  chooseEstimator,
  createEstimatorWork,
  createRandom,
  createSensorWork,
  ESTIMATE,
  type EstimatorModel,
  mountSensor,
  READING,
  resetEstimator,
  type SensorModel,
  stepEstimator,
  takeReading,
  type Vibration,
} from '../control';
import { type CompiledRig, permissibleUnbalance, STANDARD_GRAVITY, sensorShake } from '../physics';
import { pivotHeight } from '../planning';
import type { Build } from './build';

/** Filled at every tick of the loop; kept by its run. */
export interface Sense {
  lean: number;
  leanRate: number;
  /** `sway`: m/s^2 to the left, of the body where roll has no part in it. `isFlat`: the feet stand flat. */
  readonly look: (time: number, lean: number, leanRate: number, sway: number, isFlat: boolean) => void;
}

export function perfectSense(): Sense {
  const sense: Sense = {
    lean: 0,
    leanRate: 0,
    look: (_time, lean, leanRate) => {
      sense.lean = lean;
      sense.leanRate = leanRate;
    },
  };
  return sense;
}

/** m/s^2, lateral acceleration other than gravity that a Kalman filter is told to expect: common practice. */
const SWAY_NOISE = 0.3;

/** Shaking by all wheels: the strongest one's, grown by the root of their number, as phases are left to chance. */
export function wheelVibration(compiled: CompiledRig, build: Build): Vibration {
  const { rig, whole, wheels } = compiled;
  let worst: Vibration = { frequency: 0, rateAmplitude: 0, accelAmplitude: 0 };
  let turning = 0;
  rig.array.gyros.forEach((gyro, i) => {
    const mass = wheels[i]?.mass ?? 0;
    if (!(gyro.speed > 0)) return;
    turning += 1;
    const unbalance = permissibleUnbalance(gyro.wheel.balanceGrade, gyro.speed, mass);
    const shake = sensorShake(
      whole,
      gyro.position,
      gyro.spinAxis,
      [0, 0, rig.sensing.height],
      unbalance,
      gyro.speed * build.wheelSpeed,
      rig.sensing.loopRate,
    );
    if (shake.acceleration < worst.accelAmplitude) return;
    worst = {
      frequency: gyro.speed * build.wheelSpeed,
      rateAmplitude: shake.rate,
      accelAmplitude: shake.acceleration,
    };
  });
  const grown = build.noise * Math.sqrt(turning);
  return {
    frequency: worst.frequency,
    rateAmplitude: worst.rateAmplitude * grown,
    accelAmplitude: worst.accelAmplitude * grown,
  };
}

/** Sensors and estimator of a rig as built. */
export function builtSensing(
  compiled: CompiledRig,
  build: Build,
): { readonly sensor: SensorModel; readonly estimator: EstimatorModel } {
  const { sensing } = compiled.rig;
  const drawn = mountSensor(sensing, {
    rollLineHeight: pivotHeight(compiled),
    gravity: STANDARD_GRAVITY,
    vibration: wheelVibration(compiled, build),
  });
  const sensor: SensorModel = {
    ...drawn,
    gyroNoise: drawn.gyroNoise * build.noise,
    gyroDrift: drawn.gyroDrift * build.noise,
    accelNoise: drawn.accelNoise * build.noise,
  };
  // The firmware's filter is set for the sensor as drawn: it cannot know better.
  return { sensor, estimator: chooseEstimator(sensing, drawn, SWAY_NOISE) };
}

/**
 * Sensing by rate gyro, accelerometer and estimator. While switches in the soles say that the feet stand flat the
 * firmware takes the lean as nothing, so that a sway of the whole body is not mistaken for one.
 *
 * @param seed,run  name the random streams, the same as the fast kernel's
 */
export function realSense(compiled: CompiledRig, build: Build, seed: number, run: number): Sense {
  const { sensor, estimator } = builtSensing(compiled, build);
  const work = createSensorWork(sensor, createRandom(seed, run, 1));
  const guess = createEstimatorWork(estimator);
  resetEstimator(estimator, guess, 0);
  let lastRate = 0;
  const sense: Sense = {
    lean: 0,
    leanRate: 0,
    look: (time, lean, leanRate, sway, isFlat) => {
      work.input[0] = lean;
      work.input[1] = leanRate;
      work.input[2] = (leanRate - lastRate) / sensor.sampleTime;
      work.input[3] = time;
      lastRate = leanRate;
      takeReading(sensor, work);
      const lateral = (work.reading[READING.accel] as number) + sway * Math.cos(lean);
      const vertical =
        sensor.gravity * Math.cos(lean) - sensor.height * leanRate * leanRate - sway * Math.sin(lean);
      stepEstimator(
        estimator,
        guess,
        work.reading[READING.gyro] as number,
        Math.atan2(lateral, vertical),
        lean,
        leanRate,
      );
      if (isFlat) guess.estimate[ESTIMATE.roll] = 0;
      sense.lean = guess.estimate[ESTIMATE.roll] as number;
      sense.leanRate = guess.estimate[ESTIMATE.rate] as number;
    },
  };
  return sense;
}
