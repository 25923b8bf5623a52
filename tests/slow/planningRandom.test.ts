import { describe, expect, test } from 'vitest';
import {
  attemptPlan,
  createPlanWork,
  defaultPlanOptions,
  openSlot,
  takeAxis,
} from '../../src/core/planning/momentumPlan';
import { assemblePlan } from '../../src/core/planning/momentumPlanAssembly';
import { checkPlanLimits, isWithinLimits } from '../../src/core/planning/momentumPlanCheck';
import type { MomentumPlanProblem } from '../../src/core/planning/momentumPlanProblem';
import {
  checkCertificate,
  checkOptimality,
  defaultSolverOptions,
  isOptimal,
} from '../../src/core/planning/solver';
import { drawPlan } from '../support/randomPlans';

const firstSeed = 20_000;
const problems = 2400;
/** Three runs of the method a pass at most, eight passes, two axes. */
const mostIterations = 3 * defaultSolverOptions.maxIterations * defaultPlanOptions.servoPasses * 2;

const hasServo = (problem: MomentumPlanProblem) => problem.axes.some(({ array }) => array.servo !== null);

describe(`random plans, seeds ${firstSeed} to ${firstSeed + problems - 1}`, () => {
  const count = { planned: 0, impossible: 0, 'gave-up': 0 };
  const passed: string[] = [];
  const unproven: string[] = [];
  let worst = 0;
  const work = createPlanWork();

  test('every plan keeps every limit on a grid five times finer, every impossible has its proof', () => {
    for (let seed = firstSeed; seed < firstSeed + problems; seed++) {
      const problem = drawPlan(seed);
      // one work space for all: shapes change under it, and kept points are poor starts
      const attempt = attemptPlan(problem, defaultPlanOptions, work);
      count[attempt.kind] += 1;
      worst = Math.max(worst, attempt.iterations);
      if (attempt.kind === 'planned') {
        const limits = checkPlanLimits(problem, attempt.axes, 5);
        if (!isWithinLimits(problem, limits, 1e-7)) passed.push(`seed ${seed}: ${JSON.stringify(limits)}`);
        const { tolerance, gapTolerance } = defaultSolverOptions;
        if (!isOptimal(attempt.residuals, tolerance, gapTolerance)) passed.push(`seed ${seed}: not optimal`);
      }
      if (attempt.kind === 'impossible' && !hasServo(problem)) {
        for (const { axis, certificate } of attempt.failures) {
          const alone = problem.axes.length === 1 ? problem : takeAxis(problem, axis);
          const slot = openSlot(alone, 'plan', createPlanWork());
          assemblePlan(alone, slot.layout, null, [1], slot.problem);
          const { dynamicsDual, boundaryDual, dual } = certificate;
          const { radius } = defaultSolverOptions;
          const finding = checkCertificate(slot.problem, dynamicsDual, boundaryDual, dual, radius);
          if (!finding.holds) unproven.push(`seed ${seed}, axis ${axis}`);
        }
      }
    }
    console.log(`seeds ${firstSeed} + ${problems}: ${JSON.stringify(count)}, at most ${worst} steps`);
    expect(passed).toEqual([]);
    expect(unproven).toEqual([]);
  });

  test('each ends in one of the three outcomes, hardly any in giving up', () => {
    expect(count.planned + count.impossible + count['gave-up']).toBe(problems);
    expect(worst).toBeLessThanOrEqual(mostIterations);
    expect(count.planned).toBeGreaterThan(problems / 4);
    expect(count.impossible).toBeGreaterThan(problems / 10);
    expect(count['gave-up']).toBeLessThanOrEqual(problems / 1000); // measured 0 of 2400
  });
});

describe('random plans spoiled', () => {
  test('the checks say no to 200 answers with one entry moved', () => {
    let checked = 0;
    for (let seed = 1; checked < 200; seed++) {
      const problem = drawPlan(seed);
      if (problem.axes.length > 1 || hasServo(problem)) continue;
      const work = createPlanWork();
      if (attemptPlan(problem, defaultPlanOptions, work).kind !== 'planned') continue;
      const { problem: program, solver } = openSlot(problem, 'plan', work, 'plan 0');
      const { tolerance, gapTolerance } = defaultSolverOptions;
      const { z } = solver.point;
      const at = seed % (program.sizes.stages * program.sizes.width);
      z[at] += 1e-5;
      const residuals = checkOptimality(program, solver.point, 0);
      expect(isOptimal(residuals, tolerance, gapTolerance), `seed ${seed}, entry ${at}`).toBe(false);
      checked += 1;
    }
  });
});
