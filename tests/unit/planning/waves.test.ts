import { describe, expect, it } from 'vitest';
import { rollReduction, STANDARD_GRAVITY } from '../../../src/core/physics';
import { sampleDisturbances } from '../../../src/core/planning/disturbances';
import { runTimes } from '../../../src/core/planning/gait';
import { rollInTime } from '../../../src/core/planning/rollRun';
import {
  largestGain,
  type RollArray,
  type RollBody,
  rollByFrequency,
  rollPerSlope,
} from '../../../src/core/planning/seakeeping';
import {
  createWaveTrain,
  effectiveSlopeShare,
  sampleWater,
  sampleWaveMoment,
  type WaveBody,
  type Waves,
  waveElevationAt,
  waveMomentAt,
  waveSlopeAt,
} from '../../../src/core/planning/waveLoad';
import { expectClose } from '../../support/closeTo';

const HULL: WaveBody = { stiffness: 2400, beam: 1.4, draught: 0.25 };
const REGULAR: Waves = { kind: 'waves', time: 0, duration: 60, height: 0.3, period: 3, heading: Math.PI / 2 };
const SEA: Extract<Waves, { kind: 'sea' }> = {
  kind: 'sea',
  time: 0,
  duration: 600,
  significantHeight: 0.4,
  peakPeriod: 3,
  spectrum: 'bretschneider',
  heading: Math.PI / 2,
  speed: 0,
  seed: 5,
};

