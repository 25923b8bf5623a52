import { describe, expect, it } from 'vitest';
import {
  CAUTION_KINDS,
  CAUTION_THRESHOLDS,
  cautionsFor,
  describeTrigger,
} from '../../../src/core/physics/cautions';
import { spinGyro, spinRig } from '../../../src/core/physics/spin';
import { arraySpinFigures } from '../../../src/core/physics/spinDriveFigures';
import { spinFigures } from '../../../src/core/physics/spinFigures';
import { gimbalRateOf } from '../../../src/core/physics/spinStanding';
import { BENCH_GYRO, BENCH_POWER, DEMONSTRATIONS, type Gyro, SKIFF } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const reportOf = (gyro: Gyro, gimbalRate = 4) => {
  const outcome = spinGyro(gyro, BENCH_POWER, gimbalRate);
  if (outcome.kind !== 'spun') throw new Error(JSON.stringify(outcome.faults));
  return outcome.report;
};

describe('spin up', () => {
  it('every demonstration rig spins safely, in reach of its motor', () => {
    for (const { file, rig } of DEMONSTRATIONS) {
      const spin = spinRig(rig);
      for (const outcome of spin.gyros) {
        if (outcome.kind !== 'spun') throw new Error(file);
        expect(outcome.report.stress.spare, file).toBeGreaterThan(0);
        expect(outcome.report.hold.kind, file).toBe('held');
        expect(outcome.report.spinUp.kind, file).toBe('reaches');
      }
      expect(spin.runTime, file).toBeGreaterThan(600);
    }
  });

  it('each figure has a finite value, a formula, inputs and a source, and an id of its own', () => {
    for (const { rig } of DEMONSTRATIONS) {
      const spin = spinRig(rig);
      const outcome = spin.gyros[0]!;
      if (outcome.kind !== 'spun') throw new Error('refused');
      const figures = [
        ...spinFigures(outcome.report).flatMap((group) => group.figures),
        ...arraySpinFigures(spin),
      ];
      expect(new Set(figures.map((f) => f.id)).size).toBe(figures.length);
      for (const f of figures) {
        expect(Number.isFinite(f.value), f.id).toBe(true);
        expect(f.formula.length * f.source.length * f.inputs.length, f.id).toBeGreaterThan(0);
        for (const i of f.inputs) expect(Number.isFinite(i.value), `${f.id}: ${i.label}`).toBe(true);
      }
    }
  });

  it('opens into the numbers it was made of', () => {
    const report = reportOf(BENCH_GYRO);
    const figures = new Map(spinFigures(report).flatMap((g) => g.figures.map((f) => [f.id, f] as const)));
    const value = (id: string, label: string): number =>
      figures.get(id)!.inputs.find((i) => i.label === label)!.value;
    expectClose(value('momentum', 'J_s') * value('momentum', 'Speed'), report.momentum, { rel: 1e-14 }); // measured 0
    expectClose(
      (value('gyroscopicLoad', 'Momentum') * value('gyroscopicLoad', 'Greatest gimbal rate')) /
        value('gyroscopicLoad', 'Distance between bearings'),
      figures.get('gyroscopicLoad')!.value,
      { rel: 1e-14 }, // measured 0
    );
    const safe = Math.sqrt(
      value('safeSpeed', 'Minimum allowable') /
        (value('safeSpeed', 'Factor on speed squared') * value('safeSpeed', 'Stress')),
    );
    expectClose(safe * value('safeSpeed', 'Speed'), figures.get('safeSpeed')!.value, { rel: 1e-14 }); // measured 0
    expectClose(
      (value('bearingLife', 'C') / value('bearingLife', 'P')) ** 3 * 1e6,
      (figures.get('bearingLife')!.value * value('bearingLife', 'Speed')) / (2 * Math.PI),
      { rel: 1e-13 }, // measured 0
    );
  });

  it('a wheel at rest has nothing to say but its weight, and no NaN', () => {
    const report = reportOf({ ...BENCH_GYRO, speed: 0 });
    for (const f of spinFigures(report).flatMap((group) => group.figures))
      expect(Number.isNaN(f.value), f.id).toBe(false);
    expect(report.burst.energy).toBe(0);
  });

  it('a wheel too fast for its motor is told its top speed, and the rig no run time', () => {
    const gyro = { ...BENCH_GYRO, speed: 5000 };
    const report = reportOf(gyro);
    expect(report.spinUp.kind).toBe('falls short');
    expect(report.hold.kind).toBe('too fast');
    const spin = spinRig({ ...SKIFF, array: { gyros: [gyro] } });
    expect(spin.runTime).toBe(0);
  });

  it('a housing pumped down costs less than still air, and the report shows both', () => {
    const open = reportOf({ ...BENCH_GYRO, housing: { kind: 'open' } });
    const pumped = reportOf({ ...BENCH_GYRO, housing: { kind: 'evacuated', gap: 0.004, pressure: 100 } });
    expect(pumped.windage.power).toBeLessThan(0.1 * open.windage.power);
    expectClose(pumped.openAir.power, open.windage.power, { rel: 1e-12 }); // measured 0
  });

  it('a geared gimbal turns as fast as its leader times the ratio', () => {
    const follower: Gyro = { ...BENCH_GYRO, drive: { kind: 'geared', leader: 0, ratio: -2 } };
    const rig = { ...SKIFF, array: { gyros: [BENCH_GYRO, follower] } };
    expectClose(gimbalRateOf(rig, follower), 2 * gimbalRateOf(rig, BENCH_GYRO), { rel: 1e-14 }); // measured 0
  });

  it('power comes from the battery whole: hold flows close, run time spends what is there', () => {
    const spin = spinRig(SKIFF, 55);
    expectClose(spin.runTime * (spin.power + 55) + spin.spinUpEnergy, 0.8 * spin.batteryEnergy, {
      rel: 1e-12, // measured 0
    });
  });
});

