import { expect, test } from 'vitest';
import { createPlanWork, defaultPlanOptions, openSlot } from '../../src/core/planning/momentumPlan';
import { assemblePlan } from '../../src/core/planning/momentumPlanAssembly';
import { solveStageProblem } from '../../src/core/planning/solver';
import { type GeneralSolver, solveFaceted, startGeneralSolver, writeProgram } from '../support/highsProgram';
import { drawPlan } from '../support/randomPlans';

const firstSeed = 500;
const programs = 40;

/** The general solver's verdict on the program, its cones faceted: an optimum, or its word for none. */
function askGeneral(general: GeneralSolver, program: Parameters<typeof solveFaceted>[1]): number | string {
  try {
    return solveFaceted(general, program, 1e-9).objective;
  } catch (error) {
    return String(error);
  }
}

test(`random programs, seeds ${firstSeed} on: the same optimum as HiGHS, the same verdict`, async () => {
  const general = await startGeneralSolver();
  let compared = 0;
  let worst = 0;
  let broken = 0;
  const disagreements: string[] = [];
  for (let seed = firstSeed; seed < firstSeed + programs; seed++) {
    const problem = drawPlan(seed);
    const slot = openSlot(problem, 'plan', createPlanWork());
    const tightening = problem.axes.map(() => 1);
    const constant = assemblePlan(problem, slot.layout, null, tightening, slot.problem);
    const outcome = solveStageProblem(slot.problem, defaultPlanOptions.solver, slot.solver);
    const theirs = askGeneral(general, slot.problem);
    if (outcome.kind === 'solved' && typeof theirs === 'number') {
      const off = Math.abs(outcome.objective - theirs) / Math.abs(theirs + constant);
      worst = Math.max(worst, off);
      compared += 1;
      if (!(off <= 1e-6)) disagreements.push(`seed ${seed}: ${outcome.objective} against ${theirs}`);
    } else if (outcome.kind === 'impossible') {
      // facets are wider than their cones, so only a program without cones must be infeasible there too
      const verdict =
        slot.problem.sizes.coneRow.length > 0 ? null : general.solve(writeProgram(slot.problem, null));
      if (verdict && verdict.Status === 'Optimal') disagreements.push(`seed ${seed}: impossible here only`);
    } else if (outcome.kind === 'solved' && String(theirs).includes('HiGHS error')) {
      // the general solver broke down on its own: no verdict to compare with
      broken += 1;
    } else {
      disagreements.push(`seed ${seed}: ${outcome.kind} here, ${theirs} there`);
    }
  }
  console.log(
    `${compared} optima compared, worst ${worst.toExponential(1)} of the objective; HiGHS broke down on ${broken}`,
  );
  expect(disagreements).toEqual([]);
  expect(compared).toBeGreaterThan(programs / 3);
  expect(broken).toBeLessThanOrEqual(programs / 8); // measured 3 of 40
});
