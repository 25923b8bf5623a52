import type { AxisPlan, MomentumPlanProblem } from './momentumPlanProblem';

// What-if copies of a plan: the same problem with one limit let out. Nothing given is changed.

const changeAxes = (
  problem: MomentumPlanProblem,
  change: (axis: AxisPlan) => AxisPlan,
): MomentumPlanProblem => ({ ...problem, axes: problem.axes.map(change) });

/** Every array with `share` times its momentum, and wheels to match. */
export const scaleMomentum = (problem: MomentumPlanProblem, share: number): MomentumPlanProblem =>
  changeAxes(problem, (axis) => ({
    ...axis,
    array: {
      ...axis.array,
      momentum: axis.array.momentum * share,
      servo: axis.array.servo && {
        ...axis.array.servo,
        wheelMomentum: axis.array.servo.wheelMomentum * share,
      },
    },
  }));

/** Every array with `share` times its tilt rate. */
export const scaleTiltRate = (problem: MomentumPlanProblem, share: number): MomentumPlanProblem =>
  changeAxes(problem, (axis) => ({
    ...axis,
    array: { ...axis.array, tiltRate: axis.array.tiltRate * share },
  }));

/** Every array with `more` N m on top of its torque limit. */
export const addTorque = (problem: MomentumPlanProblem, more: number): MomentumPlanProblem =>
  changeAxes(problem, (axis) => ({ ...axis, array: { ...axis.array, torque: axis.array.torque + more } }));

/** Every servo with `more` N m on top of its own. */
export const addServoTorque = (problem: MomentumPlanProblem, more: number): MomentumPlanProblem =>
  changeAxes(problem, (axis) => {
    const { servo } = axis.array;
    return servo
      ? { ...axis, array: { ...axis.array, servo: { ...servo, torque: servo.torque + more } } }
      : axis;
  });

/** Firm support wider by `more` m on each side. */
export const widenSupport = (problem: MomentumPlanProblem, more: number): MomentumPlanProblem =>
  changeAxes(problem, (axis) => {
    const { support } = axis;
    if (support.kind !== 'firm') return axis;
    return {
      ...axis,
      support: {
        ...support,
        pressureMin: support.pressureMin.map((v) => v - more),
        pressureMax: support.pressureMax.map((v) => v + more),
      },
    };
  });

/** Lean allowed `more` rad further each way. */
export const widenLean = (problem: MomentumPlanProblem, more: number): MomentumPlanProblem =>
  changeAxes(problem, (axis) => {
    const { support } = axis;
    if (support.kind !== 'lean') return axis;
    return {
      ...axis,
      support: { ...support, leanMin: support.leanMin - more, leanMax: support.leanMax + more },
    };
  });

/** The centre of mass of one axis moved by `shift` m: adds weight times shift to what is asked. */
export const shiftCentre = (
  problem: MomentumPlanProblem,
  axisIndex: number,
  shift: number,
): MomentumPlanProblem => ({
  ...problem,
  axes: problem.axes.map((axis, i) => {
    const { support } = axis;
    if (i !== axisIndex) return axis;
    if (support.kind === 'lean') {
      return {
        ...axis,
        support: { ...support, demand: support.demand.map((v) => v + support.weight * shift) },
      };
    }
    return {
      ...axis,
      support: { ...support, ask: support.ask.map((v, k) => v + support.verticalForce[k] * shift) },
    };
  }),
});
