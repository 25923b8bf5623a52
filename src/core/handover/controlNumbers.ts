/** What firmware is given: the planned tilt of each gimbal over time, and the gains of the law. */
import type { Law } from '../control';
import { type GainOutcome, gainNames, type PlanCourse, type PlanView } from '../trial';

/** Units of each law's gains, in the order of the gains themselves. */
const GAIN_UNITS: Readonly<Record<Law, readonly string[]>> = {
  pidTilt: ['rad/rad', 'rad/(rad s)', 'rad s/rad'],
  pidTiltRate: ['1/s', '1/s^2', 'rad/rad'],
  feedback: ['1/s', 'rad/rad', '1/s', 'ratio', '1/s^2'],
  reactionWheel: ['N m/rad', 'N m s/rad', '1/s'],
};

/** What a law does with its gains, as it would be written in firmware. */
export const LAW_SENTENCES: Readonly<Record<Law, string>> = {
  pidTilt: 'tilt = kp * lean + ki * (lean gathered) + kd * (lean rate)',
  pidTiltRate: 'tilt rate = kp * lean + ki * (lean gathered) + kd * (lean rate)',
  feedback:
    'tilt rate = lean gain * lean + lean rate gain * (lean rate) + tilt gain * tilt + tilt rate gain * (last tilt rate) + trim gain * (tilt gathered), each as it differs from the plan',
  reactionWheel:
    'torque on the wheel = lean gain * lean + lean rate gain * (lean rate) + speed gain * (wheel momentum)',
};

export interface NamedGain {
  /** Such as `leanRate`. */
  readonly name: string;
  /** In SI, such as `1/s`; `rad/rad` and `ratio` have none. */
  readonly unit: string;
  readonly value: number;
}

export type GainList =
  | { readonly kind: 'gains'; readonly law: Law; readonly gains: readonly NamedGain[] }
  | { readonly kind: 'none'; readonly sentence: string };

/** The gains of a report under their names and units, or why there are none. */
export function listGains(outcome: GainOutcome): GainList {
  if (outcome.kind === 'none') return outcome;
  const { loop, gains } = outcome.report;
  const names = gainNames(loop.law);
  return {
    kind: 'gains',
    law: loop.law,
    gains: names.map((name, i) => ({
      name,
      unit: GAIN_UNITS[loop.law][i] as string,
      value: gains[i] as number,
    })),
  };
}

export interface GimbalCourse {
  readonly name: string;
  /** rad and rad/s, one for each instant. */
  readonly tilt: Float64Array;
  readonly tiltRate: Float64Array;
}

export type ScheduleList =
  | {
      readonly kind: 'schedule';
      /** True when the last instant leads back to the first. */
      readonly isCyclic: boolean;
      /** s, evenly spaced. */
      readonly time: Float64Array;
      readonly gimbals: readonly GimbalCourse[];
    }
  | { readonly kind: 'none'; readonly sentence: string };

const columnOf = (values: Float64Array, course: PlanCourse, gyro: number): Float64Array =>
  course.time.map((_, instant) => values[instant * course.gyros + gyro] as number);

/** The plan's tilts gimbal by gimbal, or why there is no plan. */
export function listSchedule(plan: PlanView, names: readonly string[], isCyclic: boolean): ScheduleList {
  if (plan.kind !== 'planned') return { kind: 'none', sentence: plan.sentence };
  const { course } = plan;
  return {
    kind: 'schedule',
    isCyclic,
    time: course.time,
    gimbals: names.map((name, gyro) => ({
      name,
      tilt: columnOf(course.tilt, course, gyro),
      tiltRate: columnOf(course.tiltRate, course, gyro),
    })),
  };
}
