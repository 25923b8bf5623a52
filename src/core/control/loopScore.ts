import type { EstimatorModel } from './estimators';
import { findEigenvalues } from './linear/spectrum';
import { createLoopBasis, evaluateLoopGain, type LoopBasis, type LoopParts, prepareLoop } from './loopBasis';
import type { Law } from './loopModel';
import type { RollTiltPlant } from './plantModels';

/**
 * The closed loop judged quickly and repeatedly for changing gains: how many modes lie outside a circle (by the
 * turns of Q + sum g H around zero, the argument principle) and how near L comes to -1 (the modulus margin, one
 * over the largest sensitivity). All that does not depend on the gains is computed once.
 */
export interface LoopScorer {
  /** on a circle just inside the unit one: hold */
  readonly hold: LoopBasis;
  readonly holdPoles: number;
  /** ideal sensing, on the circle of the least decay asked for */
  readonly pace: LoopBasis;
  readonly pacePoles: number;
  /** on the unit circle: margin */
  readonly margin: LoopBasis;
}

const POINTS = 220;

/* Angles (rad per sample) from zero to Nyquist: logarithmic, and gathered about lightly damped poles. */
function spreadAngles(finest: number, poles: readonly number[]): Float64Array {
  const angles = [0];
  const ratio = (Math.PI / finest) ** (1 / (POINTS - 1));
  for (let i = 0, t = finest; i < POINTS - 1; i++, t *= ratio) angles.push(t);
  angles.push(Math.PI);
  for (const centre of poles) {
    for (let step = finest; step < centre; step *= 1.4) {
      angles.push(centre - step);
      if (centre + step < Math.PI) angles.push(centre + step);
    }
    angles.push(centre);
  }
  return Float64Array.from(angles.sort((a, b) => a - b));
}

/**
 * @param leastDecay 1/s that every mode of the loop (sensing taken as ideal) must reach
 */
export function createLoopScorer(
  plant: RollTiltPlant,
  estimator: EstimatorModel,
  law: Law,
  leastDecay: number,
): LoopScorer {
  const dt = plant.sampleTime;
  const sensed = prepareLoop(plant, estimator);
  const perfect: LoopParts = { sampled: sensed.sampled, estimator: undefined };
  const poles = findEigenvalues(sensed.sampled.transition);
  const e = sensed.estimator;
  let slow = leastDecay / 20;
  if (e !== undefined) {
    const own = findEigenvalues(e.A);
    for (let i = 0; i < own.re.length; i++) {
      const decay = -Math.log(Math.sqrt(own.re[i]! ** 2 + own.im[i]! ** 2)) / dt;
      slow = Math.min(slow, decay / 3);
    }
  }
  const light: number[] = [];
  for (let i = 0; i < poles.re.length; i++) {
    if (poles.im[i]! > 0) light.push(Math.atan2(poles.im[i]!, poles.re[i]!));
  }
  const outside = (radius: number): number => {
    let count = 0;
    for (let i = 0; i < poles.re.length; i++) {
      const size = Math.sqrt(poles.re[i]! ** 2 + poles.im[i]! ** 2);
      /* A reaction wheel's own integrator sits at exactly 1 and is counted with its gain, below. */
      if (law === 'reactionWheel' && Math.abs(poles.re[i]! - 1) < 1e-12 && poles.im[i] === 0) continue;
      if (size > radius) count++;
    }
    return count;
  };
  const holdRadius = Math.exp(-slow * dt);
  const paceRadius = Math.exp(-leastDecay * dt);
  const make = (parts: LoopParts, radius: number, decay: number): LoopBasis =>
    createLoopBasis(parts, law, spreadAngles(0.1 * decay * dt, light), radius);
  return {
    hold: make(sensed, holdRadius, slow),
    holdPoles: outside(holdRadius),
    pace: make(perfect, paceRadius, leastDecay),
    pacePoles: outside(paceRadius),
    margin: createLoopBasis(sensed, law, spreadAngles(0.1 * slow * dt, light).slice(1)),
  };
}

/*
 * Modes outside the circle of a basis: poles there plus turns of Q + sum g H. The hidden tilt of a law that cannot
 * feel it stands at z = 1 and does not count.
 */
export function countOutside(b: LoopBasis, poles: number, gains: ArrayLike<number>, scale: number): number {
  const n = b.points;
  let turned = 0;
  let lastRe = 0;
  let lastIm = 0;
  for (let i = 0; i < n; i++) {
    let re = b.qRe[i]!;
    let im = b.qIm[i]!;
    for (let k = 0; k < gains.length; k++) {
      const g = gains[k]! * (k < b.throughPlant ? scale : 1);
      if (g === 0) continue;
      re += g * b.hRe[k * n + i]!;
      im += g * b.hIm[k * n + i]!;
    }
    if (i > 0) turned += Math.atan2(im * lastRe - re * lastIm, re * lastRe + im * lastIm);
    lastRe = re;
    lastIm = im;
  }
  let count = poles - Math.round(turned / Math.PI);
  if (b.law === 'feedback') {
    if (gains[4] !== 0) count += 1;
    else if (gains[2] === 0) count -= 1;
  } else if (b.law === 'pidTiltRate' && gains[1] === 0) count -= 1;
  else if (b.law === 'reactionWheel' && gains[2] !== 0) count += 1;
  return count;
}

const point = new Float64Array(2);

/** Smallest |1 + L| on the unit circle: one over the largest sensitivity. */
export function measureModulus(b: LoopBasis, gains: ArrayLike<number>, scale: number): number {
  let least = Number.POSITIVE_INFINITY;
  for (let i = 0; i < b.points; i++) {
    evaluateLoopGain(b, gains, i, scale, point);
    const re = 1 + point[0]!;
    const size = re * re + point[1]! * point[1]!;
    if (size < least) least = size;
  }
  return Math.sqrt(least);
}

/**
 * One number to climb: the modulus margin (0 to 1) where the loop holds and keeps its pace, minus the number of
 * modes that do not otherwise.
 */
export function scoreLoop(s: LoopScorer, gains: ArrayLike<number>, scale: number): number {
  const loose = countOutside(s.hold, s.holdPoles, gains, scale);
  if (loose > 0) return -10 * loose;
  const late = countOutside(s.pace, s.pacePoles, gains, scale);
  const modulus = measureModulus(s.margin, gains, scale);
  return late > 0 ? modulus - 2 * late : modulus;
}
