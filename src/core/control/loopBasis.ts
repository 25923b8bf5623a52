import { describeEstimator, type EstimatorModel } from './estimators';
import { createTransferWork, solveResolvent } from './linear/transfer';
import { LAW_GAINS, type Law } from './loopModel';
import { PLANT_OUTPUT, type RollTiltPlant, type SampledPlant, samplePlant } from './plantModels';

/**
 * What each gain contributes at points z = radius exp(i theta): the loop closes where
 * Q + sum of gain_i H_i = 0, with nothing in Q and H depending on the gains.
 */
export interface LoopBasis {
  readonly law: Law;
  readonly points: number;
  readonly theta: Float64Array;
  readonly qRe: Float64Array;
  readonly qIm: Float64Array;
  /** gains x points */
  readonly hRe: Float64Array;
  readonly hIm: Float64Array;
  /** number of leading gains that act through the plant; the others stay inside the controller */
  readonly throughPlant: number;
}

/** What a frequency response needs of plant and estimator, sampled once. */
export interface LoopParts {
  readonly sampled: SampledPlant;
  readonly estimator: ReturnType<typeof describeEstimator>;
}

export const prepareLoop = (plant: RollTiltPlant, estimator: EstimatorModel): LoopParts => ({
  sampled: samplePlant(plant),
  estimator: describeEstimator(estimator),
});

/** Computes the basis of a law for a plant and an estimator at given angles (rad per sample) and one radius. */
export function createLoopBasis(parts: LoopParts, law: Law, theta: Float64Array, radius = 1): LoopBasis {
  const points = theta.length;
  const names = LAW_GAINS[law].length;
  const basis: LoopBasis = {
    law,
    points,
    theta,
    qRe: new Float64Array(points),
    qIm: new Float64Array(points),
    hRe: new Float64Array(names * points),
    hIm: new Float64Array(names * points),
    throughPlant: law === 'feedback' ? 2 : 3,
  };
  fillLoopBasis(parts, basis, radius);
  return basis;
}

/** Recomputes a basis in place for the angles it now holds. */
export function fillLoopBasis(parts: LoopParts, basis: LoopBasis, radius: number): void {
  const { sampled: p, estimator: e } = parts;
  const theta = basis.theta;
  const plantWork = createTransferWork(p.plantStates, 1);
  const estimatorWork = createTransferWork(2, 1);
  const yRe = new Float64Array(4);
  const yIm = new Float64Array(4);
  const eRe = new Float64Array(2);
  const eIm = new Float64Array(2);
  for (let i = 0; i < basis.points; i++) {
    const zRe = radius * Math.cos(theta[i]!);
    const zIm = radius * Math.sin(theta[i]!);
    respondPlant(p, zRe, zIm, radius, theta[i]!, plantWork, yRe, yIm);
    if (e === undefined) {
      eRe[0] = yRe[0]!;
      eIm[0] = yIm[0]!;
      eRe[1] = yRe[1]!;
      eIm[1] = yIm[1]!;
    } else respondEstimator(e, zRe, zIm, estimatorWork, yRe, yIm, eRe, eIm);
    fillPoint(basis, i, zRe, zIm, p.sampleTime, eRe, eIm, yRe, yIm);
  }
}

function respondPlant(
  p: SampledPlant,
  zRe: number,
  zIm: number,
  radius: number,
  theta: number,
  work: ReturnType<typeof createTransferWork>,
  yRe: Float64Array,
  yIm: Float64Array,
): void {
  const n = p.plantStates;
  const m = p.pastCommands;
  const oldSize = radius ** -m;
  const oldRe = oldSize * Math.cos(m * theta);
  const oldIm = -oldSize * Math.sin(m * theta);
  const newSize = radius ** (1 - m);
  const newRe = newSize * Math.cos((m - 1) * theta);
  const newIm = -newSize * Math.sin((m - 1) * theta);
  const xRe = new Float64Array(n);
  const xIm = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const older = p.olderInput.get(i, 0);
    const newer = p.newerInput.get(i, 0);
    xRe[i] = older * oldRe + newer * newRe;
    xIm[i] = older * oldIm + newer * newIm;
  }
  solveResolvent(p.transition, zRe, zIm, xRe, xIm, 1, work);
  for (let o = 0; o < 3; o++) {
    let re = p.D0.get(o, 0) * oldRe;
    let im = p.D0.get(o, 0) * oldIm;
    for (let j = 0; j < n; j++) {
      re += p.C0.get(o, j) * xRe[j]!;
      im += p.C0.get(o, j) * xIm[j]!;
    }
    const row = o === 2 ? PLANT_OUTPUT.store : o;
    yRe[row] = re;
    yIm[row] = im;
  }
  /* apparent roll = roll - perRate (1 - 1/z) rate */
  const rate = PLANT_OUTPUT.rollRate;
  const backRe = 1 - Math.cos(theta) / radius;
  const backIm = Math.sin(theta) / radius;
  yRe[PLANT_OUTPUT.apparentRoll] =
    yRe[PLANT_OUTPUT.roll]! - p.perRate * (backRe * yRe[rate]! - backIm * yIm[rate]!);
  yIm[PLANT_OUTPUT.apparentRoll] =
    yIm[PLANT_OUTPUT.roll]! - p.perRate * (backRe * yIm[rate]! + backIm * yRe[rate]!);
}

