import { arrayTorque } from '../physics';
import type { LedgerLine } from './ledger';
import { input, lineOf } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';

/** Centre of pressure against the middle of its support, and friction against the yaw leak: firm footing only. */
export function groundLines(setting: PlanSetting, schedules: readonly AxisSchedule[]): readonly LedgerLine[] {
  if (setting.kind !== 'firm') return [];
  const { demand, time, axes } = setting;
  const at = axes.findIndex(({ axis }) => axis === 'roll');
  const schedule = schedules[at];
  if (!schedule) return [];
  const nodes = time.length;
  const ask = new Float64Array(nodes);
  const have = new Float64Array(nodes);
  for (let k = 0; k < nodes; k++) {
    const interval = k % demand.intervals;
    const low = demand.acrossMin[interval] as number;
    const high = demand.acrossMax[interval] as number;
    ask[k] = Math.abs((schedule.pressure[k] as number) - (low + high) / 2);
    have[k] = (high - low) / 2;
  }
  return [
    lineOf({
      name: 'centreOfPressure',
      label: 'Centre of pressure',
      dimension: 'length',
      time,
      ask,
      have,
      askFormula: '|p − middle of support|, p = (ask − torque) / F',
      haveFormula: 'half the support across, less the margin',
      inputs: [
        input(
          'Margin',
          setting.compiled.rig.footing.kind === 'firm' ? setting.compiled.rig.footing.margin : 0,
          'length',
        ),
      ],
      source: 'Vukobratović & Borovac, Int. J. Humanoid Robotics 1 (2004)',
    }),
  ];
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
