import { discretiseLean, type LeanStep } from './leanStep';
import { scaleOfTorque } from './momentumPlanBounds';
import { type AxisPlan, type LimitName, limitNames, type MomentumPlanProblem } from './momentumPlanProblem';

/** What a plan does about one axis, node by node (N + 1 nodes; a cyclic plan repeats node 0 as node N). */
export interface AxisSchedule {
  /** N m s: momentum of the array along the axis; straight between nodes */
  readonly momentum: Float64Array;
  /** N m: torque of the array on the body over the interval that starts at the node; 0 after a sequence */
  readonly torque: Float64Array;
  /** rad; zero for a reaction wheel */
  readonly tilt: Float64Array;
  /** rad/s, just after the node */
  readonly tiltRate: Float64Array;
  /** rad/s^2 at the node: jump of the tilt rate spread over one step about the node, and its smooth part */
  readonly tiltAcceleration: Float64Array;
  /** N m of one servo at the node; zero without a servo */
  readonly servoTorque: Float64Array;
  /** m, just after the node; zero where there is no firm support or no force on it */
  readonly pressure: Float64Array;
  /** rad and rad/s; zero on firm footing */
  readonly lean: Float64Array;
  readonly leanRate: Float64Array;
}

/** The worst instant of one limit over a whole plan. */
export interface LimitFinding {
  readonly limit: LimitName;
  readonly axis: number;
  /** s from the start of the plan */
  readonly time: number;
  /** by how much the limit is passed, in its own unit; negative inside */
  readonly excess: number;
  /** asked and had, in the limit's own unit: spare is (have - ask) / have */
  readonly ask: number;
  readonly have: number;
}

interface Worst {
  time: number;
  excess: number;
  ask: number;
  have: number;
}

/** The worst of each limit of each axis: the instant at which ask passes have by most. */
type Findings = (Worst | null)[];

function note(
  findings: Findings,
  limit: number,
  axis: number,
  time: number,
  ask: number,
  have: number,
): void {
  const at = axis * limitNames.length + limit;
  const excess = ask - have;
  const kept = findings[at];
  if (!kept) {
    findings[at] = { time, excess, ask, have };
    return;
  }
  // written so that NaN is kept and cannot be lost again
  if (excess <= kept.excess || Number.isNaN(kept.excess)) return;
  kept.time = time;
  kept.excess = excess;
  kept.ask = ask;
  kept.have = have;
}

const [momentumLimit, rateLimit, torqueLimit, servoLimit, pressureLimit, leanLimit] = limitNames.map(
  (_, i) => i,
);

const mix = (values: Float64Array | null, k: number, share: number): number => {
  if (!values) return 0;
  const a = values[k % values.length];
  return a + (values[(k + 1) % values.length] - a) * share;
};

/** Servo torque at one instant of an interval, the jump of tilt rate at its node spread over one step. */
function servoTorqueAt(axis: AxisPlan, tilt: number, rate: number, jump: number, bodyRate: number): number {
  const { servo, kind } = axis.array;
  if (!servo) return 0;
  const smooth = kind === 'gimballed' ? rate * rate * Math.tan(tilt) : 0;
  return (
    servo.gimbals * (servo.gimbalInertia * (jump + smooth) - servo.wheelMomentum * bodyRate * Math.cos(tilt))
  );
}

