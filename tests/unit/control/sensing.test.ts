import { describe, expect, it } from 'vitest';
import {
  createEstimatorWork,
  describeEstimator,
  designKalman,
  ESTIMATE,
  type EstimatorModel,
  stepEstimator,
  weighGyro,
} from '../../../src/core/control/estimators';
import { findSpectralRadius } from '../../../src/core/control/linear/spectrum';
import { createRandom, drawNormal } from '../../../src/core/control/randomness';
import {
  chooseEstimator,
  convertAngleWalk,
  createSensorWork,
  describeVibration,
  expectAngleWalk,
  expectWhiteAllan,
  FLICKER_FLOOR,
  foldFrequency,
  mountSensor,
  NO_VIBRATION,
  READING,
  readSensors,
  type SensorModel,
} from '../../../src/core/control/sensorModel';
import { BENCH_SENSING } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const QUIET: SensorModel = {
  sampleTime: 0.005,
  gyroNoise: 0,
  gyroBias: 0,
  gyroDrift: 0,
  driftTime: 100,
  gyroRange: 8,
  gyroResolution: 0,
  accelNoise: 0,
  accelBias: 0,
  height: 0.4,
  gravity: 9.80665,
  vibration: NO_VIBRATION,
};

const read = (
  model: SensorModel,
  roll: number,
  rate: number,
  acceleration: number,
  time = 0,
): Float64Array => {
  const work = createSensorWork(model, createRandom(1));
  readSensors(model, work, roll, rate, acceleration, time);
  return work.reading;
};

describe('sensor conversions (IEEE Std 952 annex C; IEEE Std 1431)', () => {
  it('turns noise density into angle random walk, Allan deviation, angle error and flicker floor', () => {
    expectClose(
      [convertAngleWalk(0.01), expectWhiteAllan(0.01, 100), FLICKER_FLOOR, expectAngleWalk(0.01, 60)],
      [0.6, 0.001, 0.664282468, 0.0774596669],
      { rel: 1e-8 },
    ); // measured 3e-9
  });
});

