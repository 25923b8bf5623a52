import { describe, expect, test } from 'vitest';
import { createPlanWork, openSlot } from '../../../src/core/planning/momentumPlan';
import { assemblePlan } from '../../../src/core/planning/momentumPlanAssembly';
import type { MomentumPlanProblem } from '../../../src/core/planning/momentumPlanProblem';
import {
  checkCertificate,
  checkOptimality,
  createSolverWork,
  createStageProblem,
  createStageSizes,
  defaultSolverOptions,
  isOptimal,
  type StageProblem,
  solveStageProblem,
} from '../../../src/core/planning/solver';
import { expectClose } from '../../support/closeTo';
import { startGeneralSolver, writeProgram } from '../../support/highsProgram';
import {
  cyclicPlan,
  leaningBody,
  pairOfWheels,
  reactionWheel,
  swayingFeet,
  walkingPlan,
} from '../../support/planCases';

function programOf(problem: MomentumPlanProblem): StageProblem {
  const slot = openSlot(problem, 'plan', createPlanWork());
  assemblePlan(
    problem,
    slot.layout,
    null,
    problem.axes.map(() => 1),
    slot.problem,
  );
  return slot.problem;
}

function solveOrThrow(
  program: StageProblem,
  work = createSolverWork(program.sizes),
  options = defaultSolverOptions,
) {
  const outcome = solveStageProblem(program, options, work);
  if (outcome.kind !== 'solved') throw new Error(outcome.kind);
  return outcome;
}

/** Widely tilting, slowly turning gimbals: the ellipse binds. */
const slowPair = { ...pairOfWheels, tiltRate: 1.1, tiltMin: -1.2, tiltMax: 1.2 };

describe('the check of optimality', () => {
  const program = programOf(walkingPlan(24, 2.6, slowPair));
  const isStillOptimal = (change: (part: Record<string, Float64Array>) => void): boolean => {
    const { point, objective } = solveOrThrow(program);
    const copy = {
      z: point.z.slice(),
      dynamicsDual: point.dynamicsDual.slice(),
      border: point.border.slice(),
      slack: point.slack.slice(),
      dual: point.dual.slice(),
    };
    change(copy);
    const { tolerance, gapTolerance } = defaultSolverOptions;
    return isOptimal(checkOptimality(program, copy, objective), tolerance, gapTolerance);
  };

  test('says yes to the answer itself', () => {
    expect(isStillOptimal(() => {})).toBe(true);
  });

  test.each(['z', 'dynamicsDual', 'border', 'dual'])('says no when %s is moved by 1e-6', (part) => {
    const { length } = solveOrThrow(program).point[part as 'z'];
    for (let i = 0; i < Math.min(length, 12); i++) {
      const at = Math.floor((i * length) / Math.min(length, 12));
      expect(
        isStillOptimal((copy) => {
          copy[part][at] += 1e-6;
        }),
      ).toBe(false);
    }
  });

  test.each(['z', 'dynamicsDual', 'border', 'dual'])('says no to NaN in %s', (part) => {
    expect(
      isStillOptimal((copy) => {
        copy[part][0] = Number.NaN;
      }),
    ).toBe(false);
  });

  test('does not read the slack', () => {
    expect(isStillOptimal((copy) => copy.slack.fill(Number.NaN))).toBe(true);
  });
});

describe('a proof that there is no plan', () => {
  const program = programOf(walkingPlan(24, 5, reactionWheel));
  const outcome = solveStageProblem(program, defaultSolverOptions, createSolverWork(program.sizes));
  if (outcome.kind !== 'impossible') throw new Error(outcome.kind);
  const { dynamicsDual, boundaryDual, dual } = outcome.certificate;
  const finding = (d: Float64Array, radius = defaultSolverOptions.radius) =>
    checkCertificate(program, dynamicsDual, boundaryDual, d, radius);

  test('holds, and the general solver agrees', async () => {
    expect(finding(dual).holds).toBe(true);
    const general = await startGeneralSolver();
    expect(general.solve(writeProgram(program, null)).Status).toBe('Infeasible');
  });

  test('is void with a multiplier outside the cone, with the wrong sign, with NaN, or with too much left over', () => {
    const outside = dual.slice();
    outside[0] = -1e-9;
    expect(finding(outside).holds).toBe(false);
    expect(finding(dual.map((v) => -v)).holds).toBe(false);
    expect(finding(new Float64Array(dual.length)).holds).toBe(false);
    expect(finding(dual.map((v, i) => (i === 3 ? Number.NaN : v))).holds).toBe(false);
    const largest = dual.indexOf(Math.max(...dual));
    expect(finding(dual.map((v, i) => (i === largest ? 0.9 * v : v))).holds).toBe(false);
  });

  test('does not hold for a program that has a plan', () => {
    const other = programOf(walkingPlan(24, 1, reactionWheel));
    expect(checkCertificate(other, dynamicsDual, boundaryDual, dual, 1).holds).toBe(false);
  });
});

