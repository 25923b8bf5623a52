/**
 * The star against MuJoCo 3.3 (npm package mujoco-js), an independent engine: joint angles within 1e-7 rad after 2 s
 * on 36 rigs drawn from seeds. Where MuJoCo can say the whole footing it integrates by itself (its own RK4, the wheel
 * a real spinning joint). Rolling, floating, held wheels and prescribed tilts are tied on outside: MuJoCo gives mass
 * matrix and bias of the untied bodies, the test projects them on the ties.
 */
import { Matrix, solve } from 'ml-matrix';
import { beforeAll, describe, expect, it } from 'vitest';
import { starCentre } from '../../src/core/physics/conserved';
import type { StarFooting } from '../../src/core/physics/footing';
import { type EffortLaw, simulateExactly, simulateFree, startState } from '../../src/core/physics/freeMotion';
import { integrateAdaptively } from '../../src/core/physics/integrators';
import {
  cross3,
  rotate3,
  rotationAbout,
  rotationOf,
  subtract3,
  type Vec3,
} from '../../src/core/physics/spatial';
import {
  compileStar,
  gimbalIsLocked,
  type StarDescription,
  type StarModel,
} from '../../src/core/physics/starModel';
import { loadMujocoStar, type Mujoco, openMujoco } from '../support/mujocoStar';
import { createRandom, randomStar, randomStart } from '../unit/physics/randomStar';

const seconds = 2;
let mj: Mujoco;
beforeAll(async () => {
  mj = await openMujoco();
});

/** Angle between two attitudes, rad. */
function attitudeGap(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let best = Number.POSITIVE_INFINITY;
  for (const sign of [1, -1]) {
    let sum = 0;
    for (let j = 0; j < 4; j++) sum += (a[j]! - sign * b[j]!) ** 2;
    best = Math.min(best, 2 * Math.sqrt(sum));
  }
  return best;
}

function worstGap(model: StarModel, last: Float64Array, other: Float64Array): number {
  let worst = 0;
  const pose = model.footing.pose;
  if (pose === 'angle') worst = Math.abs(last[0]! - other[0]!);
  else if (pose !== 'none') worst = attitudeGap(last, other);
  for (let k = 4; k < model.footing.poseSize; k++) worst = Math.max(worst, Math.abs(last[k]! - other[k]!));
  for (let i = 0; i < model.gimbals; i++) {
    worst = Math.max(worst, Math.abs(last[model.tiltAt + i]! - other[model.tiltAt + i]!));
  }
  return worst;
}

/** Star state to MuJoCo's joint positions and speeds; the rolling slides follow from the rest. */
function toMujoco(model: StarModel, x: Float64Array): { qpos: number[]; qvel: number[] } {
  const { footing, baseSpeedAt: at } = model;
  const qpos: number[] = [];
  const qvel: number[] = [];
  const speeds = Array.from(x.subarray(at, at + footing.speeds));
  if (footing.kind === 'rocker') {
    if (footing.pose === 'angle') {
      qpos.push(footing.radius * x[0]!, x[0]!);
      qvel.push(footing.radius * speeds[0]!, speeds[0]!);
    } else {
      const w = rotate3(rotationOf(x), speeds as unknown as Vec3);
      qpos.push(x[4]!, x[5]!, ...x.subarray(0, 4));
      qvel.push(footing.radius * w[1], -footing.radius * w[0], ...speeds);
    }
  } else if (footing.pose === 'free') {
    qpos.push(...x.subarray(4, 7), ...x.subarray(0, 4));
    qvel.push(...rotate3(rotationOf(x), speeds.slice(3) as unknown as Vec3), ...speeds.slice(0, 3));
  } else {
    qpos.push(...x.subarray(0, footing.poseSize));
    qvel.push(...speeds);
  }
  for (let i = 0; i < model.gimbals; i++) {
    if (model.gimbalMode[i] !== gimbalIsLocked) {
      qpos.push(x[model.tiltAt + i]!);
      qvel.push(x[model.rateAt + i]!);
    }
    qpos.push(0);
    qvel.push(x[model.wheelSpeedAt + i]!);
  }
  return { qpos, qvel };
}

/** MuJoCo's own run, in the star's state layout (wheel speeds left out). */
function runMujoco(
  description: StarDescription,
  model: StarModel,
  start: Float64Array,
  step: number,
): Float64Array {
  const tilt = Array.from(start.subarray(model.tiltAt, model.tiltAt + model.gimbals));
  const { model: m, data: d } = loadMujocoStar(mj, description, tilt, step);
  const { qpos, qvel } = toMujoco(model, start);
  d.qpos.set(qpos);
  d.qvel.set(qvel);
  const steps = Math.round(seconds / step);
  for (let k = 0; k < steps; k++) mj.mj_step(m, d);
  const x = Float64Array.from(start);
  const q = d.qpos as Float64Array;
  let at = 0;
  if (model.footing.pose === 'free') {
    x.set(q.subarray(3, 7), 0);
    x.set(q.subarray(0, 3), 4);
    at = 7;
  } else {
    x.set(q.subarray(0, model.footing.poseSize), 0);
    at = model.footing.poseSize;
  }
  for (let i = 0; i < model.gimbals; i++) {
    if (model.gimbalMode[i] !== gimbalIsLocked) x[model.tiltAt + i] = q[at++]!;
    at++;
  }
  d.delete();
  m.delete();
  return x;
}