describe('sensors', () => {
  it('show true roll at rest, and nothing to a body that falls freely past the sensor’s height', () => {
    const rest = read(QUIET, 0.2, 0, 0);
    expectClose([rest[READING.gyro]!, rest[READING.accelRoll]!], [0, 0.2], { abs: 1e-15 }); // measured 3e-17
    /* a point mass at the sensor's height on a pivot: acceleration g sin / height, no lateral force felt */
    const falling = read(QUIET, 0.2, 0, (9.80665 * Math.sin(0.2)) / 0.4);
    expectClose(falling[READING.accel]!, 0, { abs: 1e-14 }); // measured 0
  });

  it('agree with the specific force worked out from the sensor’s path by differences', () => {
    /* p = h (-sin, cos) in the world (y, z); f = p'' + g, seen in the body */
    const roll = (t: number): number => 0.3 * Math.sin(4 * t) + 0.1 * t;
    const h = 0.4;
    const t = 0.37;
    const e = 1e-4;
    const y = (u: number): number => -h * Math.sin(roll(u));
    const z = (u: number): number => h * Math.cos(roll(u));
    const second = (f: (u: number) => number): number => (f(t + e) - 2 * f(t) + f(t - e)) / (e * e);
    const force = [second(y), second(z) + 9.80665] as const;
    const c = Math.cos(roll(t));
    const s = Math.sin(roll(t));
    const lateral = force[0] * c + force[1] * s;
    const vertical = -force[0] * s + force[1] * c;
    const rate = 1.2 * Math.cos(4 * t) + 0.1;
    const acceleration = -4.8 * Math.sin(4 * t);
    const r = read(QUIET, roll(t), rate, acceleration);
    expectClose(r[READING.accel]!, lateral, { rel: 1e-6 }); // measured 5e-9
    expectClose(r[READING.accelRoll]!, Math.atan2(lateral, vertical), { rel: 1e-6 }); // measured 3e-9
  });

  it('clip at their range and step by their resolution', () => {
    const coarse = { ...QUIET, gyroResolution: 0.01 };
    expectClose(
      [read(coarse, 0, 0.0149, 0)[0]!, read(coarse, 0, 50, 0)[0]!, read(coarse, 0, -50, 0)[0]!],
      [0.01, 8, -8],
      {
        abs: 1e-12,
      },
    ); // measured 0
  });

  it('have the noise, bias and drift they are said to have', () => {
    const model = { ...QUIET, gyroNoise: 2e-3, gyroBias: 0.03, accelNoise: 5e-3, accelBias: 0.1 };
    const work = createSensorWork(model, createRandom(12));
    const n = 40_000;
    const sums = [0, 0, 0, 0];
    for (let i = 0; i < n; i++) {
      readSensors(model, work, 0, 0, 0, i * 0.005);
      const g = work.reading[READING.gyro]!;
      const a = work.reading[READING.accel]!;
      sums[0]! += g / n;
      sums[1]! += (g - 0.03) ** 2 / n;
      sums[2]! += a / n;
      sums[3]! += (a - 0.1) ** 2 / n;
    }
    const sigma = [2e-3 / Math.sqrt(0.005), 5e-3 / Math.sqrt(0.005)] as const;
    expectClose(sums[0]!, 0.03, { abs: (4 * sigma[0]) / Math.sqrt(n) });
    expectClose(Math.sqrt(sums[1]!), sigma[0], { rel: 4 / Math.sqrt(2 * n) }); // measured 3e-3
    expectClose(sums[2]!, 0.1, { abs: (4 * sigma[1]) / Math.sqrt(n) });
    expectClose(Math.sqrt(sums[3]!), sigma[1], { rel: 4 / Math.sqrt(2 * n) }); // measured 2e-3
  });

  it('fold a wheel’s vibration into the loop at the alias frequency', () => {
    const rate = 200;
    const spin = 137.3; // Hz
    const model = {
      ...QUIET,
      vibration: { frequency: 2 * Math.PI * spin, rateAmplitude: 0.05, accelAmplitude: 0 },
    };
    const work = createSensorWork(model, createRandom(2));
    const n = 4000;
    const power = (f: number): number => {
      let c = 0;
      let s = 0;
      for (let i = 0; i < n; i++) {
        readSensors(model, work, 0, 0, 0, i / rate);
        c += (2 / n) * work.reading[0]! * Math.cos((2 * Math.PI * f * i) / rate);
        s += (2 / n) * work.reading[0]! * Math.sin((2 * Math.PI * f * i) / rate);
      }
      return Math.sqrt(c * c + s * s);
    };
    expectClose(foldFrequency(spin, rate), 62.7, { rel: 1e-12 }); // measured 2e-16
    expectClose(power(62.7), 0.05, { rel: 1e-9 }); // measured 3e-15: a whole number of periods
    expect(power(31)).toBeLessThan(1e-3);
    /* a wheel at a multiple of the loop rate looks like a bias */
    expect(foldFrequency(400, rate)).toBe(0);
  });

  it('shake as Newton says: force U w^2 at the wheel’s height', () => {
    const v = describeVibration({
      unbalance: 2e-6,
      wheelSpeed: 800,
      wheelHeight: 0.4,
      sensorHeight: 0.3,
      rollInertia: 0.3,
      bandwidth: 0,
    });
    expectClose(
      [v.rateAmplitude, v.accelAmplitude],
      [(2e-6 * 800 * 0.4) / 0.3, (2e-6 * 800 ** 2 * 0.4 * 0.3) / 0.3],
      {
        rel: 1e-12,
      },
    ); // measured 2e-16
    const filtered = describeVibration({
      unbalance: 2e-6,
      wheelSpeed: 800,
      wheelHeight: 0.4,
      sensorHeight: 0.3,
      rollInertia: 0.3,
      bandwidth: 800 / (2 * Math.PI),
    });
    expectClose(filtered.rateAmplitude, v.rateAmplitude / Math.SQRT2, { rel: 1e-12 }); // measured 0
  });
});

describe('complementary filter', () => {
  it('weighs the gyro by tau / (tau + dt) (standard discretisation)', () => {
    expectClose(weighGyro(0.5, 0.01), 0.980392157, { rel: 1e-8 }); // measured 1e-10
    expectClose(weighGyro(0.49, 0.01), 0.98, { rel: 1e-12 }); // measured 0
  });
  it('forgets a wrong start with its time constant and leans by tau times a gyro bias', () => {
    const model: EstimatorModel = { kind: 'complementary', sampleTime: 1e-3, timeConstant: 0.5 };
    const work = createEstimatorWork(model, 0.1);
    for (let i = 0; i < 500; i++) stepEstimator(model, work, 0, 0, 0, 0);
    expectClose(work.estimate[ESTIMATE.roll]!, 0.1 / Math.E, { rel: 2e-3 }); // measured 1e-3, the discretisation
    for (let i = 0; i < 20_000; i++) stepEstimator(model, work, 0.02, 0, 0, 0);
    expectClose(work.estimate[ESTIMATE.roll]!, 0.02 * 0.5, { rel: 1e-9 }); // measured 2e-14
  });
});

