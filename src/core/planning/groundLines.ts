import { arrayTorque } from '../physics';
import { type LedgerLine, spareOf } from './ledger';
import { input, lineOf } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { FirmPlanSetting, PlanSetting } from './rigPlan';

/** Centre of pressure against the middle of its support, across and along: firm footing only. O(instants). */
export function groundLines(setting: PlanSetting, schedules: readonly AxisSchedule[]): readonly LedgerLine[] {
  if (setting.kind !== 'firm' || schedules.length === 0) return [];
  const { demand } = setting;
  // About pitch the planner measures pressure so that it adds a positive moment: minus x.
  const across = plannedPressure(setting, schedules, 'roll', 1) ?? ((node) => demand.bareAcross[node]);
  const along = plannedPressure(setting, schedules, 'pitch', -1) ?? ((node) => demand.bareAlong[node]);
  return [
    pressureLine(setting, 'centreOfPressure', 'Centre of pressure across', across, [
      demand.acrossMin,
      demand.acrossMax,
    ]),
    pressureLine(setting, 'pressureAlong', 'Centre of pressure along', along, [
      demand.alongMin,
      demand.alongMax,
    ]),
  ];
}

/** m, centre of pressure at a node of the demand with the torque of an interval. */
type PressureAt = (node: number, interval: number) => number;

function plannedPressure(
  { axes, demand, problem }: FirmPlanSetting,
  schedules: readonly AxisSchedule[],
  name: 'roll' | 'pitch',
  sign: 1 | -1,
): PressureAt | undefined {
  const at = axes.findIndex(({ axis }) => axis === name);
  const schedule = schedules[at];
  const support = problem.axes[at]?.support;
  if (!schedule || support?.kind !== 'firm') return undefined;
  return (node, interval) =>
    (sign * (support.ask[node] - schedule.torque[interval])) / demand.verticalForce[node];
}

/** m */
const SAME_POINT = 1e-6;

/** Both ends of every interval are looked at: its torque is held throughout, the ask is not. */
function pressureLine(
  { compiled, demand, time }: FirmPlanSetting,
  name: 'centreOfPressure' | 'pressureAlong',
  label: string,
  pressureAt: PressureAt,
  [least, most]: readonly [Float64Array, Float64Array],
): LedgerLine {
  const { footing } = compiled.rig;
  const nodes = time.length;
  const ask = new Float64Array(nodes);
  const have = new Float64Array(nodes);
  for (let k = 0; k < nodes; k++) {
    let worst = Number.POSITIVE_INFINITY;
    for (const interval of [k - 1, k]) {
      if (interval < 0 || interval >= nodes - 1) continue;
      const middle = (least[interval] + most[interval]) / 2;
      const room = (most[interval] - least[interval]) / 2;
      const away = Math.abs(pressureAt(k % demand.nodes, interval) - middle);
      // Where the margin leaves one point alone, rounding is not counted as falling short of it.
      const off = room === 0 && away < SAME_POINT ? 0 : away;
      if (!(spareOf(off, room) < worst)) continue;
      worst = spareOf(off, room);
      ask[k] = off;
      have[k] = room;
    }
  }
  return lineOf({
    name,
    label,
    dimension: 'length',
    time,
    ask,
    have,
    askFormula: '|p − middle of support|, p = (ask − torque) / F',
    haveFormula: 'half the support, less the margin',
    inputs: [input('Margin', footing.kind === 'firm' ? footing.margin : 0, 'length')],
    source: 'Vukobratović & Borovac, Int. J. Humanoid Robotics 1 (2004)',
  });
}

/** Yaw torque left over, gears and servos off by their backlash, against what friction under the feet holds. */
export function leakLine(
  setting: PlanSetting,
  tilts: Float64Array,
  rates: Float64Array,
): readonly LedgerLine[] {
  const { compiled, time } = setting;
  const { gyros } = compiled.rig.array;
  const n = gyros.length;
  if (setting.kind !== 'firm' || n === 0) return [];
  const momentum = compiled.speeds.map((speed, i) => speed * (compiled.wheels[i]?.spinInertia ?? 0));
  const slack = Math.max(0, ...gyros.map(({ drive }) => (drive.kind === 'servo' ? drive.servo.backlash : 0)));
  const leak = new Float64Array(time.length);
  const hold = new Float64Array(time.length);
  const out = new Float64Array(3);
  const still = new Float64Array(3);
  for (let k = 0; k < time.length; k++) {
    const tilt = tilts.slice(k * n, k * n + n);
    tilt[0] += slack;
    arrayTorque(compiled.model.array, tilt, rates.subarray(k * n, k * n + n), momentum, still, out);
    leak[k] = Math.abs(out[2] as number);
    hold[k] = setting.demand.yawHold[k % setting.demand.nodes] as number;
  }
  return [
    lineOf({
      name: 'yawLeak',
      label: 'Yaw leak',
      dimension: 'torque',
      time,
      ask: leak,
      have: hold,
      askFormula: '|τ_z| of the array, one gimbal off by its backlash',
      haveFormula: 'μ F × mean arm of the soles, less what sideways force uses',
      inputs: [input('Backlash', slack, 'angle')],
      source: 'array law; Howe & Cutkosky, Int. J. Robotics Research 15 (1996)',
    }),
  ];
}
