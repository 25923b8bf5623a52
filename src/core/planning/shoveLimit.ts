import type { AxisSchedule } from './momentumPlanCheck';
import type { AxisArray } from './momentumPlanProblem';

/** A body that topples about its line of support: I phi'' = k phi + torque. */
export interface TopplingBody {
  /** kg m^2 about the line of support */
  readonly inertia: number;
  /** N m/rad, positive topples */
  readonly stiffness: number;
}

const requirePositive = (name: string, value: number, unit: string): void => {
  if (!(value > 0)) throw new RangeError(`${name} is ${value} ${unit}; it must be positive`);
};

/** Toppling rate sqrt(k / I), 1/s; zero for a body that does not topple. */
export const topplingRate = ({ inertia, stiffness }: TopplingBody): number =>
  Math.sqrt(Math.max(0, stiffness) / inertia);

/**
 * Largest angular impulse about the line of support that the array can take from rest: with a = sqrt(k/I)
 *
 *   P z = M (1 - exp(-a dH / M)) / a,
 *
 * which tends to dH for a body that topples slowly or an array that is fast.
 *
 * @param body     about its line of support
 * @param momentum dH, N m s, that the array can still take up on that side; 0 or more
 * @param torque   M, N m, largest torque of the array; Infinity is allowed
 * @returns N m s
 *
 * O(1). The unstable mode must end at nothing when the array has given all: the integral of
 * M exp(-a t) over dH / M equals the impulse.
 */
export function largestAngularImpulse(body: TopplingBody, momentum: number, torque: number): number {
  requirePositive('inertia', body.inertia, 'kg m^2');
  requirePositive('torque', torque, 'N m');
  if (!(momentum >= 0)) throw new RangeError(`momentum is ${momentum} N m s; it must not be negative`);
  const a = topplingRate(body);
  // expm1 keeps every digit where the exponent is small, and the ratio tends to one there
  const exponent = torque === Infinity ? 0 : (a * momentum) / torque;
  return exponent === 0 ? momentum : (momentum * -Math.expm1(-exponent)) / exponent;
}

/** The same as a shove of so many N s at a height of z m above the line of support. */
export function largestShove(body: TopplingBody, momentum: number, torque: number, height: number): number {
  requirePositive('height', height, 'm');
  return largestAngularImpulse(body, momentum, torque) / height;
}

/**
 * How long a steady moment can be held before the array saturates, s: dH over the moment.
 *
 * @param momentum N m s still available on that side
 * @param moment   N m, a side load times its height, or weight times a trim error; either sign
 * @returns Infinity for no moment
 */
export function holdingTime(momentum: number, moment: number): number {
  if (!(momentum >= 0)) throw new RangeError(`momentum is ${momentum} N m s; it must not be negative`);
  return moment === 0 ? Infinity : momentum / Math.abs(moment);
}

/**
 * How long a gimballed array can give a steady torque until it meets a limit, and which one it is: its tilt
 * limit, or, on the way there, its tilt rate (rate = torque / (momentum cos(tilt)) grows with tilt).
 *
 * @param array  gimballed
 * @param tilt   rad, where it starts, inside its limits
 * @param torque N m on the body; positive drives the tilt towards tiltMin
 * @returns s; 0 when the tilt rate forbids the torque at the start
 *
 * O(1). From momentum sin(tilt) = start - torque * time.
 */
export function timeToLimit(
  array: AxisArray,
  tilt: number,
  torque: number,
): { readonly time: number; readonly limit: 'tilt' | 'tilt rate' } {
  if (array.kind !== 'gimballed') throw new RangeError('a reaction wheel has no tilt');
  if (!(tilt >= array.tiltMin && tilt <= array.tiltMax)) {
    throw new RangeError(`tilt is ${tilt} rad; it must be from ${array.tiltMin} to ${array.tiltMax}`);
  }
  if (torque === 0) return { time: Infinity, limit: 'tilt' };
  const size = Math.abs(torque);
  const side = torque < 0 ? 1 : -1;
  const ratio = size / (array.momentum * array.tiltRate);
  if (ratio > Math.cos(tilt)) return { time: 0, limit: 'tilt rate' };
  const tiltSine = Math.sin(side > 0 ? array.tiltMax : -array.tiltMin);
  const rateSine = Math.sqrt(1 - ratio * ratio);
  const reach = Math.min(tiltSine, rateSine) - side * Math.sin(tilt);
  return { time: (array.momentum * reach) / size, limit: rateSine < tiltSine ? 'tilt rate' : 'tilt' };
}

/** Time to the tilt limit at a steady tilt rate, s; Infinity at rest. */
export function timeToTiltLimit(array: AxisArray, tilt: number, rate: number): number {
  if (rate === 0) return Infinity;
  return ((rate > 0 ? array.tiltMax : array.tiltMin) - tilt) / rate;
}

/** What brings the array back to the middle: a moment of the support's own, or the shift that makes it. */
export interface Recentring {
  /** N m, signed: the moment about the support, ask and disturbance apart, held for the whole time */
  readonly moment: number;
  /** m, signed: shift of the centre of mass under the weight that gives that moment */
  readonly shift: number;
}

/**
 * Steady moment that empties stored momentum in a chosen time.
 *
 * @param momentum N m s stored now, signed
 * @param time     s
 * @param weight   N
 */
export function findRecentring(momentum: number, time: number, weight: number): Recentring {
  requirePositive('time', time, 's');
  requirePositive('weight', weight, 'N');
  const moment = momentum === 0 ? 0 : -momentum / time;
  return { moment, shift: moment / weight };
}

/**
 * Largest angular impulse that can be taken at each node of a plan, the lesser of both sides.
 *
 * Counts the momentum the plan has not used at that node, and the least torque on the way to the limit less
 * what the plan is giving then: a safe figure, not the largest conceivable.
 *
 * @param out one for each node of the schedule, N m s
 */
export function fillImpulseLimit(
  body: TopplingBody,
  array: AxisArray,
  schedule: AxisSchedule,
  out: Float64Array,
): void {
  const isGimballed = array.kind === 'gimballed';
  const most = isGimballed ? array.momentum * Math.sin(array.tiltMax) : array.momentum;
  const least = isGimballed ? array.momentum * Math.sin(array.tiltMin) : -array.momentum;
  const steepest = Math.cos(Math.max(array.tiltMax, -array.tiltMin));
  const torque = Math.min(array.torque, isGimballed ? array.momentum * array.tiltRate * steepest : Infinity);
  for (let k = 0; k < out.length; k++) {
    const e = schedule.momentum[k];
    const left = torque - Math.abs(schedule.torque[k]);
    const room = Math.max(0, Math.min(most - e, e - least));
    out[k] = left > 0 && room > 0 ? largestAngularImpulse(body, room, left) : 0;
  }
}
