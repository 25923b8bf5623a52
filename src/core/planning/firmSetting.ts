/** The plan of feet flat on the ground: demand known beforehand, centre of pressure free inside the support. */
import type { CompiledRig } from '../physics';
import type { Disturbance } from '../rig';
import { computeDemand, firmAsk, groundOf, trunkOf } from './demand';
import { sampleDisturbances, spreadJumps } from './disturbances';
import { type CompiledGait, cycleTimes, runTimes, sampleGait } from './gait';
import { legMassCourse, legModelOf } from './legMass';
import { attemptPlan, createPlanWork, defaultPlanOptions } from './momentumPlan';
import {
  type AxisEnd,
  type AxisPlan,
  defaultPlanWeights,
  type MomentumPlanProblem,
} from './momentumPlanProblem';
import type { FirmPlanSetting, PlanGrain, PlannedArray } from './rigPlan';

/**
 * Time over which a shove is met by feet that stay flat, s. A blow of no length would ask for a moment without
 * bound; a push by hand lasts about this long (common practice).
 */
export const SHOVE_LASTS = 0.1;
/** Longest step of a standing run, s, and fewest instants of one gait cycle within a run. */
const LONGEST_STEP = 0.02;
const LEAST_PER_CYCLE = 40;

/** Sets up a plan on firm footing; see `setUpPlan`. */
export function setUpFirm(
  compiled: CompiledRig,
  gait: CompiledGait,
  array: PlannedArray,
  grain: PlanGrain,
): FirmPlanSetting {
  const { duration, sequence } = compiled.rig.jobs;
  if (gait.kind === 'stand') {
    const count = Math.min(grain.most, Math.max(grain.intervals, Math.ceil(duration / LONGEST_STEP)));
    return settingOver(compiled, gait, array, runTimes(duration, count), undefined);
  }
  const isRun = sequence.length > 0;
  const cycles = Math.max(1, Math.round(duration / gait.period));
  const perCycle = isRun
    ? Math.max(LEAST_PER_CYCLE, Math.min(grain.intervals, Math.floor(grain.most / cycles)))
    : grain.intervals;
  const cycle = settingOver(compiled, gait, array, cycleTimes(gait, perCycle), 'cyclic');
  if (!isRun) return cycle;
  const time = runTimes(cycles * gait.period, cycles * perCycle);
  return settingOver(compiled, gait, array, time, startOf(cycle.problem));
}

/** Momentum with which the undisturbed gait begins its cycle; none where it has no plan of its own. */
function startOf(cycle: MomentumPlanProblem): readonly AxisEnd[] {
  if (cycle.axes.length === 0) return [];
  const plan = attemptPlan(cycle, defaultPlanOptions, createPlanWork());
  return cycle.axes.map((_, a) => ({
    momentum: plan.kind === 'planned' ? plan.axes[a].momentum[0] : 0,
    lean: 0,
    leanRate: 0,
  }));
}

const rest: AxisEnd = { momentum: 0, lean: 0, leanRate: 0 };

/** A shove as the load that carries its impulse while it lasts, about the same middle. */
const spreadShove = (disturbance: Disturbance): Disturbance =>
  disturbance.kind === 'shove'
    ? {
        kind: 'sideLoad',
        time: disturbance.time,
        duration: SHOVE_LASTS,
        force: disturbance.impulse / SHOVE_LASTS,
        height: disturbance.height,
        direction: disturbance.direction,
      }
    : disturbance;

function settingOver(
  compiled: CompiledRig,
  gait: CompiledGait,
  array: PlannedArray,
  time: Float64Array,
  ends: 'cyclic' | readonly AxisEnd[] | undefined,
): FirmPlanSetting {
  const { rig } = compiled;
  const ground = groundOf(rig);
  if (rig.body.kind !== 'legged' || !ground)
    throw new Error('firm footing is compiled for legged bodies only');
  const isCyclic = ends === 'cyclic';
  const course = sampleGait(gait, time, isCyclic);
  const legs = legMassCourse(legModelOf(rig.body), course);
  const sampled = sampleDisturbances(isCyclic ? [] : rig.jobs.sequence.map(spreadShove), time, {
    referenceHeight: 0,
    velocity: gait.velocity,
    waves: undefined,
    road: undefined,
  });
  const disturbances = spreadJumps(sampled);
  const demand = computeDemand(course, trunkOf(rig), legs, ground, disturbances);
  const step = (time[1] as number) - (time[0] as number);
  const given = isCyclic ? [] : (ends ?? array.axes.map(() => rest));
  const problem: MomentumPlanProblem = {
    intervals: isCyclic ? time.length : time.length - 1,
    step,
    ends: isCyclic ? { kind: 'cyclic' } : { kind: 'given', start: given, end: given },
    axes: array.axes.map(
      ({ axis, array: its }): AxisPlan => ({
        array: its,
        support: { kind: 'firm', ...firmAsk(demand, axis) },
        bodyRate: null,
      }),
    ),
    weights: defaultPlanWeights,
  };
  return {
    kind: 'firm',
    compiled,
    problem,
    ...array,
    time: withEnd(time, step, isCyclic),
    gait,
    course,
    disturbances,
    legs,
    demand,
  };
}

const withEnd = (time: Float64Array, step: number, isCyclic: boolean): Float64Array =>
  isCyclic ? Float64Array.from({ length: time.length + 1 }, (_, k) => k * step) : time;
