import {
  attemptPlan,
  createPlanWork,
  defaultPlanOptions,
  openSlot,
} from '../../src/core/planning/momentumPlan';
import { assemblePlan } from '../../src/core/planning/momentumPlanAssembly';
import type { MomentumPlanProblem } from '../../src/core/planning/momentumPlanProblem';
import { solveStageProblem } from '../../src/core/planning/solver';
import { type GeneralSolver, startGeneralSolver, writeProgram } from '../../tests/support/highsProgram';
import {
  cyclicPlan,
  leaningBody,
  pairOfWheels,
  reactionWheel,
  swayingFeet,
  walkingPlan,
} from '../../tests/support/planCases';
import type { Row } from './row';

const median = (times: number[]): number => times.sort((a, b) => a - b)[times.length >> 1];

/** Median time of one run in ms, after a warm-up that lets the compiler settle. */
function measure(run: (i: number) => void, runs: number, warmUp: number): number {
  for (let i = 0; i < warmUp; i++) run(i);
  const times: number[] = [];
  for (let i = 0; i < runs; i++) {
    const start = performance.now();
    run(i);
    times.push(performance.now() - start);
  }
  return median(times);
}

const coldOptions = { ...defaultPlanOptions, solver: { ...defaultPlanOptions.solver, warm: false } };

function mustPlan(problem: MomentumPlanProblem, options: typeof coldOptions, work = createPlanWork()): void {
  const attempt = attemptPlan(problem, options, work);
  if (attempt.kind !== 'planned') throw new Error(`${attempt.kind} where a plan exists`);
}

/** Whole plans: assembled, solved cold, checked for optimality and for every limit on the finer grid. */
function timePlan(problem: MomentumPlanProblem, runs: number): number {
  const work = createPlanWork();
  return measure(() => mustPlan(problem, coldOptions, work), runs, Math.min(runs, 60));
}

/** The very same linear-limit program, solved here and by the general solver. */
function timeAgainstGeneral(general: GeneralSolver): { ours: number; theirs: number } {
  const problem = walkingPlan(240, 2, reactionWheel);
  const { layout, problem: program, solver } = openSlot(problem, 'plan', createPlanWork());
  assemblePlan(problem, layout, null, [1], program);
  const text = writeProgram(program, null);
  const ours = measure(
    () => {
      if (solveStageProblem(program, coldOptions.solver, solver).kind !== 'solved')
        throw new Error('not solved');
    },
    101,
    60,
  );
  const theirs = measure(
    () => {
      if (general.solve(text).Status !== 'Optimal') throw new Error('not solved');
    },
    5,
    1,
  );
  return { ours, theirs };
}

export async function run(): Promise<Row[]> {
  const general = await startGeneralSolver();
  const one = timePlan(walkingPlan(240, 3), 101);
  const twoFirm = timePlan(
    cyclicPlan(
      [0, 0.25].map((phase) => ({
        array: pairOfWheels,
        support: swayingFeet(240, 2.8, phase),
        bodyRate: null,
      })),
      240,
      2.4,
    ),
    61,
  );
  const twoLean = timePlan(
    cyclicPlan(
      [2, 3].map((cycles) => ({ array: pairOfWheels, support: leaningBody(240, 4, cycles), bodyRate: null })),
      240,
      2,
    ),
    41,
  );
  const tenCycles = { array: pairOfWheels, support: swayingFeet(2400, 3, 0, 10), bodyRate: null };
  const long = timePlan(cyclicPlan([tenCycles], 2400, 24), 21);
  const work = createPlanWork();
  const warm = measure(
    (i) => mustPlan(walkingPlan(240, 3 + 0.01 * (i % 2)), defaultPlanOptions, work),
    101,
    60,
  );
  const coldTwin = measure((i) => mustPlan(walkingPlan(240, 3 + 0.01 * (i % 2)), coldOptions, work), 101, 60);
  const { ours, theirs } = timeAgainstGeneral(general);
  return [
    {
      name: 'plan, 240 nodes, one axis, cold, checked',
      value: one,
      unit: 'ms',
      target: 'at most 4',
      ok: one <= 4,
    },
    { name: 'the same program, linear limits, here', value: ours, unit: 'ms' },
    { name: 'the same program, linear limits, HiGHS', value: theirs, unit: 'ms' },
    {
      name: 'times faster than HiGHS',
      value: theirs / ours,
      unit: '',
      target: 'at least 60',
      ok: theirs / ours >= 60,
    },
    {
      name: 'plan, 240 nodes, two pairs on firm feet, two axes',
      value: twoFirm,
      unit: 'ms',
      target: 'at most 15',
      ok: twoFirm <= 15,
    },
    {
      name: 'plan, 240 nodes, two pairs on a point, two axes',
      value: twoLean,
      unit: 'ms',
      target: 'at most 15',
      ok: twoLean <= 15,
    },
    {
      name: 'plan of 2400 nodes over plan of 240',
      value: long / one,
      unit: '',
      target: 'at most 11',
      ok: long / one <= 11,
    },
    {
      name: 'replanned warm after a small change, over cold',
      value: warm / coldTwin,
      unit: '',
      target: 'at most 0.5',
      ok: warm / coldTwin <= 0.5,
    },
  ];
}
