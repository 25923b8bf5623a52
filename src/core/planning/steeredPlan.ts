/** A planned momentum shared among gimbals whose torques mix axes, and checked after the fact on a finer grid. */
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';
import {
  createSteeringWork,
  LEAST_MEASURE_SHARE,
  type SteeredArray,
  singularityShare,
  steerTo,
} from './steeredArray';

/** Points looked at in each interval of the plan. */
export const STEERING_REFINE = 5;
/** Momentum that may be missing, over the root-mean-square gain, before the gimbals count as not following. */
const MISSING = 1e-7;

/** Every servo through a plan, node by node. */
export interface SteeredCourse {
  readonly servos: number;
  /** (N + 1) x servos, rad; rad/s just after the node; rad/s^2 at the node. */
  readonly tilt: Float64Array;
  readonly tiltRate: Float64Array;
  readonly tiltAcceleration: Float64Array;
  /** N + 1: distance to singularity over that at rest. */
  readonly singularity: Float64Array;
  /** The worst on the finer grid: rate over its limit, tilt over its limit, and least distance to singularity. */
  readonly worst: {
    readonly rate: number;
    readonly tilt: number;
    readonly singularity: number;
    /** N*m*s that the gimbals do not store of what was planned. */
    readonly missing: number;
  };
}

export type SteerOutcome =
  | { readonly kind: 'steered'; readonly course: SteeredCourse }
  | { readonly kind: 'lost'; readonly sentence: string; readonly course: SteeredCourse };

/** Momentum of one axis at a share of an interval: straight between nodes. */
const momentumAt = (schedule: AxisSchedule, k: number, share: number): number =>
  schedule.momentum[k] + share * (schedule.momentum[k + 1] - schedule.momentum[k]);

/** Steerings by the schedules they follow: plan, ledger, ribbon and preview all ask for the same one. */
const known = new WeakMap<readonly AxisSchedule[], SteerOutcome>();

/** The steering of a plan, worked out once for its schedules; see `steerAfresh`. */
export function steerPlan(
  setting: PlanSetting,
  array: SteeredArray,
  schedules: readonly AxisSchedule[],
): SteerOutcome {
  const found = known.get(schedules) ?? steerAfresh(setting, array, schedules);
  known.set(schedules, found);
  return found;
}

/**
 * Steers an array through planned axes: roll and pitch as planned, yaw at nothing.
 *
 * @returns every servo's course; `lost` with words when a tilt, a rate or the distance to singularity is passed
 *
 * O(instants x STEERING_REFINE x servos).
 */
function steerAfresh(
  setting: PlanSetting,
  array: SteeredArray,
  schedules: readonly AxisSchedule[],
): SteerOutcome {
  const nodes = setting.time.length;
  const { count } = array;
  const work = createSteeringWork(array);
  const wanted = new Float64Array(3);
  const tilt = new Float64Array(count);
  const before = new Float64Array(count);
  const course = {
    servos: count,
    tilt: new Float64Array(nodes * count),
    tiltRate: new Float64Array(nodes * count),
    tiltAcceleration: new Float64Array(nodes * count),
    singularity: new Float64Array(nodes),
  };
  const worst = { rate: 0, tilt: 0, singularity: Number.POSITIVE_INFINITY, missing: 0 };
  const fine = setting.problem.step / STEERING_REFINE;
  for (let point = 0; point <= (nodes - 1) * STEERING_REFINE; point++) {
    const k = Math.min(nodes - 2, Math.floor(point / STEERING_REFINE));
    const share = (point - k * STEERING_REFINE) / STEERING_REFINE;
    wanted.fill(0);
    for (let a = 0; a < schedules.length; a++) {
      wanted[setting.axes[a].axis === 'roll' ? 0 : 1] = momentumAt(schedules[a], k, share);
    }
    before.set(tilt);
    worst.missing = Math.max(worst.missing, steerTo(array, work, wanted, tilt));
    const near = singularityShare(array, work, tilt);
    worst.singularity = Math.min(worst.singularity, near);
    for (let i = 0; i < count; i++) {
      const limit = tilt[i] >= 0 ? array.tiltMax[i] : -array.tiltMin[i];
      worst.tilt = Math.max(worst.tilt, Math.abs(tilt[i]) / limit);
      if (point > 0) {
        worst.rate = Math.max(worst.rate, Math.abs(tilt[i] - before[i]) / fine / array.rateLimit[i]);
      }
    }
    if (point % STEERING_REFINE !== 0) continue;
    const node = point / STEERING_REFINE;
    course.tilt.set(tilt, node * count);
    course.singularity[node] = near;
  }
  fillRates(course, nodes, count, setting.problem.step, setting.course.isCyclic);
  const whole = { ...course, worst };
  const sentence = whatIsLost(array, worst);
  return sentence === undefined
    ? { kind: 'steered', course: whole }
    : { kind: 'lost', sentence, course: whole };
}

function fillRates(
  course: Pick<SteeredCourse, 'tilt' | 'tiltRate' | 'tiltAcceleration'>,
  nodes: number,
  count: number,
  step: number,
  isCyclic: boolean,
): void {
  const { tilt, tiltRate, tiltAcceleration } = course;
  const last = nodes - 1;
  for (let i = 0; i < count; i++) {
    for (let k = 0; k < last; k++) {
      tiltRate[k * count + i] = (tilt[(k + 1) * count + i] - tilt[k * count + i]) / step;
    }
    if (isCyclic) tiltRate[last * count + i] = tiltRate[i];
    for (let k = 0; k <= last; k++) {
      const from = k > 0 ? tiltRate[(k - 1) * count + i] : isCyclic ? tiltRate[(last - 1) * count + i] : 0;
      tiltAcceleration[k * count + i] = (tiltRate[k * count + i] - from) / step;
    }
  }
}

/** The first thing that is passed, in words; undefined when all is kept. Rates may pass by rounding of differences only. */
function whatIsLost(array: SteeredArray, worst: SteeredCourse['worst']): string | undefined {
  const percent = (value: number): string => `${(100 * value).toFixed(0)} %`;
  if (!(worst.missing <= MISSING * Math.sqrt(array.meanSquare))) {
    return 'The gimbals cannot follow: the momentum asked for lies beyond a singularity of the array. Use more momentum, or ask for less.';
  }
  if (!(worst.singularity >= LEAST_MEASURE_SHARE * (1 - 1e-9))) {
    return `The gimbals come within ${percent(worst.singularity)} of their distance from a singularity at rest; ${percent(LEAST_MEASURE_SHARE)} is kept. Use more momentum, or ask for less.`;
  }
  if (!(worst.tilt <= 1 + 1e-6)) {
    return `The gimbals would have to tilt to ${percent(worst.tilt)} of their limit. Widen the tilt limits, or use more momentum.`;
  }
  if (!(worst.rate <= 1 + 1e-6)) {
    return `The gimbals would have to turn at ${percent(worst.rate)} of the rate their servos keep. Use quicker servos, or more momentum.`;
  }
  return undefined;
}
