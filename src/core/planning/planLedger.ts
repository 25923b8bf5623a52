/** The ledger of a plan: each ask held against what there is, over time, with the formula it came from. */
import type { ArrayAxis } from './arrayAxes';
import { axisLines } from './axisLines';
import { batteryLine } from './batteryLine';
import { gimbalCourses, steeringOf } from './gimbalCourses';
import { groundLines, leakLine } from './groundLines';
import { leanLines } from './leanLines';
import type { LedgerLine } from './ledger';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';
import { steeredLines } from './steeredLines';
import { wheelLines } from './wheelLines';

/**
 * Every line of the ledger for a plan; without one (`schedules` empty) only the lines of the wheels themselves.
 *
 * O(instants x gyros).
 */
export function ledgerLines(setting: PlanSetting, schedules: readonly AxisSchedule[]): readonly LedgerLine[] {
  const steering = steeringOf(setting, schedules);
  const { tilt, tiltRate } = gimbalCourses(setting, schedules, steering);
  const greatestRate =
    schedules.length > 0
      ? tiltRate.reduce((most, rate) => Math.max(most, Math.abs(rate)), 0)
      : Math.max(0, ...(setting.steered?.rateLimit ?? setting.axes.map(({ array }) => array.tiltRate)));
  return [
    ...schedules.flatMap((schedule, a) => axisLines(setting, setting.axes[a] as ArrayAxis, schedule)),
    ...(setting.steered && steering ? steeredLines(setting, setting.steered, steering, schedules) : []),
    ...groundLines(setting, schedules),
    ...leanLines(setting, schedules),
    ...(schedules.length > 0 ? leakLine(setting, tilt, tiltRate) : []),
    ...wheelLines(setting.compiled, greatestRate),
    ...batteryLine(setting, schedules, steering),
  ];
}
