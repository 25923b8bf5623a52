/** The plan of a body that leans: on an edge, a point, a round bottom, two wheels in line or the water. */
import { type CompiledRig, type Flotation, fallOf, inertiaAbout, STANDARD_GRAVITY } from '../physics';
import type { Jobs } from '../rig';
import { type DisturbanceCourse, roadWheelsOf, sampleDisturbances, spreadJumps } from './disturbances';
import { type CompiledGait, runTimes, sampleGait } from './gait';
import {
  type AxisPlan,
  defaultPlanWeights,
  type LeanSupport,
  type MomentumPlanProblem,
} from './momentumPlanProblem';
import type { LeanPlanSetting, PlanGrain, PlannedArray } from './rigPlan';
import { createWaveTrain, sampleWater, type WaveBody } from './waveLoad';

/** Lean beyond which the straight-line model of a toppling or floating body is not planned with, rad. */
export const LARGEST_PLANNED_LEAN = 0.35;
/** Intervals in one natural period, or in the time a lean takes to grow e-fold, that a run is planned with. */
const INTERVALS_PER_PERIOD = 24;

const rest = { momentum: 0, lean: 0, leanRate: 0 } as const;

/** The hull as the waves feel it. */
const waveBodyOf = (compiled: CompiledRig, flotation: Flotation): WaveBody => ({
  stiffness: compiled.whole.mass * STANDARD_GRAVITY * flotation.GM,
  beam: flotation.waterlineBeam,
  draught: flotation.draught,
});

/** Sets up a plan on a footing that leans; see `setUpPlan`. */
export function setUpLean(
  compiled: CompiledRig,
  gait: CompiledGait,
  array: PlannedArray,
  grain: PlanGrain,
): LeanPlanSetting {
  const { rig, floating } = compiled;
  const fall = fallOf(compiled);
  const natural = Math.sqrt(Math.abs(fall.stiffness) / fall.inertia);
  const wanted = Math.ceil((rig.jobs.duration * INTERVALS_PER_PERIOD * natural) / (2 * Math.PI));
  const intervals = Math.min(grain.most, Math.max(grain.intervals, wanted));
  const time = runTimes(rig.jobs.duration, intervals);
  const waves = floating ? waveBodyOf(compiled, floating.flotation) : undefined;
  const disturbances = sampleDisturbances(rig.jobs.sequence, time, {
    referenceHeight: pivotHeight(compiled),
    velocity: [0, 0],
    waves,
    road: rig.body.kind === 'inline' ? roadWheelsOf(rig.body) : undefined,
  });
  const spread = spreadJumps(disturbances);
  const roll = { inertia: fall.inertia, stiffness: -fall.stiffness };
  const pitch = rig.footing.kind === 'point' ? pitchFall(compiled) : undefined;
  const isDue = array.axes.map(
    ({ axis }) => (axis === 'pitch' ? (pitch?.stiffness ?? 0) : roll.stiffness) > 0,
  );
  const problem: MomentumPlanProblem = {
    intervals,
    step: rig.jobs.duration / intervals,
    ends: {
      kind: 'given',
      start: array.axes.map(() => rest),
      end: isDue.map((topples) => (topples ? rest : null)),
    },
    axes: array.axes.map(({ axis, array: its }): AxisPlan => {
      const isPitch = axis === 'pitch' && pitch !== undefined;
      const demand = isPitch
        ? addRest(compiled, pitchMoment(compiled, spread), 'pitch')
        : addRest(compiled, rollMoment(compiled, spread), 'roll');
      return { array: its, support: leanSupport(compiled, isPitch ? pitch : roll, demand), bodyRate: null };
    }),
    weights: defaultPlanWeights,
  };
  return {
    kind: 'lean',
    compiled,
    problem,
    ...array,
    time,
    gait,
    course: sampleGait(gait, time, false),
    disturbances,
    inertia: fall.inertia,
    stiffness: fall.stiffness,
    outside: rollMoment(compiled, disturbances),
    outsidePitch: pitch && pitchMoment(compiled, disturbances),
    waves: waves ? waterCourse(rig.jobs.sequence, time) : undefined,
  };
}

