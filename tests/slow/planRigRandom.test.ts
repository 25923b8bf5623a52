import { describe, expect, test } from 'vitest';
import { compileRig } from '../../src/core/physics';
import {
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  gimbalCourses,
  ledgerLines,
  setUpPlan,
} from '../../src/core/planning';
import { checkPlanLimits, isWithinLimits } from '../../src/core/planning/momentumPlanCheck';
import { steerPlan } from '../../src/core/planning/steeredPlan';
import { readRig } from '../../src/core/rig';
import { drawRig } from '../support/randomRigs';

const FIRST_SEED = 1;
const RIGS = 320;
const GRAIN = { intervals: 60, most: 160 };

describe(`random rigs, seeds ${FIRST_SEED} to ${FIRST_SEED + RIGS - 1}`, () => {
  test('each ends in one of the outcomes, no plan breaks a limit, no number is lost', () => {
    const count: Record<string, number> = {};
    const faults: string[] = [];
    const work = createPlanWork();
    for (let seed = FIRST_SEED; seed < FIRST_SEED + RIGS; seed++) {
      const note = (kind: string): void => {
        count[kind] = (count[kind] ?? 0) + 1;
      };
      const rig = drawRig(seed);
      if (readRig(rig).kind !== 'read') faults.push(`seed ${seed}: not a rig`);
      const compiled = compileRig(rig);
      const set = compiled.kind === 'compiled' ? setUpPlan(compiled.compiled, GRAIN) : compiled;
      if (set.kind === 'refused') {
        note('refused');
        if (set.refusals.length === 0) faults.push(`seed ${seed}: refused without a word`);
        continue;
      }
      const outcome = attemptRigPlan(set.setting, defaultPlanOptions, work);
      note(outcome.kind);
      if (outcome.kind !== 'planned') continue;
      const { setting, schedules } = outcome;
      const { problem, steered } = setting;
      const limits = checkPlanLimits(problem, schedules, 5);
      if (!isWithinLimits(problem, limits, 1e-7)) faults.push(`seed ${seed}: ${JSON.stringify(limits)}`);
      if (steered) {
        note('steered');
        const { kind, course } = steerPlan(setting, steered, schedules);
        const { rate, tilt } = course.worst;
        if (kind !== 'steered' || rate > 1 + 1e-6 || tilt > 1 + 1e-6)
          faults.push(`seed ${seed}: not steered`);
      }
      const { tilt, tiltRate } = gimbalCourses(setting, schedules);
      const lines = ledgerLines(setting, schedules);
      const numbers = [...tilt, ...tiltRate, ...lines.flatMap(({ ask, have }) => [ask.value, have.value])];
      if (!numbers.every(Number.isFinite)) faults.push(`seed ${seed}: a number is lost`);
      if (lines.some(({ spare }) => Number.isNaN(spare))) faults.push(`seed ${seed}: a spare is lost`);
    }
    console.log(`seeds ${FIRST_SEED} + ${RIGS}: ${JSON.stringify(count)}`);
    expect(faults).toEqual([]);
    expect(count.planned).toBeGreaterThan(RIGS / 5);
    expect(count.impossible).toBeGreaterThan(RIGS / 20);
    expect(count.steered).toBeGreaterThan(5);
    expect(count['gave-up'] ?? 0).toBeLessThanOrEqual(RIGS / 50);
  });
});
