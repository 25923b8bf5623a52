import type { ArrayAxis } from './arrayAxes';
import type { LedgerLine, LedgerLineName } from './ledger';
import { absolute, constant, input, lineOf } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';
import { standInLimits } from './steeredAxes';

type RollName = 'rollTorque' | 'momentum' | 'tilt' | 'tiltRate' | 'servoTorque' | 'servoHeat';

/** Pitch has lines of its own beside those of roll. */
const PITCH_NAMES: Readonly<Record<RollName, LedgerLineName>> = {
  rollTorque: 'pitchTorque',
  momentum: 'pitchMomentum',
  tilt: 'pitchTilt',
  tiltRate: 'pitchTiltRate',
  servoTorque: 'pitchServoTorque',
  servoHeat: 'pitchServoHeat',
};

const nameFor = (axis: ArrayAxis['axis'], name: RollName): LedgerLineName =>
  axis === 'roll' ? name : PITCH_NAMES[name];

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
        name: nameFor(axis.axis, 'rollTorque'),
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
        name: nameFor(axis.axis, 'momentum'),
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
  if (axis.isSteered) return standInLines(setting, axis, schedule);
  const rate = input('Tilt rate the servo keeps under its continuous torque', array.tiltRate, 'angularRate');
  const limit = input('Tilt limit', array.tiltMax, 'angle');
  const limits = schedule.tilt.map((tilt) => (tilt >= 0 ? array.tiltMax : -array.tiltMin));
  const lines = [
    lineOf({
      name: nameFor(axis.axis, 'rollTorque'),
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
      name: nameFor(axis.axis, 'momentum'),
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
      name: nameFor(axis.axis, 'tilt'),
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
      name: nameFor(axis.axis, 'tiltRate'),
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

/** Torque and momentum of a steered array about one axis, against the ellipse inside its envelope. */
function standInLines(
  { time }: PlanSetting,
  { array, axis }: ArrayAxis,
  schedule: AxisSchedule,
): readonly LedgerLine[] {
  const of = axis === 'roll' ? 'roll' : 'pitch';
  const limits = standInLimits(array);
  const { momentum: M, tiltRate } = array;
  const source = 'steering law and envelope; Wie, JGCD 27(2) 2004';
  return [
    lineOf({
      name: nameFor(axis, 'rollTorque'),
      label: `Torque in ${of}`,
      dimension: 'torque',
      time,
      ask: absolute(schedule.torque),
      have: schedule.momentum.map((e) => tiltRate * Math.sqrt(Math.max(0, M * M - e * e))),
      askFormula: '|de/dt|, e the momentum planned',
      haveFormula: 'r √(M² − e²), the ellipse inside the envelope',
      inputs: [
        input('M of the ellipse', M, 'angularMomentum'),
        input('Torque at rest, r M', limits.torque, 'torque'),
      ],
      source,
    }),
    lineOf({
      name: nameFor(axis, 'momentum'),
      label: `Momentum in ${of}`,
      dimension: 'angularMomentum',
      time,
      ask: absolute(schedule.momentum),
      have: constant(time.length, limits.momentum),
      askFormula: '|e|',
      haveFormula: 'envelope within tilt limits, clear of singularities',
      inputs: [input('Envelope', limits.momentum, 'angularMomentum')],
      source,
    }),
  ];
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
      name: nameFor(axis, 'servoTorque'),
      label: `Servo torque in ${of}`,
      dimension: 'torque',
      time,
      ask: absolute(schedule.servoTorque),
      have: schedule.tiltRate.map(
        (rate) => servo.stallTorque * Math.max(0, 1 - Math.abs(rate) / servo.noLoadSpeed),
      ),
      askFormula: '|J_g d²δ/dt² − h ω_body cos δ| × gimbals',
      haveFormula: 'T_s (1 − |dδ/dt| / ω₀)',
      inputs: [inertia, wheel, input('Stall torque T_s', servo.stallTorque, 'torque')],
      source: 'array law; straight speed-torque line of a servo, common practice',
    }),
    lineOf({
      name: nameFor(axis, 'servoHeat'),
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