const natural: readonly [StarFooting['kind'], number][] = [
  ['edge', 1],
  ['edge', 2],
  ['edge', 2],
  ['edge', 4],
  ['edge', 6],
  ['point', 1],
  ['point', 2],
  ['point', 3],
  ['point', 4],
  ['free', 1],
  ['free', 2],
  ['free', 3],
  ['free', 4],
  ['firm', 1],
  ['firm', 3],
  ['firm', 6],
];

describe('free motion against MuJoCo by itself', () => {
  it.each(natural.map(([footing, gyros], k) => [footing, gyros, 101 + k] as const))(
    '%s footing, %i gyros, seed %i',
    (footing, gyros, seed) => {
      const random = createRandom(seed);
      const description = randomStar(random, {
        gyros,
        footing,
        drives: footing === 'firm' ? ['free', 'servo'] : ['free', 'servo', 'locked'],
        spins: ['coasting'],
      });
      const model = compileStar(description);
      const start = randomStart(random, description, model.footing.pose, 0.3);
      const state = startState(model, start);
      const ours = simulateExactly(description, start, seconds, 1, 1e-12);
      // MuJoCo's step on a ball joint is of second order in the attitude; on hinges it is of fourth.
      const step = footing === 'point' ? 2.5e-5 : 1e-4;
      const theirs = runMujoco(description, model, state, step);
      const gap = worstGap(model, ours.last, theirs);
      // Measured: at most 3e-10 on hinges and free, 1.3e-8 on a point, which is MuJoCo's own step.
      expect(gap).toBeLessThan(1e-7);
    },
  );
});

/** Accelerations from MuJoCo's mass matrix and bias, projected on the ties; prescribed ones given. */
function tiedDerivative(description: StarDescription, model: StarModel, start: Float64Array, law: EffortLaw) {
  const n = model.gimbals;
  const nb = model.footing.speeds;
  const { footing } = model;
  const tilts = Array.from(start.subarray(model.tiltAt, model.tiltAt + n));
  const { model: m, data: d } = loadMujocoStar(mj, description, tilts, 1e-4);
  const nv = m.nv as number;
  const dense = new mj.DoubleBuffer(nv * nv);
  const effort = new Float64Array(model.effortSize);
  const rest = starCentre(model, new Float64Array(n));
  const G = [...model.gravity_W] as unknown as Vec3;
  const derivative = (time: number, x: Float64Array, out: Float64Array): void => {
    law(time, x, effort, undefined as never);
    const { qpos, qvel } = toMujoco(model, x);
    d.qpos.set(qpos);
    d.qvel.set(qvel);
    mj.mj_forward(m, d);
    mj.mj_fullM(m, dense as never, d.qM);
    const M = new Matrix(nv, nv);
    const full = dense.GetView() as Float64Array;
    for (let r = 0; r < nv; r++) for (let c = 0; c < nv; c++) M.set(r, c, full[nv * r + c]!);
    const force = Matrix.columnVector(
      Array.from({ length: nv }, (_, k) => d.qfrc_passive[k] - d.qfrc_bias[k]),
    );
    // Ties: columns are base speeds, tilts, wheels.
    const T = new Matrix(nv, nb + 2 * n);
    let row = 0;
    if (footing.kind === 'rocker' && footing.pose === 'angle') {
      T.set(0, 0, footing.radius);
      T.set(1, 0, 1);
      row = 2;
    } else if (footing.kind === 'rocker') {
      const R = rotationOf(x);
      for (let j = 0; j < 3; j++) {
        T.set(0, j, footing.radius * R[3 + j]!);
        T.set(1, j, -footing.radius * R[j]!);
        T.set(2 + j, j, 1);
      }
      row = 5;
    } else {
      for (; row < nb; row++) T.set(row, row, 1);
    }
    for (let i = 0; i < n; i++) {
      if (model.gimbalMode[i] !== gimbalIsLocked) {
        T.set(row, nb + i, 1);
        if (description.gyros[i]!.drive.kind === 'servo' && model.gimbalMode[i] === 0)
          force.set(row, 0, force.get(row, 0) + effort[i]!);
        row++;
      }
      T.set(row, nb + n + i, 1);
      row++;
    }
    if (footing.kind === 'float') {
      const floats = footing.floats!;
      const arm = rotate3(
        rotationAbout([1, 0, 0], x[0]!),
        subtract3(rest.com_B, [...footing.point] as never),
      );
      const weightMoment = rest.mass * cross3(arm, G)[0];
      const p = x[model.baseSpeedAt]!;
      const gz = floats.righting.metacentricHeight * Math.sin(x[0]!);
      const water = -rest.mass * Math.hypot(...G) * gz - weightMoment;
      force.set(
        0,
        0,
        force.get(0, 0) + water - floats.linearDamping * p - floats.quadraticDamping * p * Math.abs(p),
      );
      M.set(0, 0, M.get(0, 0) + floats.addedInertia);
    }
    const reduced = T.transpose().mmul(M).mmul(T);
    const pull = T.transpose().mmul(force);
    const known = new Float64Array(nb + 2 * n).fill(Number.NaN);
    for (let i = 0; i < n; i++) {
      if (model.gimbalMode[i] !== 0) known[nb + i] = model.gimbalMode[i] === gimbalIsLocked ? 0 : effort[i]!;
      if (model.isHeld[i] === 1) known[nb + n + i] = 0;
    }
    const unknown = Array.from(known.keys()).filter((k) => Number.isNaN(known[k]!));
    const right = unknown.map((k) => {
      let sum = pull.get(k, 0);
      known.forEach((a, j) => {
        if (!Number.isNaN(a)) sum -= reduced.get(k, j) * a;
      });
      return sum;
    });
    if (unknown.length > 0) {
      const found = solve(reduced.selection(unknown, unknown), Matrix.columnVector(right));
      unknown.forEach((k, j) => {
        known[k] = found.get(j, 0);
      });
    }
    if (footing.pose === 'angle') out[0] = x[model.baseSpeedAt]!;
    else if (footing.pose !== 'none') {
      const [w, a, b, c] = x as unknown as [number, number, number, number];
      const [p, q, r] = x.subarray(model.baseSpeedAt) as unknown as [number, number, number];
      out.set(
        [-a * p - b * q - c * r, w * p + b * r - c * q, w * q + c * p - a * r, w * r + a * q - b * p].map(
          (v) => v / 2,
        ),
      );
      if (footing.pose === 'rolling-ball') out.set(qvel.slice(0, 2), 4);
    }
    for (let i = 0; i < n; i++) out[model.tiltAt + i] = x[model.rateAt + i]!;
    out.set(known, model.baseSpeedAt);
  };
  const close = (): void => {
    dense.delete();
    d.delete();
    m.delete();
  };
  return { derivative, close };
}

