import { describe, expect, it } from 'vitest';
import { type ArrayGyro, compileArray } from '../../../src/core/physics/arrayLaw';
import { pairLeak, scissoredTorque } from '../../../src/core/physics/closedForms';
import { layoutLeak, noFault, reportLayout } from '../../../src/core/physics/layoutReport';
import { expectClose } from '../../support/closeTo';

const single: readonly ArrayGyro[] = [{ gimbalAxis: [0, 1, 0], spinAxis: [0, 0, 1], axialInertia: 1 }];
const pair: readonly ArrayGyro[] = [
  ...single,
  { gimbalAxis: [0, -1, 0], spinAxis: [0, 0, -1], axialInertia: 1 },
];
/** A roll pair and a pitch pair. */
const twoPairs: readonly ArrayGyro[] = [
  ...pair,
  { gimbalAxis: [1, 0, 0], spinAxis: [0, 0, 1], axialInertia: 1 },
  { gimbalAxis: [-1, 0, 0], spinAxis: [0, 0, -1], axialInertia: 1 },
];

describe('layout at a tilt', () => {
  it('a scissored pair gives roll and nothing beside it, twice h rate cos(tilt)', () => {
    const report = reportLayout(compileArray(pair), [0.5, 0.5], [2, 2], [3, 3]);
    expectClose(report.most.roll, scissoredTorque(2, 0.5, 3), { rel: 1e-14 });
    expectClose(
      [report.besideRoll.roll, report.besideRoll.pitch, report.besideRoll.yawLeak],
      [report.most.roll, 0, 0],
      {
        abs: 1e-14,
      },
    );
    expectClose(report.momentum, [4 * Math.sin(0.5), 0, 0], { abs: 1e-15 });
  });

  it('a single wheel leaks into yaw by the tangent of its tilt', () => {
    const { besideRoll } = reportLayout(compileArray(single), [0.5], [2], [3]);
    expect(besideRoll.roll).toBeGreaterThan(0);
    expectClose(Math.abs(besideRoll.yawLeak / besideRoll.roll), Math.tan(0.5), { rel: 1e-14 });
  });

  it('two pairs command roll and pitch; yaw is beyond them at null', () => {
    const report = reportLayout(compileArray(twoPairs), [0, 0, 0, 0], [1, 1, 1, 1], [2, 2, 2, 2]);
    expectClose([report.most.roll, report.most.pitch, report.most.yawLeak], [4, 4, 0], { abs: 1e-14 });
    expect(report.singularity.rank).toBe(2);
    expectClose(Math.abs(report.singularity.weakest[2]), 1, { rel: 1e-12 });
    expect(report.singularity.nullMotion.columns).toBe(2);
  });
});

describe('what faults leave over', () => {
  it('agrees with the closed form of a faulty pair', () => {
    const fault = { speedMismatch: 0.04, tiltLag: 0.05, rateLag: 0.3, axisError: 0.02 };
    const closed = pairLeak(2, 0.6, 1.5, fault);
    const leak = layoutLeak(
      pair,
      [0.6, 0.6],
      [1.5, 1.5],
      [2, 2],
      [
        { ...noFault, speedError: 0.02 },
        { speedError: -0.02, misalignment: [0, 0, 0.02], tiltLag: 0.05, rateLag: 0.3 },
      ],
    );
    expectClose(leak.torque, closed.torque, { abs: 1e-14 });
    expectClose(leak.momentum, closed.momentum, { abs: 1e-14 });
  });

  it('is nothing without faults', () => {
    const leak = layoutLeak(
      twoPairs,
      [0.1, 0.2, 0.3, 0.4],
      [1, 2, 3, 4],
      [1, 1, 1, 1],
      twoPairs.map(() => noFault),
    );
    expect([...leak.torque, ...leak.momentum]).toEqual([0, 0, 0, 0, 0, 0]);
  });
});
