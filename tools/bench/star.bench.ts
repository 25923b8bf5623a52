/**
 * The star against general engines on one rig at equal error, cost against the number of gyros, and garbage. Error is
 * the largest of roll and tilts after 2 s against a converged run (adaptive eighth order at 1e-13). An engine that does
 * not reach it at the finest step tried gives a lower bound: what that step costs, and the error it still has.
 */
import { PerformanceObserver } from 'node:perf_hooks';
import { simulateExactly, startState } from '../../src/core/physics/freeMotion';
import { createRk4Work, type Derivative, stepRk4 } from '../../src/core/physics/integrators';
import { starDerivative } from '../../src/core/physics/starDynamics';
import { compileStar } from '../../src/core/physics/starModel';
import { createStarWork } from '../../src/core/physics/starWork';
import type { Row } from './row';
import { type Engine, openCannonEngine, openMujocoEngine, openRapierEngine } from './starPeers';
import { benchStar, benchStart } from './starRig';

const seconds = 2;
const aim = 1e-4;
const gyros = 2;

const median = (values: number[]): number => [...values].sort((a, b) => a - b)[values.length >> 1]!;

/** The star in steps of RK4, as an engine like the others. */
const starEngine: Engine = (n, time, steps) => {
  const model = compileStar(benchStar(n));
  const work = createStarWork(model);
  const effort = new Float64Array(model.effortSize);
  const state = startState(model, benchStart(n));
  const rk4 = createRk4Work(model.stateSize);
  const derivative: Derivative = (_time, x, out) => starDerivative(model, work, x, effort, out);
  const step = time / steps;
  const before = performance.now();
  for (let k = 0; k < steps; k++) stepRk4(derivative, 0, state, step, rk4);
  const milliseconds = performance.now() - before;
  return { angles: Array.from(state.subarray(0, 1 + n)), milliseconds };
};

interface AtEqualError {
  readonly steps: number;
  readonly error: number;
  readonly milliseconds: number;
  readonly reached: boolean;
}

/** Doubles the steps until the error is met, then finds the fewest between by halving the gap a few times. */
function atEqualError(
  engine: Engine,
  truth: readonly number[],
  first: number,
  most: number,
  repeats: number,
): AtEqualError {
  const errorAt = (steps: number): number => {
    const { angles } = engine(gyros, seconds, steps);
    const error = Math.max(...angles.map((a, k) => Math.abs(a - truth[k]!)));
    return Number.isNaN(error) ? Number.POSITIVE_INFINITY : error;
  };
  let steps = first;
  let error = errorAt(steps);
  let below = 0;
  while (error > aim && steps * 2 <= most) {
    below = steps;
    steps *= 2;
    error = errorAt(steps);
  }
  const reached = error <= aim;
  for (let k = 0; reached && k < 4 && below > 0; k++) {
    const middle = Math.round((below + steps) / 2);
    const there = errorAt(middle);
    if (there <= aim) {
      steps = middle;
      error = there;
    } else below = middle;
  }
  const times = Array.from({ length: repeats }, () => engine(gyros, seconds, steps).milliseconds);
  return { steps, error, milliseconds: median(times), reached };
}

/** Collections of garbage during `count` derivatives and steps of a warmed star. */
async function countCollections(count: number): Promise<number> {
  const model = compileStar(benchStar(4));
  const work = createStarWork(model);
  const effort = new Float64Array(model.effortSize);
  const state = startState(model, benchStart(4));
  const rk4 = createRk4Work(model.stateSize);
  const derivative: Derivative = (_time, x, out) => starDerivative(model, work, x, effort, out);
  const march = (steps: number): void => {
    for (let k = 0; k < steps; k++) stepRk4(derivative, 0, state, 1e-4, rk4);
  };
  march(20_000);
  if (typeof globalThis.gc !== 'function') throw new Error('run with --expose-gc');
  globalThis.gc();
  const starts: number[] = [];
  const observer = new PerformanceObserver((entries) => {
    for (const entry of entries.getEntries()) starts.push(entry.startTime);
  });
  observer.observe({ entryTypes: ['gc'] });
  await new Promise((resolve) => setTimeout(resolve, 50));
  const from = performance.now();
  march(count);
  const to = performance.now();
  await new Promise((resolve) => setTimeout(resolve, 50));
  observer.disconnect();
  return starts.filter((at) => at >= from && at <= to).length;
}

/** Microseconds of one RK4 step for each number of gyros, medians of interleaved rounds. */
function stepCosts(counts: readonly number[]): number[] {
  const rounds = counts.map(() => [] as number[]);
  for (let round = 0; round < 9; round++) {
    counts.forEach((n, k) => {
      rounds[k]!.push((starEngine(n, 0.2, 4000).milliseconds * 1000) / 4000);
    });
  }
  return rounds.map((times) => median(times.slice(2)));
}

export async function run(): Promise<Row[]> {
  const exact = simulateExactly(benchStar(gyros), benchStart(gyros), seconds, 1, 1e-13).last;
  const truth = Array.from(exact.subarray(0, 1 + gyros));
  const mujoco = await openMujocoEngine();
  const rapier = await openRapierEngine();
  const cannon = openCannonEngine();
  starEngine(gyros, seconds, 20_000);
  const star = atEqualError(starEngine, truth, 50, 100_000, 41);
  const peers = [
    { name: 'mujoco-js RK4', at: atEqualError(mujoco, truth, 50, 50_000, 11), asked: 10 },
    { name: 'rapier', at: atEqualError(rapier, truth, 2000, 64_000, 1), asked: 50 },
    { name: 'plain cannon-es', at: atEqualError(cannon, truth, 2000, 64_000, 1), asked: 50 },
  ];
  const rows: Row[] = [
    {
      name: `star: 2 s at error ${star.error.toExponential(1)} rad, ${star.steps} steps`,
      value: star.milliseconds,
      unit: 'ms',
    },
  ];
  for (const { name, at, asked } of peers) {
    const state = at.reached ? 'error' : 'NOT reached, error';
    rows.push({
      name: `${name}: 2 s, ${state} ${at.error.toExponential(1)} rad, ${at.steps} steps`,
      value: at.milliseconds,
      unit: 'ms',
    });
    const ratio = at.milliseconds / star.milliseconds;
    rows.push({
      name: `star over ${name}${at.reached ? '' : ', at least'}`,
      value: ratio,
      unit: 'times',
      target: `at least ${asked} at 1e-4 rad after 2 s`,
      ok: ratio >= asked,
    });
  }
  const counts = [1, 2, 4, 8, 16];
  const costs = stepCosts(counts);
  const slope = (costs[4]! - costs[0]!) / 15;
  counts.forEach((n, k) => {
    rows.push({ name: `star RK4 step, ${n} gyros`, value: costs[k]!, unit: 'us' });
  });
  const bend = Math.max(
    ...counts.map((n, k) => Math.abs(costs[k]! - costs[0]! - slope * (n - 1)) / costs[k]!),
  );
  rows.push({
    name: 'departure of the step cost from a line, 1 to 16 gyros',
    value: 100 * bend,
    unit: '%',
    target: 'linear: at most 20 %',
    ok: bend <= 0.2,
  });
  const collections = await countCollections(400_000);
  rows.push({
    name: 'collections of garbage in 400 000 star steps',
    value: collections,
    unit: '',
    target: 'none',
    ok: collections === 0,
  });
  return rows;
}
