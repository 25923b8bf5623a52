/** The largest shove a rig survives, found by trying, beside what theory allows at most. */
import { createRollLoopWork, runRollLoop } from '../control';
import { type AxisArray, extentOf, largestAngularImpulse, pivotHeight } from '../planning';
import { AS_DRAWN, type Build } from './build';
import type { Switches } from './evaluation';
import { kernelRun, setUpLoop, suitsKernel } from './rollLoop';
import { judgeTrial, kernelFigures } from './trialRun';
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
  /** N*s that no law could do better than; undefined for a body that rights itself. */
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
  const bound = boundShove(setup, question);
  let trials = 0;
  const holds = (impulse: number): boolean => {
    trials += 1;
    return survives(setup, question, impulse);
  };
  let held = 0;
  let failed = Math.max(1e-3, (bound?.impulse ?? 1) / 16);
  if (!holds(0)) return { held: 0, failed: 0, trials, bound: bound?.impulse, terms: bound?.terms };
  while (holds(failed)) {
    held = failed;
    failed *= 2;
    if (failed > MOST) break;
  }
  while (failed - held > SHARE * failed && failed <= MOST) {
    const middle = 0.5 * (held + failed);
    if (holds(middle)) held = middle;
    else failed = middle;
  }
  return { held, failed, trials, bound: bound?.impulse, terms: bound?.terms };
}

function survives(setup: TrialSetup, question: ShoveQuestion, size: number): boolean {
  const { setting, schedules, controller } = setup;
  const { switches, height, at, length, seed, build = AS_DRAWN } = question;
  const impulse = question.side === 'left' ? size : -size;
  if (suitsKernel(setting)) {
    const moment = -(height - pivotHeight(setting.compiled)) * impulse;
    const kernel = kernelRun(setting, schedules, switches, controller, build, [[at, moment]]);
    const start = { roll: 0, rollRate: 0, tilt: 0, estimateError: 0, duration: length, seed, run: 0 };
    const outcome = runRollLoop(
      kernel.model,
      createRollLoopWork(kernel.model),
      kernel.disturbance,
      start,
      undefined,
    );
    return !kernelFigures(outcome, length).hasFallen;
  }
  return !judgeTrial(setting, schedules, {
    switches,
    controller,
    length,
    build,
    sensing: 'real',
    seed,
    run: 0,
    surprises: [{ time: at, impulse, height }],
  }).hasFallen;
}

/**
 * The most any law can take from rest: P z = M (1 - exp(-a dH / M)) / a, a = sqrt(k / I), and for feet of some width
 * I a (lean that weight brings back) on top. Undefined for a body that rights itself.
 */
export function boundShove(
  { setting }: TrialSetup,
  question: Pick<ShoveQuestion, 'switches' | 'height' | 'side' | 'at'>,
): { readonly impulse: number; readonly terms: BoundTerms } | undefined {
  const outcome = setUpLoop(setting);
  if (outcome.kind === 'none' || !outcome.loop.topples) return undefined;
  const { inertia, stiffness } = outcome.loop.plant;
  const array = setting.axes[0]?.array as AxisArray;
  const isOn = question.switches.isArrayOn;
  const isGimballed = array.kind === 'gimballed';
  // A shove to the left rolls the body to the right about a low line: negative roll, which tilts below zero answer.
  const reach = question.side === 'left' ? array.tiltMin : array.tiltMax;
  const momentum = isOn ? (isGimballed ? array.momentum * Math.abs(Math.sin(reach)) : array.momentum) : 0;
  const torque = isGimballed ? Math.min(array.torque, array.momentum * array.tiltRate) : array.torque;
  const a = Math.sqrt(stiffness / inertia);
  const arm = question.height - pivotHeight(setting.compiled);
  const rest = restLean(setting, question);
  const array0 = momentum > 0 ? largestAngularImpulse({ inertia, stiffness }, momentum, torque) : 0;
  const impulse = (array0 + inertia * a * rest) / Math.abs(arm);
  return { impulse, terms: { inertia, stiffness, momentum, torque, rest } };
}

/** rad of lean after which feet would topple over the edge they are shoved towards; nothing for other footings. */
function restLean(setting: TrialSetup['setting'], { side, at }: Pick<ShoveQuestion, 'side' | 'at'>): number {
  if (setting.kind !== 'firm') return 0;
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