function checkInterval(
  problem: MomentumPlanProblem,
  schedule: AxisSchedule,
  i: number,
  k: number,
  refine: number,
  fine: LeanStep | null,
  findings: Findings,
): void {
  const axis = problem.axes[i];
  const { array, support, bodyRate } = axis;
  const { step } = problem;
  const e0 = schedule.momentum[k];
  const rate = (schedule.momentum[k + 1] - e0) / step;
  const most = array.momentum * Math.sin(array.tiltMax);
  const least = array.momentum * Math.sin(-array.tiltMin);
  let lean = schedule.lean[k];
  let leanRate = schedule.leanRate[k];
  for (let j = 0; j <= refine; j++) {
    const share = j / refine;
    const time = (k + share) * step;
    const e = e0 + rate * share * step;
    if (array.kind === 'gimballed') {
      const sine = e / array.momentum;
      // momentum beyond 90 degrees makes the rate NaN, which is within no limit
      const tiltRate = rate / (array.momentum * Math.sqrt(1 - sine * sine));
      note(findings, momentumLimit, i, time, Math.abs(e), e >= 0 ? most : least);
      note(findings, rateLimit, i, time, Math.abs(tiltRate), array.tiltRate);
      if (array.servo) {
        const tilt = Math.asin(sine);
        const body = mix(bodyRate, k, share) + leanRate;
        // a change of tilt rate at a node takes from half a step before it to half a step after
        const node = 2 * j <= refine ? k : k + 1;
        const jump =
          schedule.tiltAcceleration[node] - schedule.tiltRate[node] ** 2 * Math.tan(schedule.tilt[node]);
        const torque = servoTorqueAt(axis, tilt, tiltRate, jump, body);
        note(findings, servoLimit, i, time, Math.abs(torque), array.servo.torque);
      }
    } else {
      note(findings, momentumLimit, i, time, Math.abs(e), array.momentum);
    }
    if (array.torque < Infinity) note(findings, torqueLimit, i, time, Math.abs(rate), array.torque);
    if (support.kind === 'firm') {
      const force = mix(support.verticalForce, k, share);
      const moment = mix(support.ask, k, share) + rate;
      const most = force * support.pressureMax[k] - moment;
      const least = moment - force * support.pressureMin[k];
      const half = (force * (support.pressureMax[k] - support.pressureMin[k])) / 2;
      // as a moment about the middle of the support: stays finite when the feet carry nothing
      note(findings, pressureLimit, i, time, half - Math.min(most, least), half);
    } else {
      const middle = (support.leanMax + support.leanMin) / 2;
      note(findings, leanLimit, i, time, Math.abs(lean - middle), support.leanMax - middle);
      if (fine && j < refine) {
        const d0 = mix(support.demand, k, share);
        const d1 = mix(support.demand, k, (j + 1) / refine);
        const next =
          fine.state[0] * lean +
          fine.state[1] * leanRate +
          fine.held[0] * (d0 - rate) +
          fine.ramp[0] * (d1 - d0);
        leanRate =
          fine.state[2] * lean +
          fine.state[3] * leanRate +
          fine.held[1] * (d0 - rate) +
          fine.ramp[1] * (d1 - d0);
        lean = next;
      }
    }
  }
  if (support.kind === 'lean') {
    // the schedule's own next state must be where the motion really goes
    const scale = Math.max(support.leanMax, -support.leanMin);
    const miss = Math.abs(lean - schedule.lean[k + 1]) / scale;
    if (!(miss <= 1e-6)) note(findings, leanLimit, i, (k + 1) * step, Infinity, scale);
  }
}

/**
 * Checks every limit of a plan on a grid finer than its nodes, from the problem and the schedule alone.
 *
 * Between nodes momentum runs straight and everything else follows from it by the laws of the array and of
 * the lean; nothing of the solver's is used.
 *
 * @param schedules one for each axis, N + 1 nodes
 * @param refine    points looked at in each interval
 * @returns the worst instant of every limit of every axis, in the order of limitNames
 *
 * O(N refine). Allocates.
 */
export function checkPlanLimits(
  problem: MomentumPlanProblem,
  schedules: readonly AxisSchedule[],
  refine: number,
): LimitFinding[] {
  const findings: Findings = new Array(limitNames.length * problem.axes.length).fill(null);
  problem.axes.forEach(({ support }, i) => {
    const fine =
      support.kind === 'lean'
        ? discretiseLean(support.inertia, support.stiffness, support.damping, problem.step / refine)
        : null;
    for (let k = 0; k < problem.intervals; k++) {
      checkInterval(problem, schedules[i], i, k, refine, fine, findings);
    }
  });
  return limitNames.flatMap((limit, l) =>
    problem.axes.flatMap((_, axis) => {
      const worst = findings[axis * limitNames.length + l];
      return worst ? { limit, axis, ...worst } : [];
    }),
  );
}

/** Whether every limit holds to `tolerance` of what there is. */
export function isWithinLimits(
  problem: MomentumPlanProblem,
  findings: readonly LimitFinding[],
  tolerance: number,
): boolean {
  return findings.every(({ limit, axis, excess, have }) => {
    // half of a support can be nothing; its moment is measured against what the array can give
    const scale = limit === 'centre of pressure' ? Math.max(have, scaleOfTorque(problem.axes[axis])) : have;
    return excess <= tolerance * scale;
  });
}

/** Servo torque of one servo at every node of a schedule. */
export function fillServoTorque(axis: AxisPlan, schedule: AxisSchedule): void {
  const { servoTorque, tilt, tiltRate, tiltAcceleration, leanRate } = schedule;
  if (!axis.array.servo) return;
  for (let k = 0; k < servoTorque.length; k++) {
    const body = mix(axis.bodyRate, k, 0) + leanRate[k];
    const smooth = tiltRate[k] * tiltRate[k] * Math.tan(tilt[k]);
    servoTorque[k] = servoTorqueAt(axis, tilt[k], tiltRate[k], tiltAcceleration[k] - smooth, body);
  }
}