describe('waves as a hull meets them', () => {
  it('passes a hull that runs before them at the frequency of encounter', () => {
    // A hull at 8 m/s overtakes the short waves of a following sea and is overtaken by the long ones.
    const train = createWaveTrain({ ...SEA, speed: 8, heading: 0, peakPeriod: 6 });
    const signs = new Set(train.encounter.map(Math.sign));
    expect(signs).toEqual(new Set([1, -1]));
    train.frequency.forEach((w, i) => {
      const speed = STANDARD_GRAVITY / w;
      expectClose(train.encounter[i]!, train.wavenumber[i]! * (speed - 8), { abs: 1e-12 }); // measured 4e-15
    });
  });

  it('has a slope that is the gradient of the surface, and rises to the left for a positive one', () => {
    // A wave from the right passes a point 1 mm to the left a little later.
    const train = createWaveTrain(REGULAR);
    const speed = train.frequency[0]! / train.wavenumber[0]!;
    for (const t of [0.1, 0.7, 1.9, 2.6]) {
      const left = waveElevationAt(train, t - 1e-3 / speed);
      const right = waveElevationAt(train, t + 1e-3 / speed);
      expectClose(waveSlopeAt(train, t), (left - right) / 2e-3, { abs: 1e-7 }); // measured 2e-9
    }
    const long: WaveBody = { ...HULL, beam: 1e-6, draught: 0 };
    expectClose(waveMomentAt(train, long, 0.7), HULL.stiffness * waveSlopeAt(train, 0.7), { rel: 1e-12 }); // measured 8e-15
  });

  it('feels the mean slope over its beam, summed strip by strip', () => {
    for (const heading of [Math.PI / 2, 2.2, 0.4]) {
      const k = 3.1;
      let mean = 0;
      for (let i = 0; i < 4000; i++) {
        const y = 1.4 * ((i + 0.5) / 4000 - 0.5);
        mean += Math.cos(k * y * Math.sin(heading)) / 4000;
      }
      expectClose(effectiveSlopeShare(HULL, k, heading), mean * Math.exp(-k * 0.125), { rel: 1e-6 }); // measured 5e-8
    }
    expectClose(effectiveSlopeShare(HULL, 1e-9, 1), 1, { rel: 1e-8 }); // measured 1e-10
    expect(waveMomentAt(createWaveTrain({ ...REGULAR, heading: 0 }), HULL, 0.4)).toBe(0);
  });

  it('makes a sea of the height asked, whose mean period is that of its spectrum', () => {
    let zero = 0;
    let mean = 0;
    const seas = 20;
    for (let seed = 0; seed < seas; seed++) {
      const sea = createWaveTrain({ ...SEA, seed });
      const moment = [0, 1, 2].map((n) =>
        sea.amplitude.reduce((sum, a, i) => sum + (a * a * sea.frequency[i]! ** n) / 2, 0),
      );
      expectClose(4 * Math.sqrt(moment[0]!), SEA.significantHeight, { rel: 1e-12 }); // measured 7e-16
      zero += Math.sqrt(moment[0]! / moment[2]!) / seas;
      mean += moment[0]! / moment[1]! / seas;
    }
    // Moments of Bretschneider's spectrum over w / wp; without an upper end they give Tp / T1 = 1.2957 and
    // Tp / Tz = 1.4077 (ITTC; DNV-RP-C205), and cut at six peaks a little less.
    const periods = (top: number): readonly [number, number] => {
      const moment = [0, 0, 0];
      const steps = 200_000;
      for (let i = 0; i < steps; i++) {
        const x = 0.3 + ((i + 0.5) * (top - 0.3)) / steps;
        for (let n = 0; n < 3; n++) moment[n]! += x ** (n - 5) * Math.exp(-1.25 * x ** -4);
      }
      return [moment[1]! / moment[0]!, Math.sqrt(moment[2]! / moment[0]!)];
    };
    expectClose(periods(400), [1.29572042, 1.40771576], { rel: 1e-4 }); // measured 4e-6
    expectClose([3 / (2 * Math.PI * mean), 3 / (2 * Math.PI * zero)], periods(6), { rel: 2e-3 }); // measured 1e-4
  });

  it('repeats a sea for its seed and no other, and sharpens its peak as JONSWAP does', () => {
    expect(createWaveTrain(SEA)).toEqual(createWaveTrain(SEA));
    expect(createWaveTrain({ ...SEA, seed: 6 }).phase).not.toEqual(createWaveTrain(SEA).phase);
    const share = (spectrum: 'bretschneider' | 'jonswap') => {
      const sea = createWaveTrain({ ...SEA, spectrum });
      const peak = (2 * Math.PI) / 3;
      let near = 0;
      sea.frequency.forEach((w, i) => {
        if (Math.abs(w / peak - 1) < 0.1) near += sea.amplitude[i]! ** 2 / 2;
      });
      return near / (SEA.significantHeight / 4) ** 2;
    };
    expect(share('jonswap')).toBeGreaterThan(1.5 * share('bretschneider'));
  });

  it('is the same sea sampled many instants at once as one by one', () => {
    const train = createWaveTrain({ ...SEA, speed: 3, heading: 2.5 });
    const many = new Float64Array(3000).fill(Number.NaN);
    sampleWaveMoment(train, HULL, -4, 0.05, many);
    const single = many.map((_, j) => waveMomentAt(train, HULL, -4 + 0.05 * j));
    const largest = Math.max(...single.map(Math.abs));
    const level = new Float64Array(3000).fill(Number.NaN);
    const slope = new Float64Array(3000).fill(Number.NaN);
    sampleWater(train, -4, 0.05, level, slope);
    const instants = level.map((_, j) => -4 + 0.05 * j);
    expectClose(
      level,
      instants.map((s) => waveElevationAt(train, s)),
      { abs: 1e-12 },
    ); // measured 3e-14
    expectClose(
      slope,
      instants.map((s) => waveSlopeAt(train, s)),
      { abs: 1e-12 },
    ); // measured 9e-14
    expectClose(many, single, { abs: 1e-12 * largest }); // measured 4e-11
  });

  it('reaches the plan as a roll moment from its own beginning', () => {
    const time = runTimes(10, 500);
    const course = sampleDisturbances([{ ...REGULAR, time: 2, duration: 5 }], time, {
      referenceHeight: 0.4,
      velocity: [0, 0],
      waves: HULL,
      road: undefined,
    });
    const train = createWaveTrain(REGULAR);
    expectClose(course.roll[240]!, waveMomentAt(train, HULL, 2.8), { rel: 1e-12 }); // measured 9e-15
    expect(course.roll.subarray(0, 99).every((m) => m === 0)).toBe(true);
    expect(course.roll.subarray(352).every((m) => m === 0)).toBe(true);
  });
});

const BODY: RollBody = {
  inertia: 260,
  stiffness: 2400,
  linearDamping: 60,
  quadraticDamping: 0,
  righting: undefined,
  waves: HULL,
};
const NONE: RollArray = { momentum: 0, tilt: 0, tiltRate: 0, torque: 0, gimbalInertia: 0, lag: 0 };
const STRONG: RollArray = {
  momentum: 4000,
  tilt: 1.2,
  tiltRate: 20,
  torque: Infinity,
  gimbalInertia: 0,
  lag: 0.02,
};

