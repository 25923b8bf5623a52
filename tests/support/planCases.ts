import {
  type AxisArray,
  type AxisPlan,
  defaultPlanWeights,
  type FirmSupport,
  type LeanSupport,
  type MomentumPlanProblem,
} from '../../src/core/planning/momentumPlanProblem';

// Rigs and gaits of round figures for the planner's tests; nothing here is measured.

/** A scissored pair of 0.5 N m s wheels, tilt 0.5 rad either way. */
export const pairOfWheels: AxisArray = {
  kind: 'gimballed',
  momentum: 1,
  tiltMin: -0.5,
  tiltMax: 0.5,
  tiltRate: 6,
  torque: Number.POSITIVE_INFINITY,
  servo: null,
};

/** A reaction wheel that gives 1.2 N m and takes up 0.6 N m s. */
export const reactionWheel: AxisArray = {
  kind: 'reaction',
  momentum: 0.6,
  tiltMin: 0,
  tiltMax: 0,
  tiltRate: 0,
  torque: 1.2,
  servo: null,
};

/** A body of 60 N that swings from foot to foot: ask of a sine, support first left, then right. */
export function swayingFeet(intervals: number, amplitude: number, phase = 0, cycles = 1): FirmSupport {
  const ask = new Float64Array(intervals);
  const pressureMin = new Float64Array(intervals);
  const pressureMax = new Float64Array(intervals);
  for (let k = 0; k < intervals; k++) {
    const share = ((cycles * k) / intervals + phase) % 1;
    ask[k] = amplitude * Math.sin(2 * Math.PI * share);
    const isLeft = share < 0.5;
    pressureMin[k] = isLeft ? 0.01 : -0.03;
    pressureMax[k] = isLeft ? 0.03 : -0.01;
  }
  return { kind: 'firm', ask, verticalForce: new Float64Array(intervals).fill(60), pressureMin, pressureMax };
}

/** A body of 8 kg, 0.35 m tall, on an edge, pushed by a sine of `amplitude` N m. */
export function leaningBody(nodes: number, amplitude: number, cycles: number): LeanSupport {
  return {
    kind: 'lean',
    inertia: 1.2,
    stiffness: 27,
    damping: 0.4,
    demand: Float64Array.from(
      { length: nodes },
      (_, k) => amplitude * Math.sin((2 * Math.PI * cycles * k) / nodes),
    ),
    weight: 78,
    leanMin: -0.08,
    leanMax: 0.08,
  };
}

export const cyclicPlan = (
  axes: readonly AxisPlan[],
  intervals: number,
  period: number,
): MomentumPlanProblem => ({
  intervals,
  step: period / intervals,
  ends: { kind: 'cyclic' },
  axes,
  weights: defaultPlanWeights,
});

/** One axis, firm feet, a pair of wheels, over a step cycle of 2.4 s. */
export const walkingPlan = (
  intervals: number,
  amplitude: number,
  array = pairOfWheels,
): MomentumPlanProblem =>
  cyclicPlan([{ array, support: swayingFeet(intervals, amplitude), bodyRate: null }], intervals, 2.4);
