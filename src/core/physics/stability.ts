/** How a body falls or swings: eigenvalues of the linearised star, said in times and rates. */
import { EigenvalueDecomposition, type Matrix } from 'ml-matrix';
import { starCentre } from './conserved';
import { tippingEdge } from './footing';
import { type LinearStar, linearise } from './linearisation';
import { supportMargin } from './reactions';
import { cross3, dot3, norm3, scale3, subtract3, type Vec3 } from './spatial';
import { starAcceleration } from './starDynamics';
import { compileStar, restState, type StarDescription, type StarModel, standardGravity } from './starModel';
import { createStarWork, type StarWork } from './starWork';

/** One mode of motion: a real root, or a pair of complex ones told once. */
export interface Mode {
  /** rad/s; positive grows. */
  readonly real: number;
  /** rad/s, not negative. */
  readonly imaginary: number;
  readonly kind: 'grows' | 'dies out' | 'neutral';
  /** Time to double (grows) or halve (dies out), s; infinite when neutral. */
  readonly time: number;
  /** s; infinite for a mode that does not swing. */
  readonly period: number;
  /** Minus the real part over the size; 1 does not swing, negative grows. */
  readonly dampingRatio: number;
}

/** Roots smaller than this share of the largest count as neutral: twice the accuracy of a double zero root. */
const neutralShare = 1e-7;

/** Modes of a matrix, fastest growing first; conjugates told once. O(n^3). */
export function modesOf(A: Matrix): Mode[] {
  if (A.rows === 0) return [];
  const eigen = new EigenvalueDecomposition(A, { assumeSymmetric: false });
  const real = eigen.realEigenvalues;
  const imaginary = eigen.imaginaryEigenvalues;
  const largest = real.reduce((size, r, k) => Math.max(size, Math.hypot(r, imaginary[k]!)), 0);
  const small = Math.max(largest, 1) * neutralShare;
  const modes: Mode[] = [];
  real.forEach((r, k) => {
    const w = imaginary[k]!;
    if (w < 0) return;
    const size = Math.hypot(r, w);
    const kind = Math.abs(r) <= small ? 'neutral' : r > 0 ? 'grows' : 'dies out';
    modes.push({
      real: r,
      imaginary: w,
      kind,
      time: kind === 'neutral' ? Number.POSITIVE_INFINITY : Math.LN2 / Math.abs(r),
      period: w > small ? (2 * Math.PI) / w : Number.POSITIVE_INFINITY,
      dampingRatio: size > small ? -r / size : 0,
    });
  });
  return modes.sort((a, b) => b.real - a.real);
}

/** The linear star without what cannot move: the matrix on its live numbers. */
export const liveMatrix = (linear: LinearStar): Matrix =>
  linear.A.selection([...linear.live], [...linear.live]);

/** Modes of a star about a state. */
export const starModes = (
  model: StarModel,
  work: StarWork,
  state: Float64Array,
  effort: Float64Array,
): Mode[] => modesOf(liveMatrix(linearise(model, work, state, effort)));

/** How the body by itself falls about its footing: gimbals locked at rest, wheels standing still. */
export type FallFacts =
  | {
      readonly kind: 'topples';
      /** a in exp(a t), rad/s. */
      readonly rate: number;
      /** Time to double a lean, s. */
      readonly doubling: number;
      /** Roll at which it balances, rad; 0 when its centre stands over the footing. */
      readonly balanceAngle: number;
    }
  | {
      readonly kind: 'swings';
      /** s, as it swings, damping included. */
      readonly period: number;
      readonly dampingRatio: number;
      readonly balanceAngle: number;
    }
  | { readonly kind: 'creeps'; readonly halving: number; readonly balanceAngle: number }
  | { readonly kind: 'neutral'; readonly balanceAngle: number };

/** The star with every gimbal locked and every wheel at a held speed: what is left is one rigid body. */
export const lockedStar = (description: StarDescription): StarDescription => ({
  ...description,
  gyros: description.gyros.map((gyro) => ({ ...gyro, drive: { kind: 'locked' }, spin: 'held' })),
});

/**
 * Angle at which a body on an angle footing balances, rad. On an edge: where its centre stands above the line. Rolling
 * or floating: Newton's method from upright. NaN when it finds none (gravity along the line, no convergence).
 */
export function balanceAngle(model: StarModel, work: StarWork): number {
  const { footing } = model;
  if (footing.pose !== 'angle') return 0;
  if (footing.kind === 'edge') {
    const axis: Vec3 = [footing.axis[0]!, footing.axis[1]!, footing.axis[2]!];
    const across = (v: Vec3): Vec3 => subtract3(v, scale3(axis, dot3(axis, v)));
    const { com_B } = starCentre(model, new Float64Array(model.gimbals));
    const arm = across(subtract3(com_B, [footing.point[0]!, footing.point[1]!, footing.point[2]!]));
    const up = across(scale3([model.gravity_W[0]!, model.gravity_W[1]!, model.gravity_W[2]!], -1));
    if (norm3(arm) === 0 || norm3(up) === 0) return Number.NaN;
    return Math.atan2(dot3(axis, cross3(arm, up)), dot3(arm, up));
  }
  const state = restState(model);
  const effort = new Float64Array(model.effortSize);
  const acceleration = new Float64Array(model.accelerationSize);
  const speedRow = 1 + model.gimbals;
  for (let k = 0; k < 50; k++) {
    starAcceleration(model, work, state, effort, acceleration);
    const slope = linearise(model, work, state, effort).A.get(speedRow, 0);
    const step = acceleration[0]! / slope;
    if (!Number.isFinite(step)) return acceleration[0] === 0 ? state[0]! : Number.NaN;
    state[0] = state[0]! - step;
    if (Math.abs(step) < 1e-14) return state[0]!;
  }
  return Number.NaN;
}

/**
 * How a body falls by itself about its footing: toppling rate, or natural period and damping ratio, about where it
 * balances. Firm feet are taken about the side of the support nearest to tipping. Point and ball footings give their
 * fastest mode. O(n^3), once per weighing.
 */
export function fallFacts(description: StarDescription): FallFacts {
  const locked = lockedStar(description);
  const first = compileStar(locked);
  if (locked.footing.kind === 'firm') {
    const { com_B } = starCentre(first, new Float64Array(first.gimbals));
    const g = description.gravity ?? standardGravity;
    const drop = (com_B[2] - locked.footing.soleHeight) / -g[2];
    const over = { x: com_B[0] + g[0] * drop, y: com_B[1] + g[1] * drop };
    const edge = tippingEdge(locked.footing, supportMargin(locked.footing, over).side);
    return fallFacts({ ...locked, footing: edge });
  }
  const work = createStarWork(first);
  const angle = balanceAngle(first, work);
  const state = restState(first);
  if (first.footing.pose === 'angle' && Number.isFinite(angle)) state[0] = angle;
  const modes = starModes(first, work, state, new Float64Array(first.effortSize));
  const fastest = modes[0];
  if (fastest === undefined) return { kind: 'neutral', balanceAngle: angle };
  if (fastest.kind === 'grows')
    return { kind: 'topples', rate: fastest.real, doubling: fastest.time, balanceAngle: angle };
  const swinging = modes.find((mode) => Number.isFinite(mode.period));
  if (swinging)
    return {
      kind: 'swings',
      period: swinging.period,
      dampingRatio: swinging.dampingRatio,
      balanceAngle: angle,
    };
  const dying = modes.find((mode) => mode.kind === 'dies out');
  return dying
    ? { kind: 'creeps', halving: dying.time, balanceAngle: angle }
    : { kind: 'neutral', balanceAngle: angle };
}
