/** The battery's line of the ledger: what the run takes out of it against what it may give. */
import {
  GIMBAL_POWER,
  gimbalRateOf,
  packEnergy,
  type SpinStanding,
  servoPower,
  spinUp,
  standGyro,
  USUAL_USABLE_CHARGE,
} from '../physics';
import type { Servo } from '../rig';
import type { ArrayAxis } from './arrayAxes';
import type { LedgerLine } from './ledger';
import { input, lineOf } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';
import { steeredServoTorque } from './steeredLines';
import type { SteeredCourse } from './steeredPlan';

/** Pieces of the spin-up integral: its energy is within 1e-4 of that of many (measured 4e-7). */
const PANELS = 12;

/** Mean of a servo's electrical power over the instants of a plan, W. Column `at` of each row of `width`. */
function meanServoPower(
  { stallTorque, noLoadSpeed }: Servo,
  torque: Float64Array,
  rate: Float64Array,
  width = 1,
  at = 0,
): number {
  let sum = 0;
  let count = 0;
  for (let k = at; k < torque.length; k += width) {
    sum += servoPower(stallTorque, noLoadSpeed, torque[k] as number, rate[k] as number);
    count += 1;
  }
  return count > 0 ? sum / count : 0;
}

/**
 * Mean electrical power of all gimbal servos over a plan, W: each servo's holding heat and work, never given back.
 *
 * @param steering  of a steered array; undefined where each axis has gimbals of its own
 *
 * O(instants x servos). Source: linear servo model.
 */
export function meanGimbalPower(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  steering?: SteeredCourse,
): number {
  const { steered } = setting;
  if (steered && steering) {
    const torque = steeredServoTorque(setting, steered, steering, schedules);
    return steered.servos.reduce(
      (sum, servo, at) => sum + meanServoPower(servo, torque, steering.tiltRate, steering.servos, at),
      0,
    );
  }
  return schedules.reduce((sum, schedule, a) => {
    const { servo, followers } = setting.axes[a] as ArrayAxis;
    if (!servo) return sum;
    const { gyros } = setting.compiled.rig.array;
    const servos = followers.filter(({ gyro }) => gyros[gyro]?.drive.kind === 'servo').length;
    return sum + servos * meanServoPower(servo, schedule.servoTorque, schedule.tiltRate);
  }, 0);
}

interface WheelBudget {
  /** J. */
  readonly spinUp: number;
  /** W. */
  readonly hold: number;
  readonly standing: SpinStanding;
}

/** What each wheel takes; those alike are worked out once. A wheel whose speed cannot be held is told by its standing. */
function wheelBudgets(setting: PlanSetting): readonly WheelBudget[] {
  const { rig } = setting.compiled;
  const done = new Map<string, WheelBudget | undefined>();
  return rig.array.gyros.flatMap((gyro) => {
    const rate = gimbalRateOf(rig, gyro);
    const { wheel, speed, motor, bearing, housing, spin } = gyro;
    const key = JSON.stringify([wheel.parts, wheel.balanceGrade, speed, motor, bearing, housing, spin, rate]);
    if (!done.has(key)) {
      const stood = standGyro(gyro, rig.power, rate);
      done.set(key, stood.kind === 'stands' ? budgetOf(stood.standing) : undefined);
    }
    const budget = done.get(key);
    return budget ? [budget] : [];
  });
}

function budgetOf(standing: SpinStanding): WheelBudget {
  const { gyro, drive, wheel, restDrag, hold } = standing;
  const up = spinUp(drive, wheel.spinInertia, restDrag.total, gyro.speed, 0, PANELS);
  return {
    spinUp: up.kind === 'reaches' ? up.spinUp.batteryEnergy : Number.POSITIVE_INFINITY,
    hold: gyro.spin.kind === 'coasting' ? 0 : hold.kind === 'held' ? hold.flows.battery : Number.NaN,
    standing,
  };
}

/**
 * Battery of a rig over its job: the current that holding a wheel asks when that cannot be had, else the energy of
 * bringing all wheels up and running the job. Nothing for a rig without gyros.
 *
 * @param schedules  planned axes; empty without a plan, and then the gimbals count as still
 *
 * About 0.5 ms for each gyro that is unlike the others. Sources: with DRIVE_FORMULAS.
 */
export function batteryLine(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  steering?: SteeredCourse,
): readonly LedgerLine[] {
  const { rig } = setting.compiled;
  const budgets = wheelBudgets(setting);
  if (budgets.length === 0) return [];
  // A wheel that coasts need not be held, only brought up.
  const short = budgets.flatMap(({ standing, spinUp }) =>
    standing.hold.kind === 'too fast' && (standing.gyro.spin.kind !== 'coasting' || !Number.isFinite(spinUp))
      ? [{ standing, hold: standing.hold }]
      : [],
  );
  const worst = short.toSorted((a, b) => b.hold.asked / b.hold.most - a.hold.asked / a.hold.most)[0];
  if (worst) return [currentLine(worst.standing, worst.hold)];
  const { cells, cellVoltage, capacity, otherPower } = rig.power;
  const full = packEnergy(cells, cellVoltage, capacity);
  const hold = budgets.reduce((sum, budget) => sum + budget.hold, 0);
  const up = budgets.reduce((sum, budget) => sum + budget.spinUp, 0);
  const gimbals = meanGimbalPower(setting, schedules, steering);
  const { duration } = rig.jobs;
  return [
    lineOf({
      name: 'battery',
      label: 'Battery',
      dimension: 'energy',
      ask: [up + (hold + gimbals + otherPower) * duration],
      have: [USUAL_USABLE_CHARGE * full],
      askFormula: 'E = spin-up E + (P_wheels + P_gimbals + P_else) × t',
      haveFormula: 'usable share × cells × V_cell × charge',
      inputs: [
        input('Energy to bring all wheels up', up, 'energy'),
        input('Power to hold all wheels', hold, 'power'),
        input(GIMBAL_POWER, gimbals, 'power'),
        input('Power of everything else, legs too', otherPower, 'power'),
        input('Length of the run', duration, 'time'),
        input('Usable share', USUAL_USABLE_CHARGE, 'ratio'),
        input('Energy of the full battery', full, 'energy'),
      ],
      source: 'energy balance; straight speed-torque line of a servo; usable share is common practice',
    }),
  ];
}

const currentLine = (
  { gyro, drive }: SpinStanding,
  hold: { readonly asked: number; readonly most: number },
): LedgerLine =>
  lineOf({
    name: 'battery',
    label: 'Battery and motor current',
    dimension: 'current',
    ask: [hold.asked],
    have: [Math.max(0, hold.most)],
    askFormula: 'I = T_drag / K_t + I_0',
    haveFormula: 'min(I_limit, (V − K_t ω) / (R + R_b/η))',
    inputs: [
      input('Speed', gyro.speed, 'spinRate'),
      input('Torque constant', drive.torqueConstant, 'torqueConstant'),
      input('Battery', drive.voltage, 'voltage'),
      input('Resistance', drive.resistance, 'resistance'),
      input('Current limit', drive.currentLimit, 'current'),
    ],
    source: 'Newton; circuit of a chopper',
  });
