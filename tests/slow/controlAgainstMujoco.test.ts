import { describe, expect, it } from 'vitest';
import {
  createRollLoopWork,
  createRollRecord,
  NO_DISTURBANCE,
  RECORD,
  runRollLoop,
} from '../../src/core/control';
import { expectClose } from '../support/closeTo';
import { describeMujocoRig, runMujocoLoop } from '../support/mujocoRollLoop';
import { openMujoco } from '../support/mujocoStar';

describe('fast kernel against MuJoCo', () => {
  it('gives the same roll and tilt for the same firmware, servo and noise, 3 s from a lean', async () => {
    const mujoco = await openMujoco();
    const duration = 3;
    const theirs = runMujocoLoop(mujoco, describeMujocoRig(4), 0.06, duration, 11);
    const model = describeMujocoRig(4);
    const record = createRollRecord(3000, 1);
    const out = runRollLoop(
      model,
      createRollLoopWork(model),
      NO_DISTURBANCE,
      { roll: 0.06, rollRate: 0, tilt: 0, estimateError: 0, duration, seed: 11, run: 0 },
      record,
    );
    expect(out.hasFallen).toBe(false);
    expect(out.peakTilt).toBeGreaterThan(0.3);
    const column = (which: number): Float64Array =>
      Float64Array.from({ length: 3000 }, (_, k) => record.rows[9 * k + which]!);
    const theirColumn = (which: number): Float64Array =>
      Float64Array.from({ length: 3000 }, (_, k) => theirs[2 * k + which]!);
    expectClose(column(RECORD.roll), theirColumn(0), { abs: 5e-5 }, 'roll'); // measured 7e-6 of 0.06 rad
    expectClose(column(RECORD.tilt), theirColumn(1), { abs: 1e-3 }, 'tilt'); // measured 2.4e-4 of 0.46 rad
  });
});
