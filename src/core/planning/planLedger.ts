/** The ledger of a plan: each ask held against what there is, over time, with the formula it came from. */
import type { ArrayAxis } from './arrayAxes';
import { axisLines } from './axisLines';
import { groundLines, leakLine } from './groundLines';
import type { LedgerLine } from './ledger';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';
import { wheelLines } from './wheelLines';

/** Every gimbal's tilt and tilt rate from the planned axes: (N + 1) x gyros, gyro after gyro. O(instants x gyros). */
export function gimbalCourses(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
): { readonly tilt: Float64Array; readonly tiltRate: Float64Array; readonly tiltAcceleration: Float64Array } {
  const n = setting.compiled.rig.array.gyros.length;
  const nodes = setting.time.length;
  const out = {
    tilt: new Float64Array(nodes * n),
    tiltRate: new Float64Array(nodes * n),
    tiltAcceleration: new Float64Array(nodes * n),
  };
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

/**
 * Every line of the ledger for a plan; without one (`schedules` empty) only the lines of the wheels themselves.
 *
 * O(instants x gyros).
 */
export function ledgerLines(setting: PlanSetting, schedules: readonly AxisSchedule[]): readonly LedgerLine[] {
  const { tilt, tiltRate } = gimbalCourses(setting, schedules);
  const greatestRate =
    schedules.length > 0
      ? tiltRate.reduce((most, rate) => Math.max(most, Math.abs(rate)), 0)
      : Math.max(0, ...setting.axes.map(({ array }) => array.tiltRate));
  return [
    ...schedules.flatMap((schedule, a) => axisLines(setting, setting.axes[a] as ArrayAxis, schedule)),
    ...groundLines(setting, schedules),
    ...(schedules.length > 0 ? leakLine(setting, tilt, tiltRate) : []),
    ...wheelLines(setting.compiled, greatestRate),
  ];
}
