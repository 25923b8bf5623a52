/** From a compiled rig and its jobs to the plan: demand, limits, and the convex program they make. */
import { type CompiledRig, type Flotation, fallOf, STANDARD_GRAVITY } from '../physics';
import type { Jobs, Refusal } from '../rig';
import { type ArrayAxes, type ArrayAxis, arrayAxes } from './arrayAxes';
import { computeDemand, type Demand, firmAsk, groundOf, trunkOf } from './demand';
import { type DisturbanceCourse, roadWheelsOf, sampleDisturbances, spreadJumps } from './disturbances';
import { type CompiledGait, compileGait, cycleTimes, type GaitCourse, runTimes, sampleGait } from './gait';
import { type LegMassCourse, legMassCourse, legModelOf } from './legMass';
import { type AxisPlan, defaultPlanWeights, type MomentumPlanProblem } from './momentumPlanProblem';
import { createWaveTrain, type WaveBody, waveElevationAt, waveSlopeAt } from './waveLoad';

/** Lean beyond which the straight-line model of a toppling or floating body is not planned with, rad. */
const LARGEST_PLANNED_LEAN = 0.35;
const USUAL_INTERVALS = 240;
const MOST_INTERVALS = 720;
/** Intervals in one natural period, or in the time a lean takes to grow e-fold, that a run is planned with. */
const INTERVALS_PER_PERIOD = 24;

interface PlanSettingCommon {
  readonly compiled: CompiledRig;
  readonly problem: MomentumPlanProblem;
  /** Axes planned, roll first; the same order as the problem's. */
  readonly axes: readonly ArrayAxis[];
  /** N + 1 instants, s. */
  readonly time: Float64Array;
  readonly gait: CompiledGait;
  readonly course: GaitCourse;
  readonly disturbances: DisturbanceCourse;
}

/** Feet flat on the ground: the demand is known before planning. */
export interface FirmPlanSetting extends PlanSettingCommon {
  readonly kind: 'firm';
  readonly legs: LegMassCourse;
  readonly demand: Demand;
}

/** A body that leans: on an edge, a point, a round bottom or the water. */
export interface LeanPlanSetting extends PlanSettingCommon {
  readonly kind: 'lean';
  readonly inertia: number;
  readonly stiffness: number;
  /** N + 1, N*m: roll moment from outside, weight at rest left out. */
  readonly outside: Float64Array;
  /** N + 1: height (m) and slope across (rad) of the water at the hull; undefined on land. */
  readonly waves: { readonly level: Float64Array; readonly slope: Float64Array } | undefined;
}

export type PlanSetting = FirmPlanSetting | LeanPlanSetting;

export type PlanSettingOutcome =
  | { readonly kind: 'ready'; readonly setting: PlanSetting }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/**
 * Sets up the plan of a rig's jobs. An array that cannot be planned axis by axis is set up with a stand-in
 * of no use (`axes` empty), so that the demand can still be shown.
 *
 * @param intervals  plan instants over a gait's cycle; a run takes as many as its fastest motion needs
 *
 * O(intervals).
 */
export function setUpPlan(compiled: CompiledRig, intervals = USUAL_INTERVALS): PlanSettingOutcome {
  const outcome = compileGait(compiled.rig);
  if (outcome.kind === 'refused') return outcome;
  const arrays = arrayAxes(compiled);
  const setting =
    compiled.rig.footing.kind === 'firm'
      ? setUpFirm(compiled, outcome.gait, arrays, intervals)
      : setUpLean(compiled, outcome.gait, arrays);
  return { kind: 'ready', setting };
}

const axesOf = (arrays: ArrayAxes): readonly ArrayAxis[] => (arrays.kind === 'axes' ? arrays.axes : []);