const tied: readonly [StarFooting['kind'], boolean, number, boolean][] = [
  ['rocker', false, 1, false],
  ['rocker', false, 2, false],
  ['rocker', false, 4, false],
  ['rocker', true, 1, false],
  ['rocker', true, 2, false],
  ['rocker', true, 3, false],
  ['float', false, 1, false],
  ['float', false, 2, false],
  ['float', false, 4, false],
  ['edge', false, 2, false],
  ['point', false, 2, false],
  ['edge', false, 1, true],
  ['edge', false, 2, true],
  ['edge', false, 4, true],
  ['point', false, 2, true],
  ['point', false, 4, true],
  ['rocker', false, 2, true],
  ['rocker', true, 2, true],
  ['float', false, 2, true],
  ['firm', false, 2, true],
];

describe('motion against MuJoCo with ties: rolling, floating, held wheels, prescribed tilts', () => {
  it.each(
    tied.map(
      ([footing, isSpatial, gyros, isDriven], k) => [footing, isSpatial, gyros, isDriven, 201 + k] as const,
    ),
  )(
    '%s footing (spatial: %s), %i gyros, tilts prescribed: %s, seed %i',
    (footing, isSpatial, gyros, isDriven, seed) => {
      const random = createRandom(seed);
      const drawn = randomStar(random, {
        gyros,
        footing,
        isSpatial,
        drives: isDriven ? ['servo', 'servo', 'free'] : ['free', 'servo', 'locked'],
        spins: ['coasting', 'held'],
      });
      const description: StarDescription = isDriven
        ? {
            ...drawn,
            gyros: drawn.gyros.map((g, i) =>
              i === 0 || g.drive.kind === 'servo'
                ? { ...g, drive: { kind: 'servo', input: 'acceleration', reflectedInertia: 0 } }
                : g,
            ),
          }
        : drawn;
      const model = compileStar(description);
      const start = randomStart(random, description, model.footing.pose, 0.3);
      const state = startState(model, start);
      const law: EffortLaw = (time, _x, effort) => {
        for (let i = 0; i < gyros; i++) {
          if (model.gimbalMode[i] === 1) effort[i] = 4 * Math.cos(5 * time + i);
          else if (description.gyros[i]!.drive.kind === 'servo') effort[i] = 0.02 * Math.sin(3 * time + i);
        }
      };
      const ours = simulateFree(description, start, seconds, 1e-4, 20000, law);
      const { derivative, close } = tiedDerivative(description, model, state, law);
      const outcome = integrateAdaptively(derivative, 0, seconds, state, {
        absolute: 1e-11,
        relative: 1e-11,
      });
      close();
      expect(outcome.kind).toBe('reached');
      const gap = worstGap(model, ours.last, state);
      // Measured: at most 7.7e-9.
      expect(gap).toBeLessThan(1e-7);
    },
  );
});
