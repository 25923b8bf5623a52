import { Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { runRollLoop } from '../../src/core/control/closedLoop';
import {
  createEstimatorWork,
  describeEstimator,
  designKalman,
  ESTIMATE,
  type EstimatorModel,
  stepEstimator,
} from '../../src/core/control/estimators';
import { designGains } from '../../src/core/control/gainDesign';
import { solveDiscreteLyapunov } from '../../src/core/control/linear/lyapunov';
import type { RollTiltPlant } from '../../src/core/control/plantModels';
import { createRandom, drawNormal } from '../../src/core/control/randomness';
import { createRollLoopWork, NO_DISTURBANCE, type RollLoopModel } from '../../src/core/control/rollLoopModel';
import {
  createSensorWork,
  expectMarkovAllan,
  expectWhiteAllan,
  FLICKER_FLOOR,
  NO_VIBRATION,
  READING,
  readSensors,
  type SensorModel,
  spreadDrift,
} from '../../src/core/control/sensorModel';
import { expectClose } from '../support/closeTo';

/** Overlapping Allan deviation at m samples. Source: NIST SP 1065 (Riley 2008), section 5.2.4. */
function overlapAllan(rates: Float64Array, m: number, dt: number): number {
  const angle = new Float64Array(rates.length + 1);
  for (let i = 0; i < rates.length; i++) angle[i + 1] = angle[i]! + rates[i]! * dt;
  let sum = 0;
  const terms = angle.length - 2 * m;
  for (let i = 0; i < terms; i++) sum += (angle[i + 2 * m]! - 2 * angle[i + m]! + angle[i]!) ** 2;
  return Math.sqrt(sum / (2 * terms * (m * dt) ** 2));
}

const QUIET: SensorModel = {
  sampleTime: 0.01,
  gyroNoise: 0,
  gyroBias: 0,
  gyroDrift: 0,
  driftTime: 100,
  gyroRange: 8,
  gyroResolution: 0,
  accelNoise: 0,
  accelBias: 0,
  height: 0,
  gravity: 9.80665,
  vibration: NO_VIBRATION,
};

const recordGyro = (model: SensorModel, samples: number, seed: number): Float64Array => {
  const work = createSensorWork(model, createRandom(seed));
  return Float64Array.from({ length: samples }, () => {
    readSensors(model, work, 0, 0, 0, 0);
    return work.reading[READING.gyro]!;
  });
};

describe('Allan deviation of the sensor model', () => {
  it('the measure itself gives the nine points of NIST SP 1065 table 30', () => {
    const points = Float64Array.of(892, 809, 823, 798, 671, 644, 883, 903, 677);
    expectClose([overlapAllan(points, 1, 1), overlapAllan(points, 2, 1)], [91.22945, 85.95287], {
      rel: 1e-6,
    }); // measured 3e-9
  });

  it('falls as N / sqrt(tau) for white noise, within 5 %', () => {
    const rates = recordGyro({ ...QUIET, gyroNoise: 2e-4 }, 400_000, 71);
    for (const m of [1, 10, 100, 1000]) {
      expectClose(
        overlapAllan(rates, m, 0.01),
        expectWhiteAllan(2e-4, m * 0.01),
        { rel: 0.05 },
        `tau ${m * 0.01}`,
      ); // measured 9e-3
    }
  });

  it('shows noise and drift together as the two formulas add, its floor at 0.664 B, within 10 %', () => {
    const instability = 1e-3;
    const driftTime = 2;
    const model = { ...QUIET, gyroNoise: 2e-4, gyroDrift: instability, driftTime };
    const rates = recordGyro(model, 1_500_000, 72);
    const sigma = spreadDrift(instability);
    for (const tau of [0.1, 0.5, 1, 3.78, 20, 100]) {
      const white = expectWhiteAllan(2e-4, tau);
      const drift = sigma * expectMarkovAllan(tau / driftTime);
      const expected = Math.sqrt(white * white + drift * drift);
      expectClose(overlapAllan(rates, Math.round(tau / 0.01), 0.01), expected, { rel: 0.1 }, `tau ${tau}`); // measured 4e-2
    }
    const peak = overlapAllan(recordGyro({ ...model, gyroNoise: 0 }, 1_500_000, 73), 378, 0.01);
    expectClose(peak, FLICKER_FLOOR * instability, { rel: 0.05 }); // measured 2e-3
  });
});

describe('filters on synthetic noise', () => {
  it('Kalman: roll and bias errors within 10 % of the predicted standard deviations, innovations white', () => {
    const dt = 0.01;
    const model: EstimatorModel = {
      kind: 'kalman',
      sampleTime: dt,
      gyroNoise: 3e-3,
      biasWalk: 2e-3,
      rollNoise: 0.02,
      startRoll: 0.02,
      startBias: 0.01,
      gains: 'steady',
    };
    const predicted = designKalman(model)!.covariance;
    const random = createRandom(81);
    const work = createEstimatorWork(model);
    const n = 600_000;
    let roll = 0;
    let bias = 0;
    const sums = [0, 0, 0];
    for (let i = 0; i < n; i++) {
      /* exact sampling of d roll = rate dt, gyro = rate + bias + noise, d bias = walk */
      const rate = 0.3 * Math.sin(0.7 * i * dt);
      const kick = drawNormal(random);
      const within = drawNormal(random);
      const walk = model.biasWalk * Math.sqrt(dt) * kick;
      /* mean of the bias over the sample: start + walk/2 + the part of the path not fixed by its end */
      const mean = bias + 0.5 * walk + model.biasWalk * Math.sqrt(dt / 12) * within;
      const gyro = rate + mean + (model.gyroNoise / Math.sqrt(dt)) * drawNormal(random);
      bias += walk;
      roll += rate * dt;
      stepEstimator(model, work, gyro, roll + model.rollNoise * drawNormal(random), 0, 0);
      const error = work.estimate[ESTIMATE.roll]! - roll;
      const off = work.estimate[ESTIMATE.bias]! - bias;
      sums[0]! += error * error;
      sums[1]! += off * off;
      sums[2]! += error * off;
    }
    expectClose(Math.sqrt(sums[0]! / n), Math.sqrt(predicted.get(0, 0)), { rel: 0.1 }); // measured 7e-3
    expectClose(Math.sqrt(sums[1]! / n), Math.sqrt(predicted.get(1, 1)), { rel: 0.1 }); // measured 2e-2
    const scale = Math.sqrt(predicted.get(0, 0) * predicted.get(1, 1));
    expectClose(sums[2]! / n, predicted.get(0, 1), { abs: 0.1 * scale }); // measured 1e-7
  });

  it('Kalman from the sensor model’s own drift and noise: within 10 %', () => {
    const sensor = { ...QUIET, gyroNoise: 3e-3, gyroDrift: 0.02, driftTime: 300, accelNoise: 0.02 };
    const sigma = spreadDrift(sensor.gyroDrift);
    const model: EstimatorModel = {
      kind: 'kalman',
      sampleTime: 0.01,
      gyroNoise: 3e-3,
      biasWalk: sigma * Math.sqrt(2 / 300),
      rollNoise: 0.02 / Math.sqrt(0.01) / 9.80665,
      startRoll: 0.1,
      startBias: 0.02,
      gains: 'varying',
    };
    const predicted = designKalman(model)!.covariance;
    const work = createEstimatorWork(model);
    const readings = createSensorWork(sensor, createRandom(82));
    let sum = 0;
    const n = 600_000;
    for (let i = 0; i < n; i++) {
      readSensors(sensor, readings, 0, 0, 0, 0);
      stepEstimator(model, work, readings.reading[READING.gyro]!, readings.reading[READING.accelRoll]!, 0, 0);
      if (i > 10_000) sum += work.estimate[ESTIMATE.roll]! ** 2;
    }
    expectClose(Math.sqrt(sum / (n - 10_000)), Math.sqrt(predicted.get(0, 0)), { rel: 0.1 }); // measured 3e-3
  });

  it('complementary: error within 10 % of the covariance its own equation predicts', () => {
    const dt = 0.01;
    const model: EstimatorModel = { kind: 'complementary', sampleTime: dt, timeConstant: 0.8 };
    const linear = describeEstimator(model)!;
    const noise = Matrix.diag([3e-3 ** 2 / dt, 0.02 ** 2]);
    const variance = solveDiscreteLyapunov(linear.A, linear.B.mmul(noise).mmul(linear.B.transpose()))!.get(
      0,
      0,
    );
    const random = createRandom(83);
    const work = createEstimatorWork(model);
    let sum = 0;
    const n = 300_000;
    for (let i = 0; i < n; i++) {
      stepEstimator(
        model,
        work,
        (3e-3 / Math.sqrt(dt)) * drawNormal(random),
        0.02 * drawNormal(random),
        0,
        0,
      );
      sum += work.estimate[ESTIMATE.roll]! ** 2;
    }
    expectClose(Math.sqrt(sum / n), Math.sqrt(variance), { rel: 0.1 }); // measured 6e-3
  });
});

describe('designed gains in the nonlinear loop with every imperfection', () => {
  const plant: RollTiltPlant = {
    actuator: 'tilt',
    inertia: 0.3,
    stiffness: 7.5,
    damping: 0.05,
    momentum: 0.6,
    servoLag: 0.018,
    delay: 0.0125,
    sampleTime: 0.002,
    sensorHeight: 0.1,
    gravity: 9.80665,
  };
  const estimator: EstimatorModel = { kind: 'complementary', sampleTime: 0.002, timeConstant: 1.5 };
  const design = designGains({ plant, estimator, law: 'feedback', hasTrim: true });
  if (design.kind !== 'designed') throw new Error(design.reason);
  const build = (noise: number, backlash: number): RollLoopModel => ({
    body: { inertia: 0.3, stiffness: 7.5, damping: 0.05, quadraticDamping: 0, fallenAt: 0.6 },
    actuator: {
      kind: 'servo',
      gimbals: [
        {
          servo: {
            stallTorque: 2.45,
            noLoadSpeed: 7.85,
            torqueLimit: 2.45,
            delay: 0.008,
            lag: 0.018,
            backlash,
            deadBand: 0,
            resolution: 0,
            updateRate: 0,
            gimbalInertia: 6e-4,
            rotorInertia: 4e-4,
            tiltMin: -0.8,
            tiltMax: 0.8,
          },
          momentum: 0.6,
          yawMomentum: 0,
          follow: 1,
          spin: { kind: 'constant' },
        },
      ],
    },
    sensor: {
      ...QUIET,
      sampleTime: 0.002,
      gyroNoise: 1.2e-4 * noise,
      accelNoise: 1.2e-3 * noise,
      height: 0.1,
    },
    estimator,
    controller: design.controller,
    loopDelay: 0.0045,
    loopJitter: 0.0002,
    tiltMin: -0.8,
    tiltMax: 0.8,
    substeps: 2,
  });
  const sway = (model: RollLoopModel): number => {
    const out = runRollLoop(
      model,
      createRollLoopWork(model),
      NO_DISTURBANCE,
      { roll: 0, rollRate: 0, tilt: 0, estimateError: 0, duration: 300, seed: 3, run: 0 },
      undefined,
    );
    expect(out.hasFallen).toBe(false);
    return out.meanRoll;
  };

  it('stands for five minutes; sway doubles with the noise and grows with the backlash', () => {
    const one = sway(build(1, 0));
    expectClose(sway(build(2, 0)), 2 * one, { rel: 0.02 }); // measured 2e-6
    expect(sway(build(1, 0.02))).toBeGreaterThan(1.5 * one);
  });

  it('survives shoves up to a size and no more, and the size agrees with the momentum there is', () => {
    const model = build(0, 0);
    const work = createRollLoopWork(model);
    const falls = (size: number): boolean =>
      runRollLoop(
        model,
        work,
        { ...NO_DISTURBANCE, shoves: Float64Array.of(0.5, size) },
        { roll: 0, rollRate: 0, tilt: 0, estimateError: 0, duration: 8, seed: 3, run: 0 },
        undefined,
      ).hasFallen;
    let low = 0;
    let high = 1;
    while (high - low > 1e-3) {
      const middle = 0.5 * (low + high);
      if (falls(middle)) high = middle;
      else low = middle;
    }
    /* no array gives more than h sin(limit); a law with lag and delay gets a good part of it */
    expect(low).toBeLessThan(0.6 * Math.sin(0.8));
    expect(low).toBeGreaterThan(0.5 * 0.6 * Math.sin(0.8));
  });
});
