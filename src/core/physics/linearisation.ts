/**
 * Exact linearisation of a star about any state, by dual numbers through the inverse dynamics: with
 * M(x) a + c(x) = effort, da = M^-1 (d effort - d(M a + c)/dx dx). Source: Carpentier and Mansard, Analytical
 * derivatives of rigid body dynamics algorithms, RSS 2018.
 *
 * Small changes are measured in the tangent: an angle by its own change, an attitude by a small rotation in body
 * components, a free origin by a small displacement in body components.
 */
import { inverse, Matrix } from 'ml-matrix';
import { type Dual, dual } from './dual';
import { inverseDynamicsOver } from './inverseDynamics';
import { starAcceleration } from './starDynamics';
import { gimbalIsDynamic, type StarModel } from './starModel';
import type { StarWork } from './starWork';

export interface LinearStar {
  /** N x N: rate of a small change per small change. */
  readonly A: Matrix;
  /** N x effortSize. */
  readonly B: Matrix;
  /** What each of the N numbers is. */
  readonly names: readonly string[];
  /** Those that can move by themselves: locked and prescribed gimbals and held wheels are left out. */
  readonly live: readonly number[];
}

/** How many numbers a small change of pose takes. */
const poseTangentSize = (model: StarModel): number =>
  model.footing.pose === 'rolling-ball' ? 5 : model.footing.speeds;

/** The state with a unit small change in direction k, as duals. */
function perturbed(model: StarModel, state: Float64Array, k: number): Dual[] {
  const x = Array.from(state, (value) => dual(value));
  const size = poseTangentSize(model);
  const bump = (at: number, slope: number): void => {
    x[at] = dual(state[at]!, slope);
  };
  if (k >= size) bump(model.tiltAt + k - size, 1);
  else if (model.footing.pose === 'angle') bump(0, 1);
  else if (k < 3) {
    const [w, a, b, c] = [state[0]! / 2, state[1]! / 2, state[2]! / 2, state[3]! / 2];
    const slopes = [
      [-a, w, c, -b],
      [-b, -c, w, a],
      [-c, b, -a, w],
    ][k]!;
    for (let j = 0; j < 4; j++) bump(j, slopes[j]!);
  } else if (model.footing.pose === 'rolling-ball') bump(k + 1, 1);
  else {
    const [w, a, b, c] = [state[0]!, state[1]!, state[2]!, state[3]!];
    const column = [
      [1 - 2 * (b * b + c * c), 2 * (a * b + w * c), 2 * (a * c - w * b)],
      [2 * (a * b - w * c), 1 - 2 * (a * a + c * c), 2 * (b * c + w * a)],
      [2 * (a * c + w * b), 2 * (b * c - w * a), 1 - 2 * (a * a + b * b)],
    ][k - 3]!;
    for (let j = 0; j < 3; j++) bump(4 + j, column[j]!);
  }
  return x;
}

const axisNames = ['roll', 'pitch', 'yaw', 'x', 'y', 'z'];

function namesOf(model: StarModel): string[] {
  const pose = model.footing.pose;
  const posed =
    pose === 'none'
      ? []
      : pose === 'angle'
        ? ['angle']
        : pose === 'attitude'
          ? axisNames.slice(0, 3)
          : pose === 'free'
            ? axisNames
            : ['roll', 'pitch', 'yaw', 'x', 'y'];
  const speeds =
    pose === 'angle' ? ['angle rate'] : axisNames.slice(0, model.footing.speeds).map((s) => `${s} rate`);
  const each = (word: string): string[] =>
    Array.from({ length: model.gimbals }, (_, i) => `${word} ${i + 1}`);
  return [...posed, ...each('tilt'), ...speeds, ...each('tilt rate'), ...each('wheel speed')];
}

/** Kinematic rows: rate of the pose's small change. */
function fillPoseRows(model: StarModel, work: StarWork, A: Matrix): void {
  const pose = model.footing.pose;
  const size = poseTangentSize(model);
  const speedAt = size + model.gimbals;
  if (pose === 'none') return;
  if (pose === 'angle') {
    A.set(0, speedAt, 1);
    return;
  }
  const V = work.place.velocity;
  const R = work.place.R_WB;
  /** Adds k times the cross product matrix of v: (v x) as rows. */
  const addCross = (row: number, column: number, v: readonly number[], k: number): void => {
    const put = (i: number, j: number, value: number): void => {
      A.set(row + i, column + j, A.get(row + i, column + j) + k * value);
    };
    put(0, 1, -v[2]!);
    put(0, 2, v[1]!);
    put(1, 0, v[2]!);
    put(1, 2, -v[0]!);
    put(2, 0, -v[1]!);
    put(2, 1, v[0]!);
  };
  const w = [V[0]!, V[1]!, V[2]!];
  for (let j = 0; j < 3; j++) A.set(j, speedAt + j, 1);
  addCross(0, 0, w, -1);
  if (pose === 'free') {
    for (let j = 3; j < 6; j++) A.set(j, speedAt + j, 1);
    addCross(3, 3, w, -1);
    addCross(3, 0, [V[3]!, V[4]!, V[5]!], -1);
  } else if (pose === 'rolling-ball') {
    const r = model.footing.radius;
    // Centre moves at r (w_y, -w_x), w in world components: dw = R (dw_B + turn x w_B).
    const worldRow = (j: number): number[] => [R[3 * j]!, R[3 * j + 1]!, R[3 * j + 2]!];
    const fill = (row: number, e: number[], k: number): void => {
      const cross = [
        w[1]! * e[2]! - w[2]! * e[1]!,
        w[2]! * e[0]! - w[0]! * e[2]!,
        w[0]! * e[1]! - w[1]! * e[0]!,
      ];
      for (let j = 0; j < 3; j++) {
        A.set(row, speedAt + j, k * e[j]!);
        A.set(row, j, k * cross[j]!);
      }
    };
    fill(3, worldRow(1), r);
    fill(4, worldRow(0), -r);
  }
}

