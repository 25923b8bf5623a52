/** The largest shove a rig survives, found by trying, beside what theory allows at most. */
import { createRollLoopWork, runRollLoop } from '../control';
import { extentOf, type FirmPlanSetting, largestAngularImpulse, pivotHeight } from '../planning';
import { AS_DRAWN, type Build } from './build';
import type { Switches } from './evaluation';
import { kernelRun, setUpLoop, suitsKernel } from './rollLoop';
import { judgeTrial, kernelFigures, type TrialFigures } from './trialRun';
import type { TrialSetup } from './trialSetup';

export interface ShoveQuestion {
  readonly switches: Switches;
  /** m above the ground. */
  readonly height: number;
  /** s, when it comes. */
  readonly at: number;
  /** s, length of each run. */
  readonly length: number;
  readonly side: 'left' | 'right';
  readonly seed: number;
  readonly build?: Build;
}

export interface LargestShove {
  /** N*s, between what held and what did not. */
  readonly held: number;
  readonly failed: number;
  readonly trials: number;
  /** N*s by the closed form, for a body that stands; undefined for one that rights itself. */
  readonly bound: number | undefined;
  /** What the bound is made of, SI. */
  readonly terms: BoundTerms | undefined;
}

export interface BoundTerms {
  /** kg*m^2 and N*m/rad about the line it tips about. */
  readonly inertia: number;
  readonly stiffness: number;
  /** N*m*s that the array can still give, and N*m it can give at most. */
  readonly momentum: number;
  readonly torque: number;
  /** rad of lean that weight brings back by itself: feet of some width. */
  readonly rest: number;
}

/** N*s, shoves past this are not looked for. */
const MOST = 1e5;
const SHARE = 0.002;

/**
 * Largest shove by bisection: doubled from a small one until the rig falls, then halved to 0.2 %.
 *
 * Survival need not fall steadily with size on a walking rig; the border found is the first one met in the doubling.
 * About 20 trials.
 */
export function findLargestShove(setup: TrialSetup, question: ShoveQuestion): LargestShove {
  const calm = judge(setup, { ...question, length: question.at }, 0);
  const bound = boundShove(setup, question, calm.finalMomentum);
  let trials = 1;
  const holds = (impulse: number): boolean => {
    trials += 1;
    return !judge(setup, question, impulse).hasFallen;
  };
  let held = 0;
  let failed = Math.max(1e-3, (bound?.impulse ?? 1) / 16);
  if (!holds(0)) return { held: 0, failed: 0, trials, bound: bound?.impulse, terms: bound?.terms };
  while (failed <= MOST && holds(failed)) {
    held = failed;
    failed *= 2;
  }
  while (failed - held > SHARE * failed && failed <= MOST) {
    const middle = 0.5 * (held + failed);
    if (holds(middle)) held = middle;
    else failed = middle;
  }
  return { held, failed, trials, bound: bound?.impulse, terms: bound?.terms };
}

function judge(setup: TrialSetup, question: ShoveQuestion, size: number): TrialFigures {
  const { setting, schedules, controller } = setup;
  const { switches, height, at, length, seed, build = AS_DRAWN } = question;
  const impulse = question.side === 'left' ? size : -size;
  if (suitsKernel(setting)) {
    const moment = -(height - pivotHeight(setting.compiled)) * impulse;
    const kernel = kernelRun(setting, schedules, switches, controller, build, [[at, moment]]);
    const start = { roll: 0, rollRate: 0, tilt: 0, estimateError: 0, duration: length, seed, run: 0 };
    const work = createRollLoopWork(kernel.model);
    return kernelFigures(
      kernel,
      runRollLoop(kernel.model, work, kernel.disturbance, start, undefined),
      length,
    );
  }
  return judgeTrial(setting, schedules, {
    switches,
    controller,
    length,
    build,
    sensing: 'real',
    seed,
    run: 0,
    surprises: [{ time: at, impulse, height }],
  });
}

/**
 * The most that a law can take of a standing body: P z = M (1 - exp(-a dH / M)) / a with a = sqrt(k / I), and for
 * feet of some width what lifts the weight over their edge, 2 I a sin(rest / 2), on top. M is momentum times the
 * speed its servo keeps; a gimbal that the gyroscopic load drives faster than that gives a little more. Undefined
 * for a body that rights itself.
 *
 * @param stored N*m*s of roll momentum in the array when the shove comes
 */
export function boundShove(
  { setting }: TrialSetup,
  question: Pick<ShoveQuestion, 'switches' | 'height' | 'side' | 'at'>,
  stored = 0,
): { readonly impulse: number; readonly terms: BoundTerms } | undefined {
  const outcome = setUpLoop(setting);
  const array = setting.axes.find(({ axis }) => axis === 'roll')?.array;
  if (outcome.kind === 'none' || !outcome.loop.topples || !array) return undefined;
  const { inertia, stiffness, rest } = aboutEdge(setting, question, outcome.loop.plant);
  const isGimballed = array.kind === 'gimballed';
  // A shove to the left leans the body to the left, which is negative roll: tilts below zero answer it.
  const room =
    question.side === 'left'
      ? stored - array.momentum * (isGimballed ? Math.sin(array.tiltMin) : -1)
      : array.momentum * (isGimballed ? Math.sin(array.tiltMax) : 1) - stored;
  const momentum = question.switches.isArrayOn ? Math.max(0, room) : 0;
  const torque = isGimballed ? Math.min(array.torque, array.momentum * array.tiltRate) : array.torque;
  const a = Math.sqrt(stiffness / inertia);
  const byArray = momentum > 0 ? largestAngularImpulse({ inertia, stiffness }, momentum, torque) : 0;
  const arm = Math.abs(question.height - pivotHeight(setting.compiled));
  const impulse = (byArray + 2 * inertia * a * Math.sin(rest / 2)) / arm;
  return { impulse, terms: { inertia, stiffness, momentum, torque, rest } };
}

/** Inertia and toppling stiffness about the line a body is shoved over, and the lean its weight brings back from. */
function aboutEdge(
  setting: TrialSetup['setting'],
  question: Pick<ShoveQuestion, 'side' | 'at'>,
  { inertia, stiffness }: { readonly inertia: number; readonly stiffness: number },
): { readonly inertia: number; readonly stiffness: number; readonly rest: number } {
  if (setting.kind !== 'firm') return { inertia, stiffness, rest: 0 };
  const { whole } = setting.compiled;
  const rest = restLean(setting, question);
  const across = whole.com[2] * Math.tan(rest);
  return {
    inertia: inertia + whole.mass * across * across,
    stiffness: stiffness / Math.cos(rest),
    rest,
  };
}

/** rad of lean after which feet would topple over the edge they are shoved towards; nothing for other footings. */
function restLean(setting: FirmPlanSetting, { side, at }: Pick<ShoveQuestion, 'side' | 'at'>): number {
  const { demand, course, problem } = setting;
  const place = Math.floor(at / problem.step + 1e-9);
  const node = course.isCyclic ? place % demand.nodes : Math.min(demand.nodes - 1, place);
  const polygon = demand.support[node];
  const extent = polygon ? extentOf(polygon, 1) : undefined;
  if (!extent) return 0;
  const y = demand.centreOfMass[3 * node + 1] as number;
  const z = demand.centreOfMass[3 * node + 2] as number;
  const edge = side === 'left' ? extent[1] - y : y - extent[0];
  return Math.max(0, Math.atan2(edge, z));
}
