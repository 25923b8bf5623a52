import { Matrix } from 'ml-matrix';
import type { Controller, FeedbackGains } from './controllers';
import { describeEstimator, type EstimatorModel } from './estimators';
import { createTransferWork, solveResolvent } from './linear/transfer';
import { PLANT_OUTPUT, type RollTiltPlant, type SampledPlant, samplePlant } from './plantModels';

/** Laws whose loop can be judged by linear means, each with its gains in the order used everywhere. */
export const LAW_GAINS = {
  pidTilt: ['kp', 'ki', 'kd'],
  pidTiltRate: ['kp', 'ki', 'kd'],
  feedback: ['lean', 'leanRate', 'tilt', 'tiltRate', 'trim'],
  reactionWheel: ['lean', 'leanRate', 'speed'],
} as const;

export type Law = keyof typeof LAW_GAINS;

/** The linear law inside a controller and its gains in the order of LAW_GAINS; undefined for a passive gimbal. */
export function readGains(c: Controller): { readonly law: Law; readonly gains: Float64Array } | undefined {
  switch (c.kind) {
    case 'pidTilt':
    case 'pidTiltRate':
      return { law: c.kind, gains: Float64Array.of(c.kp, c.ki, c.kd) };
    case 'feedback':
      return { law: 'feedback', gains: listFeedback(c) };
    case 'planned':
      return { law: 'feedback', gains: listFeedback(c.gains) };
    case 'reactionWheel':
      return { law: 'reactionWheel', gains: Float64Array.of(c.lean, c.leanRate, c.speed) };
    case 'passive':
      return undefined;
  }
}

const listFeedback = (g: FeedbackGains): Float64Array =>
  Float64Array.of(g.lean, g.leanRate, g.tilt, g.tiltRate, g.trim);

/** The controller of a law with these gains. */
export function buildController(law: Law, g: ArrayLike<number>): Controller {
  switch (law) {
    case 'pidTilt':
    case 'pidTiltRate':
      return { kind: law, kp: g[0]!, ki: g[1]!, kd: g[2]! };
    case 'feedback':
      return { kind: 'feedback', lean: g[0]!, leanRate: g[1]!, tilt: g[2]!, tiltRate: g[3]!, trim: g[4]! };
    case 'reactionWheel':
      return { kind: 'reactionWheel', lean: g[0]!, leanRate: g[1]!, speed: g[2]! };
  }
}

/** Everything a linear judgement of the loop needs. */
export interface LoopModel {
  readonly plant: RollTiltPlant;
  readonly estimator: EstimatorModel;
  readonly law: Law;
  readonly gains: ArrayLike<number>;
}

/**
 * The closed loop from one sample to the next, x+ = A x, as exact as the linear plant: delay, hold, estimator
 * and law included, and the tilt that a law cannot feel left out (see `dropHidden`).
 *
 * Its spectral radius is below 1 exactly when the loop holds.
 */