describe('Kalman filter', () => {
  const model: EstimatorModel = {
    kind: 'kalman',
    sampleTime: 0.01,
    gyroNoise: 1e-3,
    biasWalk: 3e-4,
    rollNoise: 0.02,
    startRoll: 0.1,
    startBias: 0.02,
    gains: 'varying',
  };
  it('settles, with varying gains, on the gains and covariance of the Riccati equation', () => {
    const work = createEstimatorWork(model);
    for (let i = 0; i < 20_000; i++) stepEstimator(model, work, 0, 0, 0, 0);
    const steady = designKalman(model)!;
    expectClose(work.gain, [steady.rollGain, steady.biasGain], { rel: 1e-9 }); // measured 3e-14
    const p = steady.covariance;
    expectClose(work.covariance, [p.get(0, 0), p.get(0, 1), p.get(1, 1)], { rel: 1e-9 }); // measured 3e-14
  });
  it('takes out a constant gyro bias, which the complementary filter cannot', () => {
    const work = createEstimatorWork(model);
    for (let i = 0; i < 20_000; i++) stepEstimator(model, work, 0.02, 0, 0, 0);
    expectClose(work.estimate[ESTIMATE.bias]!, 0.02, { rel: 1e-6 }); // measured 1e-14
    expectClose([work.estimate[ESTIMATE.roll]!, work.estimate[ESTIMATE.rate]!], [0, 0], { abs: 1e-6 }); // measured 4e-16
  });
  it('refuses steady gains where there are none to be had', () => {
    expect(() => createEstimatorWork({ ...model, biasWalk: 0, gyroNoise: 0, gains: 'steady' })).toThrow();
  });
  it('has a linear description that gives the same estimates', () => {
    for (const m of [
      { ...model, gains: 'steady' },
      { kind: 'complementary', sampleTime: 0.01, timeConstant: 0.7 },
    ] as const) {
      const work = createEstimatorWork(m);
      const linear = describeEstimator(m)!;
      expect(findSpectralRadius(linear.A)).toBeLessThan(1);
      const n = linear.A.rows;
      let x = new Float64Array(n);
      const random = createRandom(3);
      for (let i = 0; i < 200; i++) {
        const y = [drawNormal(random), drawNormal(random)] as const;
        stepEstimator(m, work, y[0], y[1], 0, 0);
        const out = [0, 1].map((o) => {
          let sum = linear.D.get(o, 0) * y[0] + linear.D.get(o, 1) * y[1];
          for (let j = 0; j < n; j++) sum += linear.C.get(o, j) * x[j]!;
          return sum;
        });
        expectClose(out, [work.estimate[0]!, work.estimate[1]!], { abs: 1e-12 }); // measured 4e-16
        x = x.map((_, r) => {
          let sum = linear.B.get(r, 0) * y[0] + linear.B.get(r, 1) * y[1];
          for (let j = 0; j < n; j++) sum += linear.A.get(r, j) * x[j]!;
          return sum;
        });
      }
    }
  });
  it('is chosen from a rig’s sensing entry', () => {
    const sensor = mountSensor(BENCH_SENSING, {
      rollLineHeight: 0.08,
      gravity: 9.80665,
      vibration: NO_VIBRATION,
    });
    expectClose(sensor.height, 0.3, { rel: 1e-12 }); // measured 0
    expect(chooseEstimator(BENCH_SENSING, sensor, 0.2).kind).toBe('complementary');
    const kalman = chooseEstimator({ ...BENCH_SENSING, estimator: { kind: 'kalman' } }, sensor, 0.2);
    if (kalman.kind !== 'kalman') throw new Error('a Kalman filter was asked for');
    expect(kalman.rollNoise).toBeGreaterThan(0.2 / 9.81);
    expect(designKalman(kalman)).toBeDefined();
  });
});
