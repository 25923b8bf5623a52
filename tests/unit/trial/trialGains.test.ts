import { describe, expect, it } from 'vitest';
import { nameLaw } from '../../../src/core/control';
import { PACER, type Rig, SKIFF, STRIDER } from '../../../src/core/rig';
import {
  computeGains,
  controllerOf,
  controlOf,
  type GainReport,
  gainsAgainstSpeed,
  judgeGains,
  mapAround,
  mapAxes,
  runTrial,
} from '../../../src/core/trial';
import { expectClose } from '../../support/closeTo';
import { EDGED, quieten, ready, requestFor, tighten } from '../../support/trialRigs';

const reportOf = (rig: Rig, always = false): GainReport => {
  const outcome = computeGains(ready(rig).setting, always);
  if (outcome.kind === 'none') throw new Error(outcome.sentence);
  return outcome.report;
};

describe('gains computed for a rig', () => {
  it.each([STRIDER, PACER, SKIFF, EDGED].map((rig) => ({ rig, name: rig.name })))(
    '$name: hold with room on every side, and in the trial',
    ({ rig }) => {
      const report = reportOf(rig);
      const { verdict } = report;
      if (verdict.kind !== 'holds') throw new Error('does not hold');
      const { gainUp, gainDown, delay, sensitivity } = verdict.margins;
      expect(gainUp).toBeGreaterThan(2);
      expect(gainDown).toBeLessThan(0.6);
      expect(delay).toBeGreaterThan(0.02);
      expect(sensitivity).toBeLessThan(2);
      const setup = ready(rig);
      expect(runTrial(setup.setting, setup.schedules, requestFor(setup, 3)).figures.hasFallen).toBe(false);
    },
  );

  it('written into the rig are judged as they were', () => {
    const report = reportOf(EDGED);
    const control = controlOf(report.loop.law, report.gains);
    const named = nameLaw(control, false);
    expect(named).toEqual({ kind: 'given', controller: controllerOf(report) });
    const again = reportOf({ ...EDGED, control });
    expect(again.gains).toEqual(report.gains);
    expect(again.verdict).toEqual(report.verdict);
  });

  it('can be computed for every law a servo can run', () => {
    for (const law of ['pidTilt', 'pidTiltRate', 'feedback'] as const) {
      const control = controlOf(law, [0, 0, 0, 0, 0]);
      expect(reportOf({ ...EDGED, control }, true).loop.law, law).toBe(law);
    }
  });

  it('are refused with a reason: free gimbals, and a law for another kind of array', () => {
    const passive = computeGains(ready({ ...EDGED, control: { kind: 'passive' } }).setting);
    expect(passive).toMatchObject({ kind: 'none', sentence: expect.stringMatching(/free/) });
    const wheel = { kind: 'reactionWheel', lean: 1, leanRate: 1, speed: 0 } as const;
    const outcome = computeGains(ready({ ...EDGED, control: wheel }).setting);
    expect(outcome).toMatchObject({ kind: 'none', sentence: expect.stringMatching(/reaction wheel/) });
  });
});

describe('the map around the present gains', () => {
  const report = reportOf(EDGED);
  const map = mapAround(report.loop, report.gains, 21, 21);

  it('holds at the present point and says of each other what a judgement says', () => {
    const [across, up] = mapAxes(report.loop);
    let held = 0;
    for (const [r, c] of [
      [8, 8],
      [2, 2],
      [20, 0],
      [10, 20],
      [5, 12],
    ] as const) {
      const gains = report.gains.slice();
      gains[across] = map.across[c]!;
      gains[up] = map.up[r]!;
      const holds = judgeGains(report.loop, gains).verdict.kind === 'holds';
      expect(map.value[r * 21 + c]! > 0, `row ${r}, column ${c}`).toBe(holds);
      if (holds) held++;
    }
    expect(held).toBeGreaterThan(0);
    expect(held).toBeLessThan(5);
  });
});

describe('a slowing wheel', () => {
  const rig = tighten(quieten(EDGED));
  const report = reportOf(rig);

  it('begins to build up in the trial at the least speed that was told, within 1 %', () => {
    const { leastSpeed } = report;
    if (leastSpeed.kind !== 'found') throw new Error(leastSpeed.kind);
    const setup = ready(rig);
    /** Largest lean of the last quarter over that of the second. */
    const growth = (share: number): number => {
      const request = requestFor(setup, 24);
      const { lean } = runTrial(setup.setting, setup.schedules, {
        ...request,
        build: { ...request.build, wheelSpeed: share },
        surprises: [{ time: 0.1, impulse: 1e-4, height: 0.4 }],
      }).columns;
      const peak = (quarter: number): number => {
        const n = lean.length / 4;
        return lean
          .subarray(Math.floor(quarter * n), Math.floor((quarter + 1) * n))
          .reduce((most, value) => Math.max(most, Math.abs(value)), 0);
      };
      return peak(3) / peak(1);
    };
    expect(growth(leastSpeed.share * 1.01)).toBeLessThan(1); // measured 0.53
    expect(growth(leastSpeed.share * 0.99)).toBeGreaterThan(1); // measured 1.92
  });

  it('asks for gains in inverse proportion, which leave the loop as it was', () => {
    const [full, half] = gainsAgainstSpeed(report, [1, 0.5]);
    expectClose(
      half!.scaled.slice(0, 2),
      full!.scaled.slice(0, 2).map((g) => 2 * g),
      { rel: 1e-12 },
    );
    if (full!.scaledVerdict.kind !== 'holds' || half!.scaledVerdict.kind !== 'holds')
      throw new Error('fails');
    expectClose(half!.scaledVerdict.margins.delay, full!.scaledVerdict.margins.delay, { rel: 1e-6 });
  });
});
