/** Ledger lines of a steered array: of its hardest-worked gimbal, and how near it comes to a singularity. */
import type { LedgerLine } from './ledger';
import { input, lineOf } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';
import { LEAST_MEASURE_SHARE, type SteeredArray } from './steeredArray';
import type { SteeredCourse } from './steeredPlan';

/** Ask and have of the servo with the least to spare, instant by instant. */
interface Hardest {
  readonly ask: Float64Array;
  readonly have: Float64Array;
}

function hardestOf(
  nodes: number,
  servos: number,
  at: (node: number, servo: number) => readonly [ask: number, have: number],
): Hardest {
  const out = { ask: new Float64Array(nodes), have: new Float64Array(nodes) };
  for (let k = 0; k < nodes; k++) {
    let most = Number.NEGATIVE_INFINITY;
    for (let i = 0; i < servos; i++) {
      const [ask, have] = at(k, i);
      const used = have > 0 ? ask / have : ask > 0 ? Number.POSITIVE_INFINITY : 0;
      if (used <= most) continue;
      most = used;
      out.ask[k] = ask;
      out.have[k] = have;
    }
  }
  return out;
}

/**
 * Torque of one servo: J d2(tilt)/dt2 of all it turns, and the gyroscopic load of the body's lean, for each wheel its
 * momentum across roll times the lean rate. N*m, signed; node after node.
 */
export function steeredServoTorque(
  setting: PlanSetting,
  array: SteeredArray,
  steering: SteeredCourse,
  schedules: readonly AxisSchedule[],
): Float64Array {
  const nodes = setting.time.length;
  const { servos } = steering;
  const torque = new Float64Array(nodes * servos);
  const { hingeInertia } = setting.compiled.model;
  array.members.forEach(({ gyro, servo, ratio }, m) => {
    for (let k = 0; k < nodes; k++) {
      const at = k * servos + servo;
      const tilt = ratio * steering.tilt[at];
      torque[at] += ratio * ratio * hingeInertia[gyro] * steering.tiltAcceleration[at];
      // g . (omega x h) = omega . (h x g), and h x g is minus dh/dtilt.
      const s = Math.sin(tilt);
      const c = Math.cos(tilt);
      for (let a = 0; a < schedules.length; a++) {
        const j = setting.axes[a].axis === 'roll' ? 0 : 1;
        const turning = array.cosine[3 * m + j] * s - array.sine[3 * m + j] * c;
        torque[at] += ratio * schedules[a].leanRate[k] * turning;
      }
    }
  });
  return torque;
}

/** Lines of tilt, tilt rate, servo torque and heat of the hardest-worked servo, and of the distance to singularity. */
export function steeredLines(
  setting: PlanSetting,
  array: SteeredArray,
  steering: SteeredCourse,
  schedules: readonly AxisSchedule[],
): readonly LedgerLine[] {
  const { time } = setting;
  const nodes = time.length;
  const { servos } = steering;
  const torque = steeredServoTorque(setting, array, steering, schedules);
  const tilt = hardestOf(nodes, servos, (k, i) => {
    const value = steering.tilt[k * servos + i];
    return [Math.abs(value), value >= 0 ? array.tiltMax[i] : -array.tiltMin[i]];
  });
  const rate = hardestOf(nodes, servos, (k, i) => [
    Math.abs(steering.tiltRate[k * servos + i]),
    array.rateLimit[i],
  ]);
  const effort = hardestOf(nodes, servos, (k, i) => {
    const { stallTorque, noLoadSpeed } = array.servos[i];
    const speed = Math.abs(steering.tiltRate[k * servos + i]);
    return [Math.abs(torque[k * servos + i]), stallTorque * Math.max(0, 1 - speed / noLoadSpeed)];
  });
  const heats = array.servos.map((servo, i) => {
    let squares = 0;
    for (let k = 0; k < nodes; k++) squares += torque[k * servos + i] ** 2;
    return { ask: Math.sqrt(squares / nodes), have: servo.continuousTorque };
  });
  const hottest = heats.reduce((a, b) => (b.ask / b.have > a.ask / a.have ? b : a));
  const law = 'steering law with null motion; Wie, JGCD 27(2) 2004';
  const line = 'straight speed-torque line of a servo, common practice';
  return [
    lineOf({
      name: 'tilt',
      label: 'Tilt of the furthest gimbal',
      dimension: 'angle',
      time,
      ...tilt,
      askFormula: 'least tilts δ with h(δ) = h at rest + momentum planned',
      haveFormula: 'tilt limit',
      inputs: [input('Gimbals steered', servos, 'count')],
      source: law,
    }),
    lineOf({
      name: 'tiltRate',
      label: 'Tilt rate of the quickest gimbal',
      dimension: 'angularRate',
      time,
      ...rate,
      askFormula: '|dδ/dt|, A dδ/dt = dh/dt',
      haveFormula: 'ω₀ (1 − T_c / T_s)',
      inputs: [input('Gimbals steered', servos, 'count')],
      source: `${law}; ${line}`,
    }),
    lineOf({
      name: 'servoTorque',
      label: 'Torque of the hardest-worked servo',
      dimension: 'torque',
      time,
      ...effort,
      askFormula: '|J_g d²δ/dt² + ω_body · (h × g)|',
      haveFormula: 'T_s (1 − |dδ/dt| / ω₀)',
      inputs: [input('Stall torque T_s', array.servos[0].stallTorque, 'torque')],
      source: `array law; ${line}`,
    }),
    lineOf({
      name: 'servoHeat',
      label: 'Heat of the hottest servo',
      dimension: 'torque',
      ask: [hottest.ask],
      have: [hottest.have],
      askFormula: '√(mean T²)',
      haveFormula: 'continuous torque',
      inputs: [input('Continuous torque', hottest.have, 'torque')],
      source: 'winding heat goes with torque squared, common practice',
    }),
    lineOf({
      name: 'singularity',
      label: 'Way towards singularity',
      dimension: 'ratio',
      time,
      ask: steering.singularity.map((share) => Math.max(0, 1 - share)),
      have: new Float64Array(nodes).fill(1 - LEAST_MEASURE_SHARE),
      askFormula: '1 − √(det A Aᵀ) / √(det A Aᵀ at rest)',
      haveFormula: `1 − ${LEAST_MEASURE_SHARE}, the share of the distance that is kept`,
      inputs: [
        input(
          '√(det A Aᵀ) at rest over mean gain cubed',
          Math.sqrt(array.restMeasure / array.meanSquare ** 3),
          'ratio',
        ),
      ],
      source: 'measure of Yoshikawa, Int. J. Robotics Research 4 (1985)',
    }),
  ];
}
