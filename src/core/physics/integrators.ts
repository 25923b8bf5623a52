/** Integrators: fixed-step RK4 in step with a control loop, and an adaptive high-order one for free motion. */
import { dop853Error3, dop853Error5, dop853Nodes, dop853Stages, dop853Weights } from './dop853Table';

/** Writes the rate of `state` at `time` to `out`; must not keep or alter `state`. */
export type Derivative = (time: number, state: Float64Array, out: Float64Array) => void;

export interface Rk4Work {
  readonly k1: Float64Array;
  readonly k2: Float64Array;
  readonly k3: Float64Array;
  readonly k4: Float64Array;
  readonly stage: Float64Array;
}

export const createRk4Work = (size: number): Rk4Work => ({
  k1: new Float64Array(size),
  k2: new Float64Array(size),
  k3: new Float64Array(size),
  k4: new Float64Array(size),
  stage: new Float64Array(size),
});

/**
 * One step of the classical fourth-order Runge-Kutta method; `state` is moved in place. Four derivatives,
 * allocates nothing. Source: Hairer, Norsett and Wanner (1993), sec. II.1.
 */
export function stepRk4(
  derivative: Derivative,
  time: number,
  state: Float64Array,
  step: number,
  work: Rk4Work,
): void {
  const { k1, k2, k3, k4, stage } = work;
  const n = state.length;
  const half = step / 2;
  derivative(time, state, k1);
  for (let i = 0; i < n; i++) stage[i] = state[i]! + half * k1[i]!;
  derivative(time + half, stage, k2);
  for (let i = 0; i < n; i++) stage[i] = state[i]! + half * k2[i]!;
  derivative(time + half, stage, k3);
  for (let i = 0; i < n; i++) stage[i] = state[i]! + step * k3[i]!;
  derivative(time + step, stage, k4);
  const sixth = step / 6;
  for (let i = 0; i < n; i++) state[i] = state[i]! + sixth * (k1[i]! + 2 * (k2[i]! + k3[i]!) + k4[i]!);
}

/** One step of explicit Euler. Kept only to show what it does to a gyro: it makes energy. */
export function stepEuler(
  derivative: Derivative,
  time: number,
  state: Float64Array,
  step: number,
  work: Rk4Work,
): void {
  derivative(time, state, work.k1);
  for (let i = 0; i < state.length; i++) state[i] = state[i]! + step * work.k1[i]!;
}

export interface AdaptiveOptions {
  readonly absolute: number;
  readonly relative: number;
  /** First step, s; chosen from the tolerance when left out. */
  readonly firstStep?: number;
  /** Most steps to take before giving up. Default 1e6. */
  readonly mostSteps?: number;
}

export type AdaptiveOutcome =
  | { readonly kind: 'reached'; readonly steps: number; readonly rejected: number; readonly lastStep: number }
  | { readonly kind: 'gave-up'; readonly reason: 'too many steps' | 'step too small'; readonly time: number };

/**
 * Integrates from one time to another, either direction, by the eighth-order Dormand-Prince method with step
 * control; `state` is moved in place. Twelve derivatives a step; allocates its stages once per call.
 *
 * @param accepted  called after every accepted step with the state, which it may renormalise in place
 *
 * Source: Hairer, Norsett and Wanner (1993), sec. II.5 and II.4 (step control), code DOP853.
 */