/** Mass matrix by columns of the inverse dynamics; accelerationSize squared. Exact: the dynamics is linear in them. */
export function massMatrix(model: StarModel, work: StarWork, state: Float64Array): Matrix {
  const size = model.accelerationSize;
  const x = Array.from(state, (value) => dual(value));
  const still = Array.from({ length: 6 }, () => dual(0));
  const M = new Matrix(size, size);
  for (let k = 0; k < size; k++) {
    const a = Array.from({ length: size }, (_, j) => dual(0, j === k ? 1 : 0));
    inverseDynamicsOver(model, work, x, a, still).forEach((force, j) => {
      M.set(j, k, force.slope);
    });
  }
  return M;
}

/**
 * Linearises a star at a state and effort.
 *
 * @returns A and B in the tangent numbers named by `names`. O(n^3).
 */
export function linearise(
  model: StarModel,
  work: StarWork,
  state: Float64Array,
  effort: Float64Array,
): LinearStar {
  const n = model.gimbals;
  const nb = model.footing.speeds;
  const posed = poseTangentSize(model);
  const N = posed + nb + 3 * n;
  const accelerations = new Float64Array(model.accelerationSize);
  starAcceleration(model, work, state, effort, accelerations);
  const isDynamic = (k: number): boolean => {
    if (k < nb) return true;
    return k < nb + n ? model.gimbalMode[k - nb] === gimbalIsDynamic : model.isHeld[k - nb - n] === 0;
  };
  const all = Array.from({ length: model.accelerationSize }, (_, k) => k);
  const dynamic = all.filter(isDynamic);
  const M = massMatrix(model, work, state);
  const inverseM = dynamic.length > 0 ? inverse(M.selection(dynamic, dynamic)) : new Matrix(0, 0);
  const A = new Matrix(N, N);
  const B = new Matrix(N, model.effortSize);
  fillPoseRows(model, work, A);
  const speedAt = posed + n;
  for (let i = 0; i < n; i++) A.set(posed + i, speedAt + nb + i, 1);
  const still = Array.from(accelerations, (value) => dual(value));
  const wrench = Array.from({ length: 6 }, (_, j) => dual(effort[2 * n + j]!));
  /** Puts minus M^-1 times the slopes into a column. */
  const put = (target: Matrix, column: number, slope: (k: number) => number): void => {
    dynamic.forEach((row, r) => {
      let sum = 0;
      dynamic.forEach((k, c) => {
        sum -= inverseM.get(r, c) * slope(k);
      });
      target.set(speedAt + row, column, sum);
    });
  };
  for (let k = 0; k < N; k++) {
    const forces = inverseDynamicsOver(model, work, perturbed(model, state, k), still, wrench);
    put(A, k, (j) => forces[j]!.slope);
  }
  const x = Array.from(state, (value) => dual(value));
  for (let k = 0; k < model.effortSize; k++) {
    if (k >= 2 * n) {
      const pushed = wrench.map((d, j) => dual(d.value, j === k - 2 * n ? 1 : 0));
      const forces = inverseDynamicsOver(model, work, x, still, pushed);
      put(B, k, (j) => forces[j]!.slope);
      continue;
    }
    const coordinate = nb + k;
    const isGimbal = k < n;
    if (isDynamic(coordinate)) put(B, k, (j) => (j === coordinate ? -1 : 0));
    else if (isGimbal && model.description.gyros[k]!.drive.kind === 'servo') {
      put(B, k, (j) => M.get(j, coordinate));
      B.set(speedAt + coordinate, k, 1);
    }
  }
  const live = Array.from({ length: N }, (_, k) => k).filter((k) => {
    if (k < posed) return true;
    if (k < speedAt) return model.gimbalMode[k - posed] === gimbalIsDynamic;
    return isDynamic(k - speedAt);
  });
  return { A, B, names: namesOf(model), live };
}