describe('roll in waves', () => {
  it('is the resonance formula at the natural period', () => {
    const natural = Math.sqrt(BODY.stiffness / BODY.inertia);
    const share = effectiveSlopeShare(HULL, natural ** 2 / STANDARD_GRAVITY, Math.PI / 2);
    const magnified = Math.sqrt(BODY.stiffness * BODY.inertia) / BODY.linearDamping;
    expectClose(rollPerSlope(BODY, BODY.linearDamping, natural, Math.PI / 2), share * magnified, {
      rel: 1e-12,
    }); // measured 0
    expectClose(rollPerSlope(BODY, BODY.linearDamping, 1e-3, Math.PI / 2), 1, { rel: 1e-4 }); // measured 1e-7
  });

  it('comes out alike by frequencies and in time, bare and with an array that nothing holds back', () => {
    for (const waves of [REGULAR, { ...REGULAR, period: 2.1 }]) {
      const train = createWaveTrain(waves);
      for (const gain of [0, 300]) {
        const spectral = rollByFrequency(BODY, train, gain, STRONG.momentum);
        // Whole waves only, after the start has died away.
        const settle = 20 * waves.period;
        const run = rollInTime(BODY, train, gain > 0 ? STRONG : NONE, gain, 60 * waves.period, settle);
        expectClose(run.rmsRoll, spectral.rmsRoll, { rel: 1e-3 }); // measured 5e-4
        expectClose(run.rmsTorque, spectral.rmsTorque, { rel: 1e-3, abs: 1e-9 }); // measured 1e-2
        expectClose(run.powerTaken, spectral.powerTaken, { rel: 1e-3, abs: 1e-9 }); // measured 1e-2
        expect(run.limitedShare).toBe(0);
        if (gain > 0) expectClose(run.mostTilt, spectral.mostTilt, { rel: 1e-3 }); // measured 2e-7
      }
    }
  });

  it('loses to quadratic damping what an equal linear one would take', () => {
    const rough: RollBody = { ...BODY, quadraticDamping: 150 };
    const train = createWaveTrain({ ...REGULAR, period: 2.1 });
    const spectral = rollByFrequency(rough, train, 0, 0);
    const linear = { ...BODY, linearDamping: BODY.linearDamping + spectral.equivalentDamping };
    expectClose(rollByFrequency(linear, train, 0, 0).rmsRoll, spectral.rmsRoll, { rel: 1e-10 }); // measured 0
    const run = rollInTime(rough, train, NONE, 0, 120, 60);
    expectClose(run.rmsRoll, spectral.rmsRoll, { rel: 2e-2 }); // measured 7e-4
    expect(spectral.rmsRoll).toBeLessThan(rollByFrequency(BODY, train, 0, 0).rmsRoll);
  });

  it('agrees in a sea within the scatter of one record', () => {
    const train = createWaveTrain(SEA);
    const spectral = rollByFrequency(BODY, train, 300, STRONG.momentum);
    const run = rollInTime(BODY, train, STRONG, 300, 600, 30);
    expectClose(run.rmsRoll, spectral.rmsRoll, { rel: 0.05 }); // measured 2e-2
  });

  it('keeps the balance of power: waves give what damping and array take', () => {
    const train = createWaveTrain(REGULAR);
    const bare = rollByFrequency(BODY, train, 0, 0);
    const run = rollInTime(BODY, train, STRONG, 300, 180, 60);
    const held = rollByFrequency(BODY, train, 300, STRONG.momentum);
    const reduction = 100 * rollReduction(run.rmsRoll, bare.rmsRoll);
    expectClose(reduction, 100 * rollReduction(held.rmsRoll, bare.rmsRoll), { abs: 0.2 }); // measured 1e-3
    expect(reduction).toBeGreaterThan(10);
    // Massless gimbals: the servos brake all that the array takes out.
    expect(run.drivePower).toBeGreaterThan(run.powerTaken - 1e-9);
  });

  it('finds the gain that just uses what the array has', () => {
    const train = createWaveTrain(REGULAR);
    const small: RollArray = { ...STRONG, momentum: 60, tilt: 1 };
    const gain = largestGain(BODY, train, small);
    expect(gain).toBeGreaterThan(0);
    const run = rollInTime(BODY, train, small, gain, 180, 90);
    const more = rollByFrequency(BODY, train, 1.01 * gain, small.momentum);
    expect(run.limitedShare).toBeLessThan(0.02);
    expect(more.mostTilt > small.tilt || more.mostTiltRate > small.tiltRate * Math.cos(more.mostTilt)).toBe(
      true,
    );
    // Far beyond its means it stays at its stops and takes out less, but never adds.
    const beyond = rollInTime(BODY, train, small, 20 * gain, 180, 90);
    expect(beyond.limitedShare).toBeGreaterThan(0.3);
    expect(beyond.mostTilt).toBeLessThan(small.tilt + 0.02);
    expect(beyond.rmsRoll).toBeLessThan(rollByFrequency(BODY, train, 0, 0).rmsRoll);
  });
});
