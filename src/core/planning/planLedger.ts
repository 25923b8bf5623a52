/** The ledger of a plan: each ask held against what there is, over time, with the formula it came from. */
import {
  arrayTorque,
  bearingLoads,
  type CompiledRig,
  equivalentDynamicLoad,
  permissibleUnbalance,
  USUAL_SPEED_SQUARED_FACTOR,
  wheelStress,
} from '../physics';
import { MATERIALS } from '../rig';
import type { Dimension, Figure, FigureInput } from '../units';
import type { ArrayAxis } from './arrayAxes';
import { type LedgerLine, type LedgerLineName, spareOf } from './ledger';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';

/** Life a wheel's bearings are asked to reach, s: 1,000 hours, common practice for a machine that is tended. */
export const ASKED_BEARING_LIFE = 1000 * 3600;

const input = (label: string, value: number, dimension: Dimension): FigureInput => ({
  label,
  value,
  dimension,
});

interface LineParts {
  readonly name: LedgerLineName;
  readonly label: string;
  readonly dimension: Dimension;
  readonly time?: Float64Array;
  readonly ask: ArrayLike<number>;
  readonly have: ArrayLike<number>;
  readonly askFormula: string;
  readonly haveFormula: string;
  readonly inputs: readonly FigureInput[];
  readonly source: string;
}

/** One line from its ask and have over time: its figures are those of the instant with least spare. O(instants). */
function lineOf(parts: LineParts): LedgerLine {
  let worst = 0;
  let least = Number.POSITIVE_INFINITY;
  for (let k = 0; k < parts.ask.length; k++) {
    const spare = spareOf(parts.ask[k] as number, parts.have[k] as number);
    if (spare < least) {
      least = spare;
      worst = k;
    }
  }
  const { name, label, dimension, inputs, source, time } = parts;
  const figure = (id: string, what: string, values: ArrayLike<number>, formula: string): Figure => ({
    id: `${name}${id}`,
    label: `${label}, ${what}`,
    value: values[worst] as number,
    dimension,
    formula,
    inputs,
    source,
  });
  return {
    name,
    label,
    ask: figure('Ask', 'asked', parts.ask, parts.askFormula),
    have: figure('Have', 'there is', parts.have, parts.haveFormula),
    spare: least,
    at: time ? (time[worst] as number) : undefined,
    course: time
      ? { time, ask: Float64Array.from(parts.ask), have: Float64Array.from(parts.have) }
      : undefined,
  };
}

const absolute = (values: Float64Array): Float64Array => values.map(Math.abs);
const constant = (count: number, value: number): Float64Array => new Float64Array(count).fill(value);

/** Ledger lines of one planned axis. */
function axisLines(setting: PlanSetting, axis: ArrayAxis, schedule: AxisSchedule): readonly LedgerLine[] {
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

/** Centre of pressure against the middle of its support, and friction against the yaw leak: firm footing only. */
function groundLines(setting: PlanSetting, schedules: readonly AxisSchedule[]): readonly LedgerLine[] {
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
function leakLine(setting: PlanSetting, tilts: Float64Array, rates: Float64Array): readonly LedgerLine[] {
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

/** Rim stress and bearing life of the hardest-worked wheel. */
function wheelLines(compiled: CompiledRig, greatestRate: number): readonly LedgerLine[] {
  const { gyros } = compiled.rig.array;
  const lines: LedgerLine[] = [];
  let rim: LedgerLine | undefined;
  let bearing: LedgerLine | undefined;
  gyros.forEach((gyro, i) => {
    const wheel = compiled.wheels[i];
    if (!wheel || gyro.speed === 0) return;
    const outcome = wheelStress(gyro.wheel.parts, gyro.speed);
    const hardest = outcome.kind === 'stressed' ? outcome.stress.lines[0] : undefined;
    if (hardest) {
      const line = lineOf({
        name: 'rimStress',
        label: 'Wheel stress',
        dimension: 'stress',
        ask: [hardest.stress],
        have: [hardest.allowable / USUAL_SPEED_SQUARED_FACTOR],
        askFormula: hardest.note.formula,
        haveFormula: 'minimum allowable / factor on speed squared',
        inputs: [
          input('Speed', gyro.speed, 'spinRate'),
          input('Density', MATERIALS[hardest.material].density, 'density'),
          input('Minimum allowable', hardest.allowable, 'stress'),
          input('Factor', USUAL_SPEED_SQUARED_FACTOR, 'ratio'),
        ],
        source: hardest.note.source,
      });
      if (!rim || line.spare < rim.spare) rim = line;
    }
    const momentum = wheel.spinInertia * gyro.speed;
    const load = bearingLoads({
      mass: wheel.mass,
      momentum,
      unbalance: permissibleUnbalance(gyro.wheel.balanceGrade, gyro.speed, wheel.mass),
      speed: gyro.speed,
      gimbalRate: greatestRate,
      toLeft: gyro.bearing.span / 2,
      toRight: gyro.bearing.span / 2,
      preload: 0,
      loadFactor: 1,
    })[0];
    const equivalent = equivalentDynamicLoad(load.radial, load.axial, gyro.bearing.staticRating);
    const turns = (gyro.speed * ASKED_BEARING_LIFE) / (2 * Math.PI);
    const line = lineOf({
      name: 'bearing',
      label: 'Bearing life',
      dimension: 'force',
      ask: [equivalent * Math.cbrt(turns / 1e6)],
      have: [gyro.bearing.dynamicRating],
      askFormula: 'P ∛(turns / 10⁶), P from weight, unbalance and the gyroscopic couple h r / span',
      haveFormula: 'dynamic load rating C',
      inputs: [
        input('Load from the gyroscopic couple', load.gyroscopic, 'force'),
        input('Load from unbalance', load.unbalance, 'force'),
        input('Load from weight', load.weight, 'force'),
        input('Life asked', ASKED_BEARING_LIFE, 'time'),
      ],
      source: 'ISO 281:2007; 1,000 hours is common practice',
    });
    if (!bearing || line.spare < bearing.spare) bearing = line;
  });
  if (rim) lines.push(rim);
  if (bearing) lines.push(bearing);
  return lines;
}

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