describe('cautions', () => {
  const none = {
    rimSpeed: 0,
    spinEnergy: 0,
    throwHeight: 0,
    printedParts: 0,
    gimbalTorque: 0,
    batteryEnergy: 0,
  };

  it('come with what set them off, at or above a stated threshold', () => {
    for (const { rig } of DEMONSTRATIONS) {
      const { cautions } = spinRig(rig);
      const kinds = cautions.map((caution) => caution.kind);
      for (const kind of ['burst', 'firstSpin', 'knock', 'trap', 'battery', 'discharge', 'defer'] as const) {
        expect(kinds).toContain(kind);
      }
      for (const { trigger, sentence } of cautions) {
        expect(trigger.value).toBeGreaterThanOrEqual(trigger.threshold);
        expect(sentence.length).toBeGreaterThan(40);
        expect(describeTrigger(trigger)).toMatch(/, at or above /);
      }
    }
  });

  it('are silent only when nothing spins, pinches or burns', () => {
    expect(cautionsFor(none)).toEqual([]);
    expect(
      cautionsFor({ ...none, batteryEnergy: CAUTION_THRESHOLDS.batteryEnergy }).map((c) => c.kind),
    ).toEqual(['battery', 'discharge', 'defer']);
    expect(cautionsFor({ ...none, rimSpeed: CAUTION_THRESHOLDS.rimSpeed * 0.999 })).toEqual([]);
    expect(cautionsFor({ ...none, rimSpeed: CAUTION_THRESHOLDS.rimSpeed }).map((c) => c.kind)).toContain(
      'burst',
    );
    const all = cautionsFor({
      rimSpeed: 50,
      spinEnergy: 100,
      throwHeight: 20,
      printedParts: 1,
      gimbalTorque: 2,
      batteryEnergy: 1e5,
    });
    expect(all.map((c) => c.kind)).toEqual([...CAUTION_KINDS]);
  });

  it('a printed part in a spinning wheel says so', () => {
    const parts = [{ ...BENCH_GYRO.wheel.parts[1]!, material: 'PLA printed' }] as Gyro['wheel']['parts'];
    const gyro: Gyro = { ...BENCH_GYRO, wheel: { ...BENCH_GYRO.wheel, parts } };
    const { cautions } = spinRig({ ...SKIFF, array: { gyros: [gyro] } });
    expect(cautions.find((c) => c.kind === 'printed')?.trigger.value).toBe(1);
  });
});