interface Falling {
  /** kg*m^2 about the pivot; N*m/rad, positive topples. */
  readonly inertia: number;
  readonly stiffness: number;
}

/** Pitch of a body on a point: it falls about that point as it does in roll. */
function pitchFall({ rig, whole }: CompiledRig): Falling {
  if (rig.footing.kind !== 'point') throw new Error('only a body on a point is free in pitch');
  const [x, , z] = rig.footing.position;
  const inertia = inertiaAbout(whole, [x, whole.com[1], z])[1];
  return { inertia, stiffness: whole.mass * STANDARD_GRAVITY * (whole.com[2] - z) };
}

const leanSupport = (compiled: CompiledRig, fall: Falling, demand: Float64Array): LeanSupport => ({
  kind: 'lean',
  ...fall,
  damping: compiled.rig.footing.kind === 'float' ? compiled.rig.footing.linearDamping : 0,
  demand,
  weight: compiled.whole.mass * STANDARD_GRAVITY,
  leanMin: -LARGEST_PLANNED_LEAN,
  leanMax: LARGEST_PLANNED_LEAN,
});

/** Height of the line the body leans about, m. */
export function pivotHeight({ rig, whole }: CompiledRig): number {
  if (rig.footing.kind === 'float') return whole.com[2];
  return rig.footing.kind === 'point' ? rig.footing.position[2] : 0;
}

/** Height and slope of the water at the hull over a run. O(instants x components). */
function waterCourse(
  sequence: Jobs['sequence'],
  time: Float64Array,
): { readonly level: Float64Array; readonly slope: Float64Array } {
  const nodes = time.length;
  const step = (time[1] as number) - (time[0] as number);
  const level = new Float64Array(nodes);
  const slope = new Float64Array(nodes);
  const ofOne = { level: new Float64Array(nodes), slope: new Float64Array(nodes) };
  for (const disturbance of sequence) {
    if (disturbance.kind !== 'waves' && disturbance.kind !== 'sea') continue;
    sampleWater(createWaveTrain(disturbance), -disturbance.time, step, ofOne.level, ofOne.slope);
    for (let k = 0; k < nodes; k++) {
      const since = time[k] - disturbance.time;
      if (since < 0 || since > disturbance.duration) continue;
      level[k] += ofOne.level[k];
      slope[k] += ofOne.slope[k];
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
function rollMoment(compiled: CompiledRig, disturbances: DisturbanceCourse): Float64Array {
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

/** The same about the pitch axis: a push forward, or weight forward of the pivot, turns the nose down, which is positive. */
function pitchMoment(compiled: CompiledRig, disturbances: DisturbanceCourse): Float64Array {
  const { whole, rig } = compiled;
  const along = rig.footing.kind === 'point' ? rig.footing.position[0] : 0;
  const height = pivotHeight(compiled);
  return disturbances.pitch.map((moment, k) => {
    const gx = disturbances.gravity[3 * k];
    const gz = disturbances.gravity[3 * k + 2];
    const added = disturbances.addedMass[k];
    const x = whole.mass * (whole.com[0] - along);
    const addedX = disturbances.addedMoment[3 * k] - added * along;
    const z = whole.mass * (whole.com[2] - height) + disturbances.addedMoment[3 * k + 2] - added * height;
    return moment - x * (gz + STANDARD_GRAVITY) - addedX * gz + z * gx;
  });
}

/** Adds the moment of weight that stands off the pivot while the body is upright. */
function addRest(compiled: CompiledRig, outside: Float64Array, axis: 'roll' | 'pitch'): Float64Array {
  const { whole, rig } = compiled;
  const along = rig.footing.kind === 'point' ? rig.footing.position[0] : 0;
  const arm = axis === 'roll' ? pivotAcross(compiled) - whole.com[1] : whole.com[0] - along;
  const atRest = whole.mass * STANDARD_GRAVITY * arm;
  return outside.map((moment) => moment + atRest);
}