function setUpFirm(
  compiled: CompiledRig,
  gait: CompiledGait,
  arrays: ArrayAxes,
  intervals: number,
): FirmPlanSetting {
  const { rig } = compiled;
  const body = rig.body.kind === 'legged' ? rig.body : undefined;
  const ground = groundOf(rig);
  if (!body || !ground) throw new Error('firm footing is compiled for legged bodies only');
  const isCyclic = gait.kind !== 'stand';
  const count = isCyclic
    ? intervals
    : Math.min(MOST_INTERVALS, Math.max(intervals, Math.ceil(rig.jobs.duration / 0.02)));
  const time = isCyclic ? cycleTimes(gait, count) : runTimes(rig.jobs.duration, count);
  const course = sampleGait(gait, time, isCyclic);
  const legs = legMassCourse(legModelOf(body), course);
  const sampled = sampleDisturbances(isCyclic ? [] : rig.jobs.sequence, time, {
    referenceHeight: 0,
    velocity: gait.velocity,
    waves: undefined,
    road: undefined,
  });
  const disturbances = spreadJumps(sampled);
  const demand = computeDemand(course, trunkOf(rig), legs, ground, disturbances);
  const step = (time[1] as number) - (time[0] as number);
  const axes = axesOf(arrays);
  const problem: MomentumPlanProblem = {
    intervals: count,
    step,
    ends: isCyclic ? { kind: 'cyclic' } : restToRest(axes.length),
    axes: axes.map(
      ({ axis, array }): AxisPlan => ({
        array,
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
    axes,
    time: withEnd(time, step, isCyclic),
    gait,
    course,
    disturbances,
    legs,
    demand,
  };
}

const rest = { momentum: 0, lean: 0, leanRate: 0 } as const;

const restToRest = (axes: number): MomentumPlanProblem['ends'] => ({
  kind: 'given',
  start: Array.from({ length: axes }, () => rest),
  end: Array.from({ length: axes }, () => rest),
});

const withEnd = (time: Float64Array, step: number, isCyclic: boolean): Float64Array =>
  isCyclic ? Float64Array.from({ length: time.length + 1 }, (_, k) => k * step) : time;

/** The hull as the waves feel it. */
const waveBodyOf = (compiled: CompiledRig, flotation: Flotation): WaveBody => ({
  stiffness: compiled.whole.mass * STANDARD_GRAVITY * flotation.GM,
  beam: flotation.waterlineBeam,
  draught: flotation.draught,
});

function setUpLean(compiled: CompiledRig, gait: CompiledGait, arrays: ArrayAxes): LeanPlanSetting {
  const { rig, whole, floating } = compiled;
  const fall = fallOf(compiled);
  const natural = Math.sqrt(Math.abs(fall.stiffness) / fall.inertia);
  const wanted = Math.ceil((rig.jobs.duration * INTERVALS_PER_PERIOD * natural) / (2 * Math.PI));
  const intervals = Math.min(MOST_INTERVALS, Math.max(USUAL_INTERVALS, wanted));
  const time = runTimes(rig.jobs.duration, intervals);
  const course = sampleGait(gait, time, false);
  const waves = floating ? waveBodyOf(compiled, floating.flotation) : undefined;
  const disturbances = sampleDisturbances(rig.jobs.sequence, time, {
    referenceHeight: pivotHeight(compiled),
    velocity: [0, 0],
    waves,
    road: rig.body.kind === 'inline' ? roadWheelsOf(rig.body) : undefined,
  });
  const axes = axesOf(arrays).filter(({ axis }) => axis === 'roll');
  const linear = rig.footing.kind === 'float' ? rig.footing.linearDamping : 0;
  const problem: MomentumPlanProblem = {
    intervals,
    step: rig.jobs.duration / intervals,
    ends: {
      kind: 'given',
      start: axes.map(() => rest),
      end: axes.map(() => (fall.stiffness < 0 ? rest : null)),
    },
    axes: axes.map(
      ({ array }): AxisPlan => ({
        array,
        support: {
          kind: 'lean',
          inertia: fall.inertia,
          stiffness: -fall.stiffness,
          damping: linear,
          demand: addRestMoment(compiled, outsideMoment(compiled, spreadJumps(disturbances))),
          weight: whole.mass * STANDARD_GRAVITY,
          leanMin: -LARGEST_PLANNED_LEAN,
          leanMax: LARGEST_PLANNED_LEAN,
        },
        bodyRate: null,
      }),
    ),
    weights: defaultPlanWeights,
  };
  return {
    kind: 'lean',
    compiled,
    problem,
    axes,
    time,
    gait,
    course,
    disturbances,
    inertia: fall.inertia,
    stiffness: fall.stiffness,
    outside: outsideMoment(compiled, disturbances),
    waves: waves ? waterCourse(rig.jobs.sequence, time) : undefined,
  };
}

/** Height of the line the body leans about, m. */
export function pivotHeight({ rig, whole }: CompiledRig): number {
  if (rig.footing.kind === 'float') return whole.com[2];
  return rig.footing.kind === 'point' ? rig.footing.position[2] : 0;
}

/** Height and slope of the water at the hull over a run. */
function waterCourse(
  sequence: Jobs['sequence'],
  time: Float64Array,
): { readonly level: Float64Array; readonly slope: Float64Array } {
  const level = new Float64Array(time.length);
  const slope = new Float64Array(time.length);
  for (const disturbance of sequence) {
    if (disturbance.kind !== 'waves' && disturbance.kind !== 'sea') continue;
    const train = createWaveTrain(disturbance);
    for (let k = 0; k < time.length; k++) {
      const since = time[k] - disturbance.time;
      if (since < 0 || since > disturbance.duration) continue;
      level[k] += waveElevationAt(train, since);
      slope[k] += waveSlopeAt(train, since);
    }
  }
  return { level, slope };
}

/** How far to the left of the body's middle the line it leans about runs, m. */
const pivotAcross = ({ rig: { footing } }: CompiledRig): number =>
  footing.kind === 'edge' ? footing.offset : footing.kind === 'point' ? footing.position[1] : 0;

/**
 * Roll moment from outside on an upright body about its pivot, N*m at each instant: disturbances, gravity that
 * leans, what was picked up. The body's own weight at rest is left out.
 */
function outsideMoment(compiled: CompiledRig, disturbances: DisturbanceCourse): Float64Array {
  const { whole } = compiled;
  const across = pivotAcross(compiled);
  const height = pivotHeight(compiled);
  return disturbances.roll.map((moment, k) => {
    const gy = disturbances.gravity[3 * k + 1];
    const gz = disturbances.gravity[3 * k + 2];
    const added = disturbances.addedMass[k];
    const y = whole.mass * (whole.com[1] - across);
    const addedY = disturbances.addedMoment[3 * k + 1] - added * across;
    const z = whole.mass * (whole.com[2] - height) + disturbances.addedMoment[3 * k + 2] - added * height;
    return moment + y * (gz + STANDARD_GRAVITY) + addedY * gz - z * gy;
  });
}

/** Adds the moment of weight that stands off the pivot while the body is upright. */
function addRestMoment(compiled: CompiledRig, outside: Float64Array): Float64Array {
  const { whole } = compiled;
  const atRest = -whole.mass * STANDARD_GRAVITY * (whole.com[1] - pivotAcross(compiled));
  return outside.map((moment) => moment + atRest);
}
