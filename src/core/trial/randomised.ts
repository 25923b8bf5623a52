/** Many trials, each of a rig that differs from the drawing within its tolerances. */
import { createRollLoopWork, runRollLoop } from '../control';
import { pivotHeight } from '../planning';
import type { Switches } from './evaluation';
import { kernelRun, suitsKernel } from './rollLoop';
import {
  drawBuild,
  type ShoveDraw,
  TOLERANCE_NAMES,
  type ToleranceName,
  type Tolerances,
} from './tolerances';
import { judgeTrial, kernelFigures, type TrialFigures } from './trialRun';
import type { TrialSetup } from './trialSetup';

export interface ManyRequest {
  readonly seed: number;
  readonly runs: number;
  /** s */
  readonly length: number;
  readonly tolerances: Tolerances;
  /** A shove out of the blue in every run; undefined for none. */
  readonly shove: ShoveDraw | undefined;
  readonly switches: Switches;
}

/** One run: what was drawn and what came of it. Plain numbers, so that it survives a file unchanged. */
export interface RunRow {
  readonly run: number;
  readonly drawn: Readonly<Record<ToleranceName, number>>;
  /** N*s to the left, and when (s). */
  readonly shove: number;
  readonly shoveAt: number;
  readonly figures: TrialFigures;
}

/**
 * One run of many. The numbers depend on the seed and the run's place alone.
 *
 * A leaning rig with servos goes through the fast kernel, anything else through the star.
 */
export function runOne(setup: TrialSetup, request: ManyRequest, run: number): RunRow {
  const { setting, schedules, controller } = setup;
  const { seed, length, switches } = request;
  const draw = drawBuild(request.tolerances, request.shove, seed, run);
  const { build, shove, shoveAt } = draw;
  const height = request.shove?.height ?? 0;
  let figures: TrialFigures;
  if (suitsKernel(setting)) {
    const moment = -(height - pivotHeight(setting.compiled)) * shove;
    const surprises = shove === 0 ? [] : [[shoveAt, moment] as const];
    const kernel = kernelRun(setting, schedules, switches, controller, build, surprises);
    const start = { roll: 0, rollRate: 0, tilt: 0, estimateError: 0, duration: length, seed, run };
    figures = kernelFigures(
      kernel,
      runRollLoop(kernel.model, createRollLoopWork(kernel.model), kernel.disturbance, start, undefined),
      length,
    );
  } else {
    figures = judgeTrial(setting, schedules, {
      switches,
      controller,
      length,
      build,
      sensing: 'real',
      seed,
      run,
      surprises: shove === 0 ? [] : [{ time: shoveAt, impulse: shove, height }],
    });
  }
  const drawn = Object.fromEntries(TOLERANCE_NAMES.map((name) => [name, build[name]])) as Record<
    ToleranceName,
    number
  >;
  return { run, drawn, shove, shoveAt, figures };
}

/** Runs k, k + n, k + 2 n ... below the count: shard k of n. */
export function* runShard(
  setup: TrialSetup,
  request: ManyRequest,
  shard: number,
  shards: number,
): Generator<RunRow> {
  for (let run = shard; run < request.runs; run += shards) yield runOne(setup, request, run);
}
