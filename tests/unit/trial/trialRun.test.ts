import { describe, expect, it } from 'vitest';
import {
  createRollLoopWork,
  createRollRecord,
  RECORD,
  RECORD_WIDTH,
  runRollLoop,
} from '../../../src/core/control';
import { PACER, STRIDER } from '../../../src/core/rig';
import {
  AS_DRAWN,
  builtFall,
  builtServo,
  builtWhole,
  COMPARED,
  compareTrials,
  findLargestShove,
  kernelRun,
  runTrial,
  suitsKernel,
  USUAL_DOUBT,
  writeTrialCsv,
} from '../../../src/core/trial';
import { expectClose } from '../../support/closeTo';
import {
  ALL_ON,
  EDGED,
  LOCKED,
  quieten,
  ready,
  requestFor,
  STANDING,
  strengthen,
  tighten,
} from '../../support/trialRigs';

const edged = ready(quieten(EDGED));
const walking = ready(STRIDER);

describe('a trial', () => {
  it('gives the same numbers to the last bit for the same seed, others for another', () => {
    const run = (seed: number) =>
      runTrial(walking.setting, walking.schedules, { ...requestFor(walking, 2), seed }).columns;
    const first = run(5);
    expect(run(5)).toEqual(first);
    expect(run(6).leanEstimate).not.toEqual(first.leanEstimate);
  });

  it('ticks at the loop’s rate and records every column over the whole run', () => {
    const { motion, columns, figures } = runTrial(walking.setting, walking.schedules, requestFor(walking, 2));
    expect(motion.samples).toBe(201);
    expectClose(motion.time[200]!, 2, { rel: 1e-12 });
    for (const column of Object.values(columns)) {
      expect(column.length).toBe(201);
      expect(column.every(Number.isFinite)).toBe(true);
    }
    expect(figures.hasFallen).toBe(false);
    const lines = writeTrialCsv({ motion, columns, figures }).trimEnd().split('\r\n');
    expect(lines.length).toBe(202);
    for (const line of lines) expect(line.split(',').length).toBe(10 + 2 * 2);
    expect(Number(lines[101]!.split(',')[1])).toBe(columns.lean[100]);
  });

  it('with the gimbals locked does not care about the gains', () => {
    const locked = (kp: number) =>
      runTrial(edged.setting, edged.schedules, {
        ...requestFor(edged, 1, LOCKED),
        controller: { kind: 'pidTiltRate', kp, ki: 0, kd: kp / 4 },
        surprises: [{ time: 0.1, impulse: 0.1, height: 0.4 }],
      }).columns.lean;
    expect(locked(500)).toEqual(locked(0));
  });
});

describe('the star and the fast kernel', () => {
  /** Largest difference of lean over the largest lean, over the first seconds after a shove. */
  const compare = (setup: typeof edged, impulse: number, length: number): number => {
    if (!suitsKernel(setup.setting)) throw new Error('made for the kernel');
    const request = { ...requestFor(setup, length), surprises: [{ time: 0.5, impulse, height: 0.4 }] };
    const star = runTrial(setup.setting, setup.schedules, request).columns.lean;
    const kernel = kernelRun(setup.setting, setup.schedules, ALL_ON, setup.controller, AS_DRAWN, [
      [0.5, -0.4 * impulse],
    ]);
    const record = createRollRecord(star.length, 5);
    const start = {
      roll: 0,
      rollRate: 0,
      tilt: 0,
      estimateError: 0,
      duration: length + 0.01,
      seed: 1,
      run: 0,
    };
    runRollLoop(kernel.model, createRollLoopWork(kernel.model), kernel.disturbance, start, record);
    let worst = 0;
    let most = 0;
    for (let k = 0; k < star.length; k++) {
      worst = Math.max(worst, Math.abs(star[k]! - record.rows[k * RECORD_WIDTH + RECORD.roll]!));
      most = Math.max(most, Math.abs(star[k]!));
    }
    return worst / most;
  };

  it('answer a shove alike: quiet sensors, no play in the gears', () => {
    expect(compare(ready(tighten(quieten(EDGED))), 0.3, 3)).toBeLessThan(2e-4); // measured 7.2e-5
  });

  it('and with play, while it matters', () => {
    expect(compare(edged, 0.3, 1)).toBeLessThan(2e-4); // measured 6.7e-5
  });
});

