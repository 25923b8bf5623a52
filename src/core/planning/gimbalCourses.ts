import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';
import { type SteeredCourse, steerPlan } from './steeredPlan';

/** Every gimbal through a plan: (N + 1) x gyros, node after node. */
export interface GimbalCourses {
  readonly tilt: Float64Array;
  readonly tiltRate: Float64Array;
  readonly tiltAcceleration: Float64Array;
}

/** The steering of a plan whose array is steered; undefined for any other, or with no plan. */
export function steeringOf(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
): SteeredCourse | undefined {
  return setting.steered && schedules.length > 0
    ? steerPlan(setting, setting.steered, schedules).course
    : undefined;
}

/**
 * Every gimbal's tilt, tilt rate and tilt acceleration from the planned axes.
 *
 * O(instants x gyros), and for a steered array the cost of steering it.
 */
export function gimbalCourses(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  steering: SteeredCourse | undefined = steeringOf(setting, schedules),
): GimbalCourses {
  const n = setting.compiled.rig.array.gyros.length;
  const nodes = setting.time.length;
  const out = {
    tilt: new Float64Array(nodes * n),
    tiltRate: new Float64Array(nodes * n),
    tiltAcceleration: new Float64Array(nodes * n),
  };
  if (setting.steered && steering) {
    for (const { gyro, servo, ratio } of setting.steered.members) {
      for (let k = 0; k < nodes; k++) {
        const from = k * steering.servos + servo;
        out.tilt[k * n + gyro] = ratio * steering.tilt[from];
        out.tiltRate[k * n + gyro] = ratio * steering.tiltRate[from];
        out.tiltAcceleration[k * n + gyro] = ratio * steering.tiltAcceleration[from];
      }
    }
    return out;
  }
  setting.axes.forEach((axis, a) => {
    const schedule = schedules[a];
    if (!schedule || axis.array.kind !== 'gimballed') return;
    for (const { gyro, sign } of axis.followers) {
      for (let k = 0; k < nodes; k++) {
        out.tilt[k * n + gyro] = sign * (schedule.tilt[k] as number);
        out.tiltRate[k * n + gyro] = sign * (schedule.tiltRate[k] as number);
        out.tiltAcceleration[k * n + gyro] = sign * (schedule.tiltAcceleration[k] as number);
      }
    }
  });
  return out;
}
