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
  swayingFeet,
  walkingPlan,
} from '../../tests/support/planCases';
import type { Row } from './row';

const median = (times: number[]): number => times.sort((a, b) => a - b)[times.length >> 1];

interface Contestant {
  readonly run: (i: number) => void;
  /** runs in each round */
  readonly often: number;
}

/**
 * Median time of one run of each contestant, in ms, after a warm-up that lets the compiler settle. They take
 * turns, so that whatever else the machine does falls on all alike.
 */
function race(contestants: readonly Contestant[], rounds: number, warmUp: number): number[] {
  for (const { run, often } of contestants) for (let i = 0; i < warmUp * often; i++) run(i);
  const times: number[][] = contestants.map(() => []);
  for (let round = 0; round < rounds; round++) {
    contestants.forEach(({ run, often }, c) => {
      for (let i = 0; i < often; i++) {
        const start = performance.now();
        run(round + i);
        times[c].push(performance.now() - start);
      }
    });
  }
  return times.map(median);
}

const coldOptions = { ...defaultPlanOptions, solver: { ...defaultPlanOptions.solver, warm: false } };

function mustPlan(problem: MomentumPlanProblem, options: typeof coldOptions, work = createPlanWork()): void {
  const attempt = attemptPlan(problem, options, work);
  if (attempt.kind !== 'planned') throw new Error(`${attempt.kind} where a plan exists`);
}

/** A whole plan: assembled, solved cold, checked for optimality and for every limit on the finer grid. */
function planCold(problem: MomentumPlanProblem, often: number): Contestant {
  const work = createPlanWork();
  return { run: () => mustPlan(problem, coldOptions, work), often };
}

/**
 * The very same program, solved here and by the general solver: the first plan of the table, whose ellipse
 * of tilt rate its other limits imply, so that every limit left is linear.
 */
function raceAgainstGeneral(general: GeneralSolver): number[] {
  const problem = walkingPlan(240, 3);
  const { layout, problem: program, solver } = openSlot(problem, 'plan', createPlanWork());
  assemblePlan(problem, layout, null, [1], program);
  if (program.sizes.coneRow.length > 0) throw new Error('the general solver takes linear limits only');
  const text = writeProgram(program, null);
  const solveHere = () => {
    if (solveStageProblem(program, coldOptions.solver, solver).kind !== 'solved')
      throw new Error('not solved');
  };
  const solveThere = () => {
    if (general.solve(text).Status !== 'Optimal') throw new Error('not solved');
  };
  for (let i = 0; i < 60; i++) solveHere();
  return race(
    [
      { run: solveHere, often: 21 },
      { run: solveThere, often: 1 },
    ],
    7,
    1,
  );
}

export async function run(): Promise<Row[]> {
  const general = await startGeneralSolver();
  const onFeet = [0, 0.25].map((phase) => ({
    array: pairOfWheels,
    support: swayingFeet(240, 2.8, phase),
    bodyRate: null,
  }));
  const onPoint = [2, 3].map((cycles) => ({
    array: pairOfWheels,
    support: leaningBody(240, 4, cycles),
    bodyRate: null,
  }));
  const tenCycles = { array: pairOfWheels, support: swayingFeet(2400, 3, 0, 10), bodyRate: null };
  const slow = { ...pairOfWheels, tiltRate: 1.1, tiltMin: -1.2, tiltMax: 1.2 };
  const [one, long] = race(
    [planCold(walkingPlan(240, 3), 10), planCold(cyclicPlan([tenCycles], 2400, 24), 1)],
    31,
    8,
  );
  const [binding] = race([planCold(walkingPlan(240, 2.6, slow), 1)], 101, 60);
  const [twoFirm] = race([planCold(cyclicPlan(onFeet, 240, 2.4), 1)], 101, 60);
  const [twoLean] = race([planCold(cyclicPlan(onPoint, 240, 2), 1)], 61, 40);
  const slider = [walkingPlan(240, 3), walkingPlan(240, 3.01)];
  const work = createPlanWork();
  const coldWork = createPlanWork();
  const [warm, coldTwin] = race(
    [
      { run: (i) => mustPlan(slider[i % 2], defaultPlanOptions, work), often: 1 },
      { run: (i) => mustPlan(slider[i % 2], coldOptions, coldWork), often: 1 },
    ],
    151,
    60,
  );
  const [ours, theirs] = raceAgainstGeneral(general);
  return [
    {
      name: 'plan, 240 nodes, one axis, cold, checked',
      value: one,
      unit: 'ms',
      target: 'at most 4',
      ok: one <= 4,
    },
    {
      name: 'the same with the ellipse of tilt rate binding',
      value: binding,
      unit: 'ms',
      target: 'at most 4',
      ok: binding <= 4,
    },
    { name: 'its program alone, solved here', value: ours, unit: 'ms' },
    { name: 'its program alone, solved by HiGHS', value: theirs, unit: 'ms' },
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
