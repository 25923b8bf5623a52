/** What a steered array gives about roll, and pitch, in the terms the planner takes: an ellipse inside its envelope. */
import type { CompiledRig } from '../physics';
import type { ArrayAxis } from './arrayAxes';
import { workingSpeed } from './gimbalGroups';
import type { AxisArray } from './momentumPlanProblem';
import type { PlannedArray } from './rigPlan';
import { type AxisEnvelope, axisEnvelope, steeredArrayOf } from './steeredArray';

/** Share of the envelope planned with when roll and pitch are asked at once: the square inside a circle. */
const SQUARE_IN_CIRCLE = Math.SQRT1_2;

/**
 * Axes that stand in for a steered array, or why it cannot be steered.
 *
 * @param withPitch  whether the footing lets the array work in pitch too
 */
export function steeredAxes(compiled: CompiledRig, withPitch: boolean): PlannedArray {
  const array = steeredArrayOf(compiled);
  const refuse = (unplanned: string): PlannedArray => ({ axes: [], steered: undefined, unplanned });
  if (array.count < 3) {
    return refuse(
      `Steering needs at least 3 gimbals that servos turn one by one, so that pitch and yaw can be kept at nothing; this array has ${array.count}.`,
    );
  }
  const size = array.meanSquare ** 3;
  if (!(array.restMeasure > 1e-9 * size)) {
    return refuse(
      'At rest this array is singular: about one axis it gives no torque at all. Turn a spin axis or a gimbal axis in Assemble.',
    );
  }
  const envelope = { roll: axisEnvelope(array, 0), pitch: axisEnvelope(array, 1) };
  if (!(envelope.roll.momentum > 0)) {
    return refuse(
      'No roll momentum can be stored within the tilt limits while pitch and yaw are kept at nothing; widen the tilt limits.',
    );
  }
  const isBoth = withPitch && envelope.pitch.momentum > 0;
  const share = isBoth ? SQUARE_IN_CIRCLE : 1;
  const slowest = array.servos.reduce((a, b) => (workingSpeed(b) < workingSpeed(a) ? b : a));
  const names = isBoth ? (['roll', 'pitch'] as const) : (['roll'] as const);
  const axes = names.map(
    (axis): ArrayAxis => ({
      axis,
      isSteered: true,
      servo: slowest,
      followers: [],
      array: shrinkArray(fitEllipse(envelope[axis]), share),
    }),
  );
  return { axes, steered: array, unplanned: undefined };
}

/**
 * The widest ellipse of momentum and torque, as that of one gimballed wheel, that stays within an envelope at every
 * point of it: (torque / rate)^2 + held^2 <= momentum^2. O(points).
 */
export function fitEllipse(envelope: AxisEnvelope): AxisArray {
  const { momentum: most, held, torque } = envelope;
  const first = torque[0] ?? 0;
  let momentum = Number.POSITIVE_INFINITY;
  held.forEach((e, k) => {
    const share = (torque[k] as number) / first;
    if (e > 0 && share < 1) momentum = Math.min(momentum, e / Math.sqrt(1 - share * share));
  });
  // A limit well inside the ellipse's end, so that its tilt stays short of a right angle.
  momentum = Math.min(Math.max(momentum, 1.02 * most), 20 * most);
  let tiltRate = Number.POSITIVE_INFINITY;
  held.forEach((e, k) => {
    tiltRate = Math.min(tiltRate, (torque[k] as number) / Math.sqrt(momentum * momentum - e * e));
  });
  const tilt = Math.asin(most / momentum);
  return {
    kind: 'gimballed',
    momentum,
    tiltMin: -tilt,
    tiltMax: tilt,
    tiltRate,
    torque: Number.POSITIVE_INFINITY,
    servo: null,
  };
}

/** The same with a share of both momentum and torque. */
export const shrinkArray = (array: AxisArray, share: number): AxisArray => ({
  ...array,
  momentum: array.momentum * share,
});

/** Most momentum and torque of a stand-in, N*m*s and N*m at rest. */
export const standInLimits = (array: AxisArray): { readonly momentum: number; readonly torque: number } => ({
  momentum: array.momentum * Math.sin(array.tiltMax),
  torque: array.momentum * array.tiltRate,
});
