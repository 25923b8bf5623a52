/**
 * The star against general engines on one rig at equal error, cost against the number of gyros, and garbage. Error is
 * the largest of roll and tilts after 2 s against a converged run (adaptive eighth order at 1e-13). An engine that does
 * not reach it at the finest step tried gives a lower bound: what that step costs, and the error it still has.
 */
import { PerformanceObserver } from 'node:perf_hooks';
import { simulateExactly, startState } from '../../src/core/physics/freeMotion';
import {
  createRk4Work,
  type Derivative,
  integrateAdaptively,
  stepRk4,
} from '../../src/core/physics/integrators';
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

/** The star by its adaptive method; here `steps` stands for digits: the tolerance is 1 / steps. */
const adaptiveStar: Engine = (n, time, steps) => {
  const model = compileStar(benchStar(n));
  const work = createStarWork(model);
  const effort = new Float64Array(model.effortSize);
  const state = startState(model, benchStart(n));
  const derivative: Derivative = (_time, x, out) => starDerivative(model, work, x, effort, out);
  const before = performance.now();
  integrateAdaptively(derivative, 0, time, state, { absolute: 1 / steps, relative: 1 / steps });
  const milliseconds = performance.now() - before;
  return { angles: Array.from(state.subarray(0, 1 + n)), milliseconds };
};

interface AtEqualError {
  readonly engine: Engine;
  readonly steps: number;
  readonly error: number;
  readonly reached: boolean;
}

/** Doubles the steps until the error is met, then finds the fewest between by halving the gap a few times. */
function atEqualError(engine: Engine, truth: readonly number[], first: number, most: number): AtEqualError {
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
  return { engine, steps, error, reached };
}

/**
 * Milliseconds of 2 s for the star and a peer, medians of alternating rounds. The star runs as often as fills about the
 * peer's time, so that both meet the same share of whatever else the machine does.
 */
function timeBeside(star: AtEqualError, peer: AtEqualError, rounds: number): { star: number; peer: number } {
  const times = { star: [] as number[], peer: [] as number[] };
  for (let round = 0; round < rounds; round++) {
    const theirs = peer.engine(gyros, seconds, peer.steps).milliseconds;
    times.peer.push(theirs);
    let total = 0;
    let runs = 0;
    while (total < Math.min(theirs, 50)) {
      total += star.engine(gyros, seconds, star.steps).milliseconds;
      runs++;
    }
    times.star.push(total / runs);
  }
  return { star: median(times.star), peer: median(times.peer) };
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

/**
 * Microseconds of one RK4 step for each number of gyros: the least of interleaved rounds, since whatever else the
 * machine does can only add. Steps of a microsecond, so that every count turns the same angles: sines of larger ones
 * take longer.
 */
function stepCosts(counts: readonly number[]): number[] {
  const rounds = counts.map(() => [] as number[]);
  for (let round = 0; round < 25; round++) {
    counts.forEach((n, k) => {
      rounds[k]!.push((starEngine(n, 0.002, 2000).milliseconds * 1000) / 2000);
    });
  }
  return rounds.map((times) => Math.min(...times));
}

export async function run(): Promise<Row[]> {
  const exact = simulateExactly(benchStar(gyros), benchStart(gyros), seconds, 1, 1e-13).last;
  const truth = Array.from(exact.subarray(0, 1 + gyros));
  const mujoco = await openMujocoEngine();
  const rapier = await openRapierEngine();
  const cannon = openCannonEngine();
  for (let k = 0; k < 50; k++) {
    starEngine(gyros, seconds, 2000);
    adaptiveStar(gyros, seconds, 1000);
  }
  const rk4 = atEqualError(starEngine, truth, 50, 100_000);
  const star = atEqualError(adaptiveStar, truth, 125, 1e12);
  const mujocoAt = atEqualError(mujoco, truth, 50, 50_000);
  const peers = [
    { name: 'rapier', at: atEqualError(rapier, truth, 2000, 64_000) },
    { name: 'plain cannon-es', at: atEqualError(cannon, truth, 2000, 64_000) },
  ];
  const rows: Row[] = [];
  const errorOf = (at: AtEqualError): string => at.error.toExponential(1);
  const add = (name: string, value: number, unit: string): number => rows.push({ name, value, unit });
  const addRatio = (name: string, ratio: number, asked: number): number =>
    rows.push({
      name,
      value: ratio,
      unit: 'times',
      target: `at least ${asked} at 1e-4 rad`,
      ok: ratio >= asked,
    });
  const adaptive = timeBeside(star, mujocoAt, 41);
  const fixed = timeBeside(rk4, mujocoAt, 41);
  add(`star adaptive: 2 s at error ${errorOf(star)} rad`, adaptive.star, 'ms');
  add(`star RK4: 2 s at error ${errorOf(rk4)} rad, ${rk4.steps} steps`, fixed.star, 'ms');
  add(`mujoco-js RK4: 2 s at error ${errorOf(mujocoAt)} rad, ${mujocoAt.steps} steps`, adaptive.peer, 'ms');
  addRatio('star adaptive over mujoco-js RK4, equal error', adaptive.peer / adaptive.star, 10);
  add('star RK4 over mujoco-js RK4, equal error and step', fixed.peer / fixed.star, 'times');
  for (const { name, at } of peers) {
    const times = timeBeside(star, at, 1);
    const reached = at.reached ? '' : 'NOT reached, ';
    add(`${name}: 2 s, ${reached}error ${errorOf(at)} rad, ${at.steps} steps`, times.peer, 'ms');
    addRatio(`star adaptive over ${name}${at.reached ? '' : ', at least'}`, times.peer / times.star, 50);
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