describe('the solver', () => {
  test('gives the same answer three times over from one work space, NaN left in its scratch', () => {
    const program = programOf(walkingPlan(24, 2.6, slowPair));
    const work = createSolverWork(program.sizes);
    const first = solveOrThrow(program, work).point.z.slice();
    for (let i = 0; i < 2; i++) {
      for (const part of [
        work.gradient,
        work.right,
        work.rowRight,
        work.stepZ,
        work.stepDual,
        work.correction,
      ]) {
        part.fill(Number.NaN);
      }
      // the last node has no control: its step is never written and stays nothing
      work.stepZ.fill(0);
      work.correction.fill(Number.NaN);
      expect(Array.from(solveOrThrow(program, work).point.z)).toEqual(Array.from(first));
    }
  });

  test('comes to the same optimum warm as cold, in fewer steps', () => {
    const work = createPlanWork();
    const slot = openSlot(walkingPlan(60, 2.6, slowPair), 'plan', work);
    const solve = (amplitude: number, warm: boolean) => {
      assemblePlan(walkingPlan(60, amplitude, slowPair), slot.layout, null, [1], slot.problem);
      return solveOrThrow(slot.problem, slot.solver, { ...defaultSolverOptions, warm });
    };
    solve(2.6, false);
    const warm = solve(2.61, true);
    const cold = solve(2.61, false);
    expectClose(warm.objective, cold.objective, { rel: 1e-9 }); // measured 1e-11
    expect(warm.iterations).toBeLessThan(cold.iterations);
  });

  test('gives up with its residuals rather than go on', () => {
    const program = programOf(walkingPlan(24, 2.6, slowPair));
    const outcome = solveStageProblem(
      program,
      { ...defaultSolverOptions, maxIterations: 2 },
      createSolverWork(program.sizes),
    );
    expect(outcome.kind).toBe('gave-up');
    expect(outcome.iterations).toBeLessThanOrEqual(6); // three runs of two
    if (outcome.kind === 'gave-up') expect(outcome.residuals.complementarity).toBeGreaterThan(1e-6);
  });

  test('refuses a work space made for other sizes', () => {
    const program = programOf(walkingPlan(24, 1));
    const other = createSolverWork(programOf(walkingPlan(25, 1)).sizes);
    expect(() => solveStageProblem(program, defaultSolverOptions, other)).toThrow('other sizes');
  });

  test.each([2, 3, 4, 6])('projects on a ball through a cone of dimension %i', (dim) => {
    // minimise |x - a|^2 with |x| <= 1 over the first node's states; the answer is a / |a|
    const states = dim - 1;
    const sizes = createStageSizes({
      stages: 1,
      states,
      controls: 1,
      boundaryRows: 0,
      shared: 0,
      linearRows: [0, 0],
      cones: [[dim], []],
    });
    const program = createStageProblem(sizes);
    const a = Float64Array.from({ length: states }, (_, i) => 1 + i);
    program.hessian[0] = 1;
    for (let i = 0; i < states; i++) {
      program.hessian[(1 + i) * sizes.width + 1 + i] = 2;
      program.gradient[1 + i] = -2 * a[i];
      program.rows[(1 + i) * sizes.width + 1 + i] = -1;
      program.dynamics[i * sizes.width + 1 + i] = 1;
    }
    program.bound[0] = 1;
    const { point } = solveOrThrow(program);
    const size = Math.sqrt(a.reduce((sum, v) => sum + v * v, 0));
    const expected = size > 1 ? a.map((v) => v / size) : a;
    // a of length one touches the ball without pressing on it: the worst case, good to the root of the gap
    expectClose(point.z.slice(1, sizes.width), expected, { abs: dim === 2 ? 1e-4 : 1e-9 }); // measured 2e-5, 1e-10
  });

  test('an uncoupled pair of axes has the sum of the two optima', () => {
    const lean = { array: pairOfWheels, support: leaningBody(40, 3, 2), bodyRate: null };
    const firm = { array: slowPair, support: swayingFeet(40, 2.4), bodyRate: null };
    const both = solveOrThrow(programOf(cyclicPlan([lean, firm], 40, 2))).objective;
    const alone = [lean, firm].map((axis) => solveOrThrow(programOf(cyclicPlan([axis], 40, 2))).objective);
    expectClose(both, alone[0] + alone[1], { rel: 1e-9 }); // measured 1.1e-10
  });
});