function respondEstimator(
  e: NonNullable<ReturnType<typeof describeEstimator>>,
  zRe: number,
  zIm: number,
  work: ReturnType<typeof createTransferWork>,
  yRe: Float64Array,
  yIm: Float64Array,
  eRe: Float64Array,
  eIm: Float64Array,
): void {
  const n = e.A.rows;
  const gyro = PLANT_OUTPUT.rollRate;
  const accel = PLANT_OUTPUT.apparentRoll;
  const xRe = new Float64Array(n);
  const xIm = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    xRe[i] = e.B.get(i, 0) * yRe[gyro]! + e.B.get(i, 1) * yRe[accel]!;
    xIm[i] = e.B.get(i, 0) * yIm[gyro]! + e.B.get(i, 1) * yIm[accel]!;
  }
  solveResolvent(e.A, zRe, zIm, xRe, xIm, 1, work);
  for (let o = 0; o < 2; o++) {
    let re = e.D.get(o, 0) * yRe[gyro]! + e.D.get(o, 1) * yRe[accel]!;
    let im = e.D.get(o, 0) * yIm[gyro]! + e.D.get(o, 1) * yIm[accel]!;
    for (let j = 0; j < n; j++) {
      re += e.C.get(o, j) * xRe[j]!;
      im += e.C.get(o, j) * xIm[j]!;
    }
    eRe[o] = re;
    eIm[o] = im;
  }
}

function fillPoint(
  b: LoopBasis,
  i: number,
  zRe: number,
  zIm: number,
  dt: number,
  eRe: Float64Array,
  eIm: Float64Array,
  yRe: Float64Array,
  yIm: Float64Array,
): void {
  const n = b.points;
  const size = zRe * zRe + zIm * zIm;
  /* back = 1/z, difference = (1 - 1/z)/dt */
  const backRe = zRe / size;
  const backIm = -zIm / size;
  const diffRe = (1 - backRe) / dt;
  const diffIm = -backIm / dt;
  const diffSize = diffRe * diffRe + diffIm * diffIm;
  const isRate = b.law === 'pidTiltRate' || b.law === 'feedback';
  b.qRe[i] = isRate ? diffRe : 1;
  b.qIm[i] = isRate ? diffIm : 0;
  const { hRe, hIm } = b;
  hRe[i] = -eRe[0]!;
  hIm[i] = -eIm[0]!;
  if (b.law === 'pidTilt' || b.law === 'pidTiltRate') {
    hRe[n + i] = -(eRe[0]! * diffRe + eIm[0]! * diffIm) / diffSize;
    hIm[n + i] = -(eIm[0]! * diffRe - eRe[0]! * diffIm) / diffSize;
    hRe[2 * n + i] = -eRe[1]!;
    hIm[2 * n + i] = -eIm[1]!;
    return;
  }
  hRe[n + i] = -eRe[1]!;
  hIm[n + i] = -eIm[1]!;
  if (b.law === 'reactionWheel') {
    hRe[2 * n + i] = -yRe[PLANT_OUTPUT.store]!;
    hIm[2 * n + i] = -yIm[PLANT_OUTPUT.store]!;
    return;
  }
  hRe[2 * n + i] = -backRe;
  hIm[2 * n + i] = -backIm;
  hRe[3 * n + i] = -(backRe * diffRe - backIm * diffIm);
  hIm[3 * n + i] = -(backRe * diffIm + backIm * diffRe);
  hRe[4 * n + i] = -(backRe * diffRe + backIm * diffIm) / diffSize;
  hIm[4 * n + i] = -(backIm * diffRe - backRe * diffIm) / diffSize;
}

/**
 * Loop gain L at point i, broken where the command leaves the controller; the loop is stable when 1 + L = 0 has
 * no root outside the unit circle.
 *
 * @param out 2, re and im
 * @param scale factor on everything that goes through the plant (momentum or servo gain off nominal)
 */
export function evaluateLoopGain(
  b: LoopBasis,
  gains: ArrayLike<number>,
  i: number,
  scale: number,
  out: Float64Array,
): void {
  const n = b.points;
  let re = 0;
  let im = 0;
  for (let k = 0; k < b.throughPlant; k++) {
    re += gains[k]! * b.hRe[k * n + i]!;
    im += gains[k]! * b.hIm[k * n + i]!;
  }
  let qr = b.qRe[i]!;
  let qi = b.qIm[i]!;
  for (let k = b.throughPlant; k < gains.length; k++) {
    if (gains[k] === 0) continue;
    qr += gains[k]! * b.hRe[k * n + i]!;
    qi += gains[k]! * b.hIm[k * n + i]!;
  }
  const size = qr * qr + qi * qi;
  out[0] = (scale * (re * qr + im * qi)) / size;
  out[1] = (scale * (im * qr - re * qi)) / size;
}
