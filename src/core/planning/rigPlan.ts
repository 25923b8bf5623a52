/** From a compiled rig and its jobs to the plan: demand, limits, and the convex program they make. */
import type { CompiledRig } from '../physics';
import type { Refusal } from '../rig';
import { type ArrayAxis, arrayAxes } from './arrayAxes';
import type { Demand } from './demand';
import type { DisturbanceCourse } from './disturbances';
import { setUpFirm } from './firmSetting';
import { type CompiledGait, compileGait, type GaitCourse } from './gait';
import { setUpLean } from './leanSetting';
import type { LegMassCourse } from './legMass';
import type { MomentumPlanProblem } from './momentumPlanProblem';
import { refuseSequence } from './sequence';
import type { SteeredArray } from './steeredArray';
import { steeredAxes } from './steeredAxes';

export interface PlanSettingCommon {
  readonly compiled: CompiledRig;
  readonly problem: MomentumPlanProblem;
  /** Axes planned, roll first; the same order as the problem's. */
  readonly axes: readonly ArrayAxis[];
  /** N + 1 instants, s. */
  readonly time: Float64Array;
  readonly gait: CompiledGait;
  readonly course: GaitCourse;
  readonly disturbances: DisturbanceCourse;
  /** Gimbals whose torques mix axes, steered as one; undefined where each axis has gimbals of its own. */
  readonly steered: SteeredArray | undefined;
  /** Why nothing is planned, in words; undefined when there is something to plan. */
  readonly unplanned: string | undefined;
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
  /** N + 1, N*m: the same about the pitch axis where the body is free in pitch too; else undefined. */
  readonly outsidePitch: Float64Array | undefined;
  /** N + 1: height (m) and slope across (rad) of the water at the hull; undefined on land. */
  readonly waves: { readonly level: Float64Array; readonly slope: Float64Array } | undefined;
}

export type PlanSetting = FirmPlanSetting | LeanPlanSetting;

export type PlanSettingOutcome =
  | { readonly kind: 'ready'; readonly setting: PlanSetting }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/** What a plan is set up with besides the rig. */
export interface PlanGrain {
  /** Plan instants over a gait's cycle; a run takes as many as its fastest motion needs. */
  readonly intervals: number;
  /** Most instants of a run. */
  readonly most: number;
}

export const USUAL_GRAIN: PlanGrain = Object.freeze({ intervals: 240, most: 720 });

/**
 * Sets up the plan of a rig's jobs: a gait over one cycle that closes on itself, or, with disturbances or standing,
 * the whole run with given ends. An array that cannot be planned is set up with nothing planned (`axes` empty), so
 * that the demand can still be shown.
 *
 * @param grain  how finely; a number is taken as its intervals
 *
 * O(intervals); a walk with disturbances solves its undisturbed cycle first, for the state it starts from.
 */
export function setUpPlan(
  compiled: CompiledRig,
  grain: PlanGrain | number = USUAL_GRAIN,
): PlanSettingOutcome {
  const refusals = refuseSequence(compiled.rig);
  if (refusals.length > 0) return { kind: 'refused', refusals };
  const outcome = compileGait(compiled.rig);
  if (outcome.kind === 'refused') return outcome;
  const fineness = typeof grain === 'number' ? { ...USUAL_GRAIN, intervals: grain } : grain;
  const isFirm = compiled.rig.footing.kind === 'firm';
  const array = plannedArray(compiled, isFirm || compiled.rig.footing.kind === 'point');
  const setting = isFirm
    ? setUpFirm(compiled, outcome.gait, array, fineness)
    : setUpLean(compiled, outcome.gait, array, fineness);
  return { kind: 'ready', setting };
}

/** The axes to plan, and how their momentum is shared among the gimbals. */
export interface PlannedArray {
  readonly axes: readonly ArrayAxis[];
  readonly steered: SteeredArray | undefined;
  readonly unplanned: string | undefined;
}

function plannedArray(compiled: CompiledRig, canPitch: boolean): PlannedArray {
  const arrays = arrayAxes(compiled);
  switch (arrays.kind) {
    case 'idle':
      return { axes: [], steered: undefined, unplanned: arrays.sentence };
    case 'steered':
      return steeredAxes(compiled, canPitch);
    case 'axes': {
      const axes = canPitch ? arrays.axes : arrays.axes.filter(({ axis }) => axis === 'roll');
      const unplanned = axes.length > 0 ? undefined : 'No wheel of this array pushes in roll.';
      return { axes, steered: undefined, unplanned };
    }
  }
}
