import { describe, expect, it } from 'vitest';
import { compileRig } from '../../../src/core/physics';
import { rollBodyOf, seakeepingOf } from '../../../src/core/planning/rigSeakeeping';
import type { Waves } from '../../../src/core/planning/waveLoad';
import { type Rig, SKIFF, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const compiled = (rig: Rig) => {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map((r) => r.sentence).join(' '));
  return outcome.compiled;
};

const rolled = (rig: Rig, waves: Waves, gain?: number) => {
  const outcome = seakeepingOf(compiled(rig), waves, gain);
  if (outcome.kind === 'none') throw new Error(outcome.sentence);
  return outcome.seakeeping;
};

const SEA: Waves = {
  kind: 'sea',
  time: 0,
  duration: 300,
  significantHeight: 0.15,
  peakPeriod: 2.6,
  spectrum: 'jonswap',
  heading: Math.PI / 2,
  speed: 0,
  seed: 3,
};

describe('a floating rig in waves', () => {
  it('rolls less with its array, by frequencies and in time alike', () => {
    const { bare, held, spectralReduction, runReduction, gain, response } = rolled(SKIFF, SEA);
    expect(gain).toBeGreaterThan(0);
    expect(spectralReduction).toBeGreaterThan(5);
    expectClose(runReduction, spectralReduction, { abs: 5 }); // measured 1e+0
    expectClose(held.run.rmsRoll, held.spectral.rmsRoll, { rel: 0.1 }); // measured 4e-2
    expect(held.run.isUpright && bare.run.isUpright).toBe(true);
    expect(held.run.limitedShare).toBeLessThan(0.02);
    const most = (values: Float64Array) => Math.max(...values);
    expect(most(response.held)).toBeLessThan(most(response.bare));
  });

  it('leaves the roll as it is without gain', () => {
    const { bare, held, runReduction } = rolled(SKIFF, SEA, 0);
    expect(held.run.rmsRoll).toBe(bare.run.rmsRoll);
    expect([runReduction, held.run.drivePower, held.run.mostTilt]).toEqual([0, 0, 0]);
  });

  it('follows the slope of waves far longer than itself', () => {
    const body = rollBodyOf(compiled(SKIFF))!;
    // Regular beam waves far longer than the hull: it follows their slope.
    const long: Waves = {
      kind: 'waves',
      time: 0,
      duration: 400,
      height: 1,
      period: 20,
      heading: Math.PI / 2,
    };
    const { bare } = rolled(SKIFF, long, 0);
    const slope = (Math.PI * 1) / ((9.80665 * 400) / (2 * Math.PI));
    expectClose(bare.run.rmsRoll, slope / Math.SQRT2, { rel: 0.05 }); // measured 1e-2
    expect(body.stiffness).toBeGreaterThan(0);
  });

  it('says so where there is nothing to roll', () => {
    const outcome = seakeepingOf(compiled(STRIDER), SEA);
    expect(outcome.kind).toBe('none');
    const bare = seakeepingOf(compiled({ ...SKIFF, array: { gyros: [] } }), SEA);
    expect(bare.kind === 'none' && bare.sentence).toContain('roll axis');
  });
});