export function buildClosedLoop(loop: LoopModel): Matrix {
  const p = samplePlant(loop.plant);
  const e = describeEstimator(loop.estimator);
  const np = p.A.rows;
  const ne = e === undefined ? 0 : e.A.rows;
  const g = loop.gains;
  const isPid = loop.law === 'pidTilt' || loop.law === 'pidTiltRate';
  const hasExtra = isPid ? g[1] !== 0 : loop.law === 'feedback' && g[4] !== 0;
  const hasRate = loop.law === 'feedback' && g[3] !== 0;
  const extra = np + ne;
  const rate = extra + (hasExtra ? 1 : 0);
  const n = rate + (hasRate ? 1 : 0);
  const dt = p.sampleTime;

  const row = (): Float64Array => new Float64Array(n);
  const output = (which: number, scale: number, into: Float64Array): void => {
    for (let j = 0; j < np; j++) into[j]! += scale * p.C.get(which, j);
  };
  const lean = row();
  const leanRate = row();
  const a = Matrix.zeros(n, n);
  a.setSubMatrix(p.A, 0, 0);
  if (e === undefined) {
    output(PLANT_OUTPUT.roll, 1, lean);
    output(PLANT_OUTPUT.rollRate, 1, leanRate);
  } else {
    const estimates = [lean, leanRate];
    for (let i = 0; i < 2; i++) {
      output(PLANT_OUTPUT.rollRate, e.D.get(i, 0), estimates[i]!);
      output(PLANT_OUTPUT.apparentRoll, e.D.get(i, 1), estimates[i]!);
      for (let j = 0; j < ne; j++) estimates[i]![np + j]! += e.C.get(i, j);
    }
    a.setSubMatrix(e.A, np, np);
    for (let i = 0; i < ne; i++) {
      for (let j = 0; j < np; j++) {
        a.set(
          np + i,
          j,
          e.B.get(i, 0) * p.C.get(PLANT_OUTPUT.rollRate, j) +
            e.B.get(i, 1) * p.C.get(PLANT_OUTPUT.apparentRoll, j),
        );
      }
    }
  }

  const command = row();
  const newest = p.plantStates;
  const addTo = (into: Float64Array, from: Float64Array, scale: number): void => {
    for (let j = 0; j < n; j++) into[j]! += scale * from[j]!;
  };
  if (isPid) {
    const law = row();
    addTo(law, lean, g[0]! + g[1]! * dt);
    addTo(law, leanRate, g[2]!);
    if (hasExtra) {
      law[extra]! += g[1]!;
      for (let j = 0; j < n; j++) a.set(extra, j, dt * lean[j]! + (j === extra ? 1 : 0));
    }
    addTo(command, law, loop.law === 'pidTilt' ? 1 : dt);
    if (loop.law === 'pidTiltRate') command[newest]! += 1;
  } else if (loop.law === 'feedback') {
    const law = row();
    addTo(law, lean, g[0]!);
    addTo(law, leanRate, g[1]!);
    law[newest]! += g[2]!;
    if (hasRate) law[rate]! += g[3]!;
    if (hasExtra) law[extra]! += g[4]!;
    command[newest]! += 1;
    addTo(command, law, dt);
    if (hasRate) for (let j = 0; j < n; j++) a.set(rate, j, law[j]!);
    if (hasExtra) for (let j = 0; j < n; j++) a.set(extra, j, dt * command[j]! + (j === extra ? 1 : 0));
  } else {
    addTo(command, lean, g[0]!);
    addTo(command, leanRate, g[1]!);
    output(PLANT_OUTPUT.store, g[2]!, command);
  }
  for (let i = 0; i < np; i++) {
    const b = p.B.get(i, 0);
    if (b !== 0) for (let j = 0; j < n; j++) a.set(i, j, a.get(i, j) + b * command[j]!);
  }
  return dropHidden(loop, a, p, extra, hasExtra);
}

/*
 * Some laws leave a tilt (or a wheel speed) they cannot feel: any constant one is a rest of the loop, an
 * eigenvalue of exactly 1. With v that rest and j a state in it, the map on what remains is
 * a_ik - (v_i / v_j) a_jk, which has all the other eigenvalues and not that one.
 */
function dropHidden(loop: LoopModel, a: Matrix, p: SampledPlant, extra: number, hasExtra: boolean): Matrix {
  const n = a.rows;
  const v = new Float64Array(n);
  let j = -1;
  const g = loop.gains;
  if (loop.law === 'reactionWheel') {
    if (g[2] === 0) {
      j = 2;
      v[j] = 1;
    }
  } else {
    const stays =
      (loop.law === 'pidTilt' && hasExtra) ||
      loop.law === 'pidTiltRate' ||
      (loop.law === 'feedback' && g[2] === 0 && g[4] === 0);
    if (stays) {
      v[1] = loop.plant.momentum / loop.plant.inertia;
      if (p.plantStates === 3) v[2] = 1;
      for (let i = 0; i < p.pastCommands; i++) v[p.plantStates + i] = 1;
      j = p.plantStates;
      if (loop.law === 'pidTilt') v[extra] = 1 / g[1]!;
    }
  }
  if (j < 0) return a;
  const kept = Matrix.zeros(n - 1, n - 1);
  for (let i = 0, r = 0; i < n; i++) {
    if (i === j) continue;
    for (let k = 0, c = 0; k < n; k++) {
      if (k === j) continue;
      kept.set(r, c, a.get(i, k) - (v[i]! / v[j]!) * a.get(j, k));
      c++;
    }
    r++;
  }
  return kept;
}

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