describe('the largest shove', () => {
  const question = { switches: ALL_ON, height: 0.4, at: 0.5, length: 3, side: 'left', seed: 1 } as const;

  it('of a standing rig with its array locked is what lifts its weight over the sole', () => {
    const setup = ready(quieten(STANDING));
    const { held, failed, bound } = findLargestShove(setup, { ...question, switches: LOCKED });
    expect(bound).toBeDefined();
    expect(held).toBeGreaterThan(0);
    expectClose(0.5 * (held + failed), bound!, { rel: 2e-3 }, 'locked'); // measured 1.0e-3, half the bracket
  });

  it('on an edge comes near the closed form when servo and loop are quick', () => {
    const setup = ready(strengthen(tighten(quieten(EDGED))));
    const { held, bound, terms } = findLargestShove(setup, question);
    expect(terms!.rest).toBe(0);
    // Below, for the delay until the loop has seen it: the array then has 0.02 of its momentum's worth to make up.
    expect(held).toBeLessThan(bound!);
    expectClose(held, bound!, { rel: 0.03 }, 'quick'); // measured 0.020
  });

  it('and with the bench servo, whose torque has its limit, nearer still', () => {
    const setup = ready(tighten(quieten(EDGED)));
    const { held, bound } = findLargestShove(setup, question);
    expect(held).toBeLessThan(bound!);
    expectClose(held, bound!, { rel: 0.015 }, 'bench servo'); // measured 0.0078
  });

  it('a shove does not vanish because the body leans a little the other way', () => {
    const setup = ready(PACER);
    for (const side of ['left', 'right'] as const) {
      const { held } = findLargestShove(setup, { ...question, at: 1, side });
      expect(held).toBeGreaterThan(0.5);
      expect(held).toBeLessThan(8); // measured 3.2 and 2.8 N s
    }
  });
});

describe('a comparison', () => {
  it('runs all five: a walker holds with plan and feedback, and with neither it falls', () => {
    const build = { ...AS_DRAWN, ...USUAL_DOUBT };
    const rows = compareTrials(walking, { ...requestFor(walking, 8), build });
    expect(rows.map(({ name }) => name)).toEqual([...COMPARED]);
    const fallen = Object.fromEntries(rows.map(({ name, run }) => [name, run.figures.hasFallen]));
    expect(fallen).toMatchObject({ off: true, locked: true, plan: true, both: false });
  });
});

describe('a rig as built', () => {
  const { setting } = edged;
  if (setting.kind !== 'lean') throw new Error('leans');
  const { compiled } = setting;

  it('is the drawn one when nothing differs', () => {
    const drawn = { inertia: setting.inertia, stiffness: -setting.stiffness };
    expect(builtFall(setting, AS_DRAWN)).toEqual(drawn);
    const almost = builtFall(setting, { ...AS_DRAWN, mass: 1 + 1e-9 });
    expectClose(almost.inertia, drawn.inertia, { rel: 1e-8 });
    expectClose(almost.stiffness, drawn.stiffness, { rel: 1e-8 });
  });

  it('is heavier and higher by just what was asked', () => {
    const whole = builtWhole(compiled, { ...AS_DRAWN, mass: 1.1, centreUp: 0.01 });
    const drawn = compiled.whole;
    expectClose(whole.mass, drawn.mass + 0.1 * compiled.carrier.mass, { rel: 1e-12 });
    const raised = builtWhole(compiled, { ...AS_DRAWN, centreUp: 0.01 });
    expectClose(raised.com[2] - drawn.com[2], 0.01, { rel: 1e-9 });
    const fall = builtFall(setting, { ...AS_DRAWN, centreUp: 0.01 });
    expectClose(fall.stiffness + setting.stiffness, drawn.mass * 9.80665 * 0.01, { rel: 1e-9 });
  });

  it('loses the friction of its gimbals from the servo’s line', () => {
    const gyro = STRIDER.array.gyros[0]!;
    if (gyro.drive.kind !== 'servo') throw new Error('servo');
    const { servo } = gyro.drive;
    const gimbal = { ...gyro.gimbal, stiction: 0.1, friction: 0.02 };
    const built = builtServo(servo, [gimbal], { ...AS_DRAWN, friction: 2, servoLag: 1.5, backlash: 0 });
    // At any speed w the line gives stall (1 - w / w0) less 0.2 N m and 0.04 w.
    const w = 1.7;
    const drawn = servo.stallTorque * (1 - w / servo.noLoadSpeed) - 0.2 - 0.04 * w;
    expectClose(built.stallTorque * (1 - w / built.noLoadSpeed), drawn, { rel: 1e-12 });
    expectClose(built.lag, 1.5 * servo.lag, { rel: 1e-12 });
    expect(built.backlash).toBe(0);
  });
});
