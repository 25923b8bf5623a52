import { beforeAll, describe, expect, test } from 'vitest';
import { createPlanWork, defaultPlanOptions, openSlot } from '../../../src/core/planning/momentumPlan';
import { assemblePlan } from '../../../src/core/planning/momentumPlanAssembly';
import type { MomentumPlanProblem } from '../../../src/core/planning/momentumPlanProblem';
import { solveStageProblem } from '../../../src/core/planning/solver';
import { expectClose } from '../../support/closeTo';
import { type GeneralSolver, solveFaceted, startGeneralSolver } from '../../support/highsProgram';
import {
  cyclicPlan,
  leaningBody,
  pairOfWheels,
  reactionWheel,
  swayingFeet,
  walkingPlan,
} from '../../support/planCases';

let general: GeneralSolver;
beforeAll(async () => {
  general = await startGeneralSolver();
});

/** Objective of the plan's program, of the solver here and of the general one on the very same numbers. */
function solveBoth(problem: MomentumPlanProblem): { ours: number; theirs: number } {
  const { layout, problem: program, solver } = openSlot(problem, 'plan', createPlanWork());
  const tightening = problem.axes.map(() => 1);
  const constant = assemblePlan(problem, layout, null, tightening, program);
  const outcome = solveStageProblem(program, defaultPlanOptions.solver, solver);
  if (outcome.kind !== 'solved') throw new Error(outcome.kind);
  const { objective } = solveFaceted(general, program, 1e-9);
  return { ours: outcome.objective + constant, theirs: objective + constant };
}

describe('the same program solved here and by HiGHS', () => {
  test.each([0, 0.2, 1, 2])('reaction wheel on firm feet, ask of %d N m', (amplitude) => {
    const { ours, theirs } = solveBoth(walkingPlan(60, amplitude, reactionWheel));
    expectClose(ours, theirs, { rel: 1e-6 }); // measured 1.5e-10 at worst
  });

  test('reaction wheels about both axes', () => {
    const axes = [0, 0.3].map((phase) => ({
      array: reactionWheel,
      support: swayingFeet(48, 1.5, phase),
      bodyRate: null,
    }));
    const { ours, theirs } = solveBoth(cyclicPlan(axes, 48, 2));
    expectClose(ours, theirs, { rel: 1e-6 }); // measured 1.5e-10 at worst
  });

  test('a leaning body, cyclic', () => {
    const support = leaningBody(60, 0.5, 2);
    const { ours, theirs } = solveBoth(
      cyclicPlan([{ array: reactionWheel, support, bodyRate: null }], 60, 2),
    );
    expectClose(ours, theirs, { rel: 1e-6 }); // measured 1.5e-10 at worst
  });

  test('a leaning body that starts off its balance', () => {
    const support = leaningBody(61, 0.3, 1);
    const problem: MomentumPlanProblem = {
      ...cyclicPlan([{ array: reactionWheel, support, bodyRate: null }], 60, 1.5),
      ends: {
        kind: 'given',
        start: [{ momentum: 0, lean: 0.01, leanRate: 0.02 }],
        end: [{ momentum: 0, lean: 0, leanRate: 0 }],
      },
    };
    const { ours, theirs } = solveBoth(problem);
    expectClose(ours, theirs, { rel: 1e-6 }); // measured 1.5e-10 at worst
  });
});

describe('the ellipse of tilt rate', () => {
  test('loose, the program without it has the same answer', () => {
    const { ours, theirs } = solveBoth(walkingPlan(60, 1));
    expectClose(ours, theirs, { rel: 1e-6 }); // measured 1.5e-10 at worst
  });

  test('binding, against facets added until none is passed by 1e-9', () => {
    const slow = { ...pairOfWheels, tiltRate: 1.1, tiltMin: -1.2, tiltMax: 1.2 };
    const free = solveBoth(walkingPlan(24, 2.6, { ...slow, tiltRate: 6 }));
    const { ours, theirs } = solveBoth(walkingPlan(24, 2.6, slow));
    expect(ours).toBeGreaterThan(1.01 * free.ours);
    expectClose(ours, theirs, { rel: 1e-6 }); // measured 1.5e-10 at worst
  });
});
