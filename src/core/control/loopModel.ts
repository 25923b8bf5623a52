import { Matrix } from 'ml-matrix';
import type { Controller, FeedbackGains } from './controllers';
import { describeEstimator, type EstimatorModel, type LinearEstimator } from './estimators';
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

  const a = Matrix.zeros(n, n);
  a.setSubMatrix(p.A, 0, 0);
  const lean = new Float64Array(n);
  const leanRate = new Float64Array(n);
  senseState(p, e, a, lean, leanRate);

  /* What the law says, as a row over the state; then what the firmware keeps and what it sends. */
  const law = new Float64Array(n);
  const command = new Float64Array(n);
  const newest = p.plantStates;
  if (isPid) {
    addRow(law, lean, g[0]! + g[1]! * dt);
    addRow(law, leanRate, g[2]!);
    if (hasExtra) {
      law[extra]! += g[1]!;
      for (let j = 0; j < n; j++) a.set(extra, j, dt * lean[j]! + (j === extra ? 1 : 0));
    }
    addRow(command, law, loop.law === 'pidTilt' ? 1 : dt);
    if (loop.law === 'pidTiltRate') command[newest]! += 1;
  } else if (loop.law === 'feedback') {
    addRow(law, lean, g[0]!);
    addRow(law, leanRate, g[1]!);
    law[newest]! += g[2]!;
    if (hasRate) law[rate]! += g[3]!;
    if (hasExtra) law[extra]! += g[4]!;
    command[newest]! += 1;
    addRow(command, law, dt);
    if (hasRate) for (let j = 0; j < n; j++) a.set(rate, j, law[j]!);
    if (hasExtra) for (let j = 0; j < n; j++) a.set(extra, j, dt * command[j]! + (j === extra ? 1 : 0));
  } else {
    addRow(command, lean, g[0]!);
    addRow(command, leanRate, g[1]!);
    addRow(command, p.C.getRow(PLANT_OUTPUT.store), g[2]!);
  }
  for (let i = 0; i < np; i++) {
    const b = p.B.get(i, 0);
    if (b !== 0) for (let j = 0; j < n; j++) a.set(i, j, a.get(i, j) + b * command[j]!);
  }
  return dropHidden(loop, a, p, extra, hasExtra);
}

const addRow = (into: Float64Array, from: ArrayLike<number>, scale: number): void => {
  for (let j = 0; j < from.length; j++) into[j]! += scale * from[j]!;
};

/* Rows of the estimated lean and lean rate over the state, and the estimator's own rows of the map. */
function senseState(
  p: SampledPlant,
  e: LinearEstimator | undefined,
  a: Matrix,
  lean: Float64Array,
  leanRate: Float64Array,
): void {
  const rate = p.C.getRow(PLANT_OUTPUT.rollRate);
  if (e === undefined) {
    addRow(lean, p.C.getRow(PLANT_OUTPUT.roll), 1);
    addRow(leanRate, rate, 1);
    return;
  }
  const apparent = p.C.getRow(PLANT_OUTPUT.apparentRoll);
  const np = p.A.rows;
  const estimates = [lean, leanRate];
  for (let i = 0; i < 2; i++) {
    addRow(estimates[i]!, rate, e.D.get(i, 0));
    addRow(estimates[i]!, apparent, e.D.get(i, 1));
    for (let j = 0; j < e.A.rows; j++) estimates[i]![np + j]! += e.C.get(i, j);
  }
  a.setSubMatrix(e.A, np, np);
  for (let i = 0; i < e.A.rows; i++) {
    for (let j = 0; j < np; j++) a.set(np + i, j, e.B.get(i, 0) * rate[j]! + e.B.get(i, 1) * apparent[j]!);
  }
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
