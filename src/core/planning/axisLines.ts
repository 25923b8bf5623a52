import type { ArrayAxis } from './arrayAxes';
import type { LedgerLine } from './ledger';
import { absolute, constant, input, lineOf } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';

/** Ledger lines of one planned axis. */
export function axisLines(
  setting: PlanSetting,
  axis: ArrayAxis,
  schedule: AxisSchedule,
): readonly LedgerLine[] {
  const { time } = setting;
  const { array, servo } = axis;
  const count = time.length;
  const of = axis.axis === 'roll' ? 'roll' : 'pitch';
  const M = input('Array momentum at a right angle', array.momentum, 'angularMomentum');
  if (array.kind === 'reaction') {
    return [
      lineOf({
        name: axis.axis === 'roll' ? 'rollTorque' : 'pitchTorque',
        label: `Torque in ${of}`,
        dimension: 'torque',
        time,
        ask: absolute(schedule.torque),
        have: constant(count, array.torque),
        askFormula: '|dh/dt|',
        haveFormula: 'motor torque at its current limit',
        inputs: [input('Motor torque', array.torque, 'torque')],
        source: 'momentum theorem',
      }),
      lineOf({
        name: 'momentum',
        label: `Momentum in ${of}`,
        dimension: 'angularMomentum',
        time,
        ask: absolute(schedule.momentum),
        have: constant(count, array.momentum),
        askFormula: '|h|',
        haveFormula: 'J_s (Ω_top − Ω)',
        inputs: [M],
        source: 'definition',
      }),
    ];
  }
  const rate = input('Tilt rate the servo keeps under its continuous torque', array.tiltRate, 'angularRate');
  const limit = input('Tilt limit', array.tiltMax, 'angle');
  const limits = schedule.tilt.map((tilt) => (tilt >= 0 ? array.tiltMax : -array.tiltMin));
  const lines = [
    lineOf({
      name: axis.axis === 'roll' ? 'rollTorque' : 'pitchTorque',
      label: `Torque in ${of}`,
      dimension: 'torque',
      time,
      ask: absolute(schedule.torque),
      have: schedule.tilt.map((tilt) => array.momentum * Math.cos(tilt) * array.tiltRate),
      askFormula: '|de/dt|, e the momentum planned',
      haveFormula: 'M cos δ · r',
      inputs: [M, rate],
      source: 'array law; Wie, Space Vehicle Dynamics and Control, ch. 7',
    }),
    lineOf({
      name: 'momentum',
      label: `Momentum in ${of}`,
      dimension: 'angularMomentum',
      time,
      ask: absolute(schedule.momentum),
      have: limits.map((most) => array.momentum * Math.sin(most)),
      askFormula: '|e|',
      haveFormula: 'M sin δ_max',
      inputs: [M, limit],
      source: 'array law; Wie, Space Vehicle Dynamics and Control, ch. 7',
    }),
    lineOf({
      name: 'tilt',
      label: `Tilt in ${of}`,
      dimension: 'angle',
      time,
      ask: absolute(schedule.tilt),
      have: limits,
      askFormula: '|δ| = asin(|e| / M)',
      haveFormula: 'tilt limit',
      inputs: [M, limit],
      source: 'array law',
    }),
    lineOf({
      name: 'tiltRate',
      label: `Tilt rate in ${of}`,
      dimension: 'angularRate',
      time,
      ask: absolute(schedule.tiltRate),
      have: constant(count, array.tiltRate),
      askFormula: '|dδ/dt| = |de/dt| / (M cos δ)',
      haveFormula: 'ω₀ (1 − T_c / T_s)',
      inputs: servo
        ? [
            input('No-load speed ω₀', servo.noLoadSpeed, 'angularRate'),
            input('Continuous torque T_c', servo.continuousTorque, 'torque'),
            input('Stall torque T_s', servo.stallTorque, 'torque'),
          ]
        : [rate],
      source: 'straight speed-torque line of a servo, common practice',
    }),
  ];
  return servo ? [...lines, ...servoLines(setting, axis, schedule)] : lines;
}

function servoLines(
  setting: PlanSetting,
  { array, axis, servo }: ArrayAxis,
  schedule: AxisSchedule,
): readonly LedgerLine[] {
  if (!servo) return [];
  const { time } = setting;
  const of = axis === 'roll' ? 'roll' : 'pitch';
  const inertia = input('Gimbal inertia', array.servo?.gimbalInertia ?? 0, 'inertia');
  const wheel = input('Momentum of one wheel', array.servo?.wheelMomentum ?? 0, 'angularMomentum');
  let squares = 0;
  for (const torque of schedule.servoTorque) squares += torque * torque;
  const meanTorque = Math.sqrt(squares / schedule.servoTorque.length);
  return [
    lineOf({
      name: 'servoTorque',
      label: `Servo torque in ${of}`,
      dimension: 'torque',
      time,
      ask: absolute(schedule.servoTorque),
      have: schedule.tiltRate.map(
        (rate) => servo.stallTorque * Math.max(0, 1 - Math.abs(rate) / servo.noLoadSpeed),
      ),
      askFormula: '|J_g d²δ/dt² + h ω_body cos δ| × gimbals',
      haveFormula: 'T_s (1 − |dδ/dt| / ω₀)',
      inputs: [inertia, wheel, input('Stall torque T_s', servo.stallTorque, 'torque')],
      source: 'array law; straight speed-torque line of a servo, common practice',
    }),
    lineOf({
      name: 'servoHeat',
      label: `Servo heat in ${of}`,
      dimension: 'torque',
      ask: [meanTorque],
      have: [servo.continuousTorque],
      askFormula: '√(mean T²)',
      haveFormula: 'continuous torque',
      inputs: [input('Continuous torque', servo.continuousTorque, 'torque')],
      source: 'winding heat goes with torque squared, common practice',
    }),
  ];
}