export function integrateAdaptively(
  derivative: Derivative,
  from: number,
  to: number,
  state: Float64Array,
  options: AdaptiveOptions,
  accepted?: (time: number, state: Float64Array) => void,
): AdaptiveOutcome {
  const n = state.length;
  const k = Array.from({ length: 12 }, () => new Float64Array(n));
  const stage = new Float64Array(n);
  const e5 = new Float64Array(n);
  const e3 = new Float64Array(n);
  const direction = to >= from ? 1 : -1;
  const most = options.mostSteps ?? 1_000_000;
  let time = from;
  let step = Math.min(
    options.firstStep ?? firstStepOf(derivative, from, state, options, k),
    Math.abs(to - from),
  );
  let steps = 0;
  let rejected = 0;
  let grows = true;
  while (direction * (to - time) > 0) {
    if (steps + rejected >= most) return { kind: 'gave-up', reason: 'too many steps', time };
    if (!(step > 1e-14 * Math.max(1, Math.abs(time))))
      return { kind: 'gave-up', reason: 'step too small', time };
    const left = Math.abs(to - time);
    const isLast = step >= left;
    const h = direction * (isLast ? left : step);
    takeStages(derivative, time, state, h, k, stage);
    const error = errorOf(state, stage, k, h, options, e5, e3);
    if (error <= 1) {
      time = isLast ? to : time + h;
      state.set(stage);
      accepted?.(time, state);
      steps++;
      const growth = error === 0 ? 6 : Math.min(6, 0.9 * error ** (-1 / 8));
      step = Math.abs(h) * (grows ? Math.max(growth, 1 / 3) : Math.min(1, growth));
      if (isLast) step = Math.max(step, options.firstStep ?? 0);
      grows = true;
    } else {
      rejected++;
      step = Math.abs(h) * (Number.isFinite(error) ? Math.max(1 / 3, 0.9 * error ** (-1 / 8)) : 0.1);
      grows = false;
    }
  }
  return { kind: 'reached', steps, rejected, lastStep: step };
}

/** Adds k times a vector: the inner loop of everything below. A third of the method's weights are zero and are skipped. */
function addScaled(out: Float64Array, a: Float64Array, k: number): void {
  if (k === 0) return;
  for (let i = 0; i < out.length; i++) out[i] = out[i]! + k * a[i]!;
}

/** Twelve stages; the proposed new state is left in `stage`. */
function takeStages(
  derivative: Derivative,
  time: number,
  state: Float64Array,
  h: number,
  k: readonly Float64Array[],
  stage: Float64Array,
): void {
  derivative(time, state, k[0]!);
  let at = 0;
  for (let s = 1; s < 12; s++) {
    stage.set(state);
    for (let j = 0; j < s; j++) addScaled(stage, k[j]!, h * dop853Stages[at + j]!);
    at += s;
    derivative(time + h * dop853Nodes[s]!, stage, k[s]!);
  }
  stage.set(state);
  for (let j = 0; j < 12; j++) addScaled(stage, k[j]!, h * dop853Weights[j]!);
}

/** Error of a step relative to the tolerance: below 1 passes. The fifth- and third-order estimates combined. */
function errorOf(
  state: Float64Array,
  next: Float64Array,
  k: readonly Float64Array[],
  h: number,
  options: AdaptiveOptions,
  e5: Float64Array,
  e3: Float64Array,
): number {
  const n = state.length;
  e5.fill(0);
  e3.fill(0);
  for (let j = 0; j < 12; j++) {
    addScaled(e5, k[j]!, dop853Error5[j]!);
    addScaled(e3, k[j]!, dop853Error3[j]!);
  }
  let five = 0;
  let three = 0;
  for (let i = 0; i < n; i++) {
    const scale = options.absolute + options.relative * Math.max(Math.abs(state[i]!), Math.abs(next[i]!));
    five += (e5[i]! / scale) * (e5[i]! / scale);
    three += (e3[i]! / scale) * (e3[i]! / scale);
  }
  if (five === 0 && three === 0) return 0;
  return (Math.abs(h) * five) / Math.sqrt((five + 0.01 * three) * n);
}

function firstStepOf(
  derivative: Derivative,
  time: number,
  state: Float64Array,
  options: AdaptiveOptions,
  k: readonly Float64Array[],
): number {
  derivative(time, state, k[0]!);
  let size = 0;
  let rate = 0;
  for (let i = 0; i < state.length; i++) {
    const scale = options.absolute + options.relative * Math.abs(state[i]!);
    size += (state[i]! / scale) ** 2;
    rate += (k[0]![i]! / scale) ** 2;
  }
  return size < 1e-10 || rate < 1e-10 ? 1e-6 : 0.01 * Math.sqrt(size / rate);
}
