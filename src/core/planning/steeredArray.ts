/**
 * Gimbals whose torques mix axes, worked as one: tilts that store a wanted momentum, and how much of it the tilt
 * limits, the rates and the distance kept from singularities leave about one axis.
 *
 * Tilts are found by the steering law carried to rest at each instant: Moore-Penrose rates towards the wanted
 * momentum, damped near a singularity, with null motion towards the rest tilts. What is left when nothing moves
 * any more is the smallest tilt that stores the momentum, so a momentum that closes on itself closes the tilts too.
 */
import { type CompiledRig, unit3 } from '../physics';
import type { Gyro, Servo } from '../rig';
import { gimbalGroups, workingSpeed } from './gimbalGroups';

/** Share of the distance to singularity at rest below which a tilt is not used. */
export const LEAST_MEASURE_SHARE = 0.1;
/** Share of the measure at rest at which damping of the inverse sets in, and its size over the mean square gain. */
const DAMPING_DECAY = 30;
const DAMPING = 0.02;
const STEPS = 60;
const SETTLED = 1e-11;

export interface SteeredArray {
  /** Servos, each with what it turns. */
  readonly count: number;
  readonly leaders: readonly number[];
  readonly servos: readonly Servo[];
  /** Gyro after gyro that a servo turns: its place, its servo's place, and the ratio between them. */
  readonly members: readonly { readonly gyro: number; readonly servo: number; readonly ratio: number }[];
  /** 3 per member, N*m*s: momentum = cosine cos(ratio tilt) + sine sin(ratio tilt), constant part left out. */
  readonly cosine: Float64Array;
  readonly sine: Float64Array;
  /** count, rad and rad/s, of each servo. */
  readonly tiltMin: Float64Array;
  readonly tiltMax: Float64Array;
  readonly rateLimit: Float64Array;
  /** 3, N*m*s at rest; det(A A^T) at rest, (N*m*s)^6; mean square gain, (N*m*s)^2. */
  readonly restMomentum: Float64Array;
  readonly restMeasure: number;
  readonly meanSquare: number;
}

/** Scratch of one steering run. */
export interface SteeringWork {
  readonly jacobian: Float64Array;
  readonly square: Float64Array;
  readonly inverse: Float64Array;
  readonly momentum: Float64Array;
  readonly aim: Float64Array;
  readonly step: Float64Array;
}

export const createSteeringWork = (array: SteeredArray): SteeringWork => ({
  jacobian: new Float64Array(3 * array.count),
  square: new Float64Array(6),
  inverse: new Float64Array(6),
  momentum: new Float64Array(3),
  aim: new Float64Array(3),
  step: new Float64Array(array.count),
});

/** The rig's servo-driven gimbals as one steered array. O(gyros). */
export function steeredArrayOf(compiled: CompiledRig): SteeredArray {
  const { gyros } = compiled.rig.array;
  const groups = gimbalGroups(compiled);
  const members = groups.flatMap((group, servo) =>
    group.members.map(({ index, ratio }) => ({ gyro: index, servo, ratio })),
  );
  const cosine = new Float64Array(3 * members.length);
  const sine = new Float64Array(3 * members.length);
  const count = groups.length;
  const tiltMin = new Float64Array(count).fill(-Math.PI);
  const tiltMax = new Float64Array(count).fill(Math.PI);
  members.forEach(({ gyro, servo, ratio }, m) => {
    const { gimbalAxis, spinAxis, tilt } = gyros[gyro] as Gyro;
    const g = unit3(gimbalAxis);
    const s = unit3(spinAxis);
    const h = (compiled.wheels[gyro]?.spinInertia ?? 0) * compiled.speeds[gyro];
    const along = g[0] * s[0] + g[1] * s[1] + g[2] * s[2];
    const across = [g[1] * s[2] - g[2] * s[1], g[2] * s[0] - g[0] * s[2], g[0] * s[1] - g[1] * s[0]];
    for (let k = 0; k < 3; k++) {
      cosine[3 * m + k] = h * (s[k] - along * g[k]);
      sine[3 * m + k] = h * across[k];
    }
    const ends = [tilt.min / ratio, tilt.max / ratio];
    tiltMin[servo] = Math.max(tiltMin[servo], Math.min(...ends));
    tiltMax[servo] = Math.min(tiltMax[servo], Math.max(...ends));
  });
  const bare: SteeredArray = {
    count,
    leaders: groups.map(({ leader }) => leader),
    servos: groups.map(({ servo }) => servo),
    members,
    cosine,
    sine,
    tiltMin,
    tiltMax,
    rateLimit: Float64Array.from(groups, ({ servo }) => workingSpeed(servo)),
    restMomentum: new Float64Array(3),
    restMeasure: 0,
    meanSquare: 1,
  };
  const work = createSteeringWork(bare);
  const rest = new Float64Array(count);
  fillMomentum(bare, rest, bare.restMomentum);
  const restMeasure = measureAt(bare, work, rest);
  const [xx, yy, zz] = work.square;
  return { ...bare, restMeasure, meanSquare: Math.max(Number.MIN_VALUE, (xx + yy + zz) / 3) };
}

/** Momentum of the gimbals at a tilt, N*m*s, without the part along the gimbal axes. */
export function fillMomentum(array: SteeredArray, tilt: Float64Array, out: Float64Array): void {
  const { members, cosine, sine } = array;
  out.fill(0);
  for (let m = 0; m < members.length; m++) {
    const { servo, ratio } = members[m];
    const c = Math.cos(ratio * tilt[servo]);
    const s = Math.sin(ratio * tilt[servo]);
    for (let k = 0; k < 3; k++) out[k] += cosine[3 * m + k] * c + sine[3 * m + k] * s;
  }
}

/** d(momentum)/d(tilt) into work.jacobian (3 per servo), A A^T into work.square (xx yy zz xy xz yz). */
function fillJacobian(array: SteeredArray, work: SteeringWork, tilt: Float64Array): void {
  const { members, cosine, sine, count } = array;
  const { jacobian, square } = work;
  jacobian.fill(0);
  for (let m = 0; m < members.length; m++) {
    const { servo, ratio } = members[m];
    const c = ratio * Math.cos(ratio * tilt[servo]);
    const s = ratio * Math.sin(ratio * tilt[servo]);
    for (let k = 0; k < 3; k++) jacobian[3 * servo + k] += sine[3 * m + k] * c - cosine[3 * m + k] * s;
  }
  square.fill(0);
  for (let i = 0; i < count; i++) {
    const x = jacobian[3 * i];
    const y = jacobian[3 * i + 1];
    const z = jacobian[3 * i + 2];
    square[0] += x * x;
    square[1] += y * y;
    square[2] += z * z;
    square[3] += x * y;
    square[4] += x * z;
    square[5] += y * z;
  }
}

/** Determinant of a symmetric matrix (xx yy zz xy xz yz), and its inverse into `out`; with `add` on the diagonal. */
function invertSymmetric(m: Float64Array, add: number, out: Float64Array): number {
  const a = m[0] + add;
  const b = m[1] + add;
  const c = m[2] + add;
  const d = m[3];
  const e = m[4];
  const f = m[5];
  const A = b * c - f * f;
  const D = e * f - d * c;
  const E = d * f - e * b;
  const det = a * A + d * D + e * E;
  out[0] = A / det;
  out[1] = (a * c - e * e) / det;
  out[2] = (a * b - d * d) / det;
  out[3] = D / det;
  out[4] = E / det;
  out[5] = (d * e - a * f) / det;
  return det;
}

/** det(A A^T) at a tilt, (N*m*s)^6: the square of the measure of Yoshikawa (1985). */
export function measureAt(array: SteeredArray, work: SteeringWork, tilt: Float64Array): number {
  fillJacobian(array, work, tilt);
  return Math.max(0, invertSymmetric(work.square, 0, work.inverse));
}

/** Distance to singularity over that at rest: sqrt(det A A^T) over its rest value, 0 at a singularity. */
export const singularityShare = (array: SteeredArray, work: SteeringWork, tilt: Float64Array): number =>
  array.restMeasure > 0 ? Math.sqrt(measureAt(array, work, tilt) / array.restMeasure) : 0;

/**
 * Moves tilts until they store a momentum.
 *
 * @param wanted  3, N*m*s, change from the momentum at rest
 * @param tilt    count, rad: where to start, and the answer
 * @param passes  most of them; a loop that goes on from its last tilts needs one or two
 * @returns       what of the momentum is still missing, N*m*s; more than nothing where there is no such tilt near
 *
 * O(steps x servos). Source: Wie, JGCD 27(2) 2004; damping as Nakamura and Hanafusa, ASME JDSMC 108 (1986).
 */
export function steerTo(
  array: SteeredArray,
  work: SteeringWork,
  wanted: Float64Array,
  tilt: Float64Array,
  passes = STEPS,
): number {
  const { momentum, aim, step, jacobian, square, inverse } = work;
  const { count, restMomentum, restMeasure, meanSquare } = array;
  let missing = Number.POSITIVE_INFINITY;
  for (let pass = 0; pass < passes; pass++) {
    fillMomentum(array, tilt, momentum);
    const det = measureAt(array, work, tilt);
    const share = restMeasure > 0 ? Math.sqrt(det / restMeasure) : 0;
    const damping = DAMPING * meanSquare * Math.exp(-DAMPING_DECAY * share);
    // Aim: what is missing, and J tilt, so that the least-norm answer of both is the null motion to rest as well.
    let lost = 0;
    for (let k = 0; k < 3; k++) {
      const gap = wanted[k] - (momentum[k] - restMomentum[k]);
      lost += gap * gap;
      let held = 0;
      for (let i = 0; i < count; i++) held += jacobian[3 * i + k] * tilt[i];
      aim[k] = gap + held;
    }
    missing = Math.sqrt(lost);
    invertSymmetric(square, damping, inverse);
    const x = inverse[0] * aim[0] + inverse[3] * aim[1] + inverse[4] * aim[2];
    const y = inverse[3] * aim[0] + inverse[1] * aim[1] + inverse[5] * aim[2];
    const z = inverse[4] * aim[0] + inverse[5] * aim[1] + inverse[2] * aim[2];
    let most = 0;
    for (let i = 0; i < count; i++) {
      step[i] = jacobian[3 * i] * x + jacobian[3 * i + 1] * y + jacobian[3 * i + 2] * z - tilt[i];
      most = Math.max(most, Math.abs(step[i]));
    }
    if (!(most < Number.POSITIVE_INFINITY)) return Number.POSITIVE_INFINITY;
    if (most < SETTLED) break;
    const held = most > 0.2 ? 0.2 / most : 1;
    for (let i = 0; i < count; i++) tilt[i] += held * step[i];
  }
  return missing;
}

/** What an array gives about one axis with nothing about the others: momentum, and the torque at each share of it. */
export interface AxisEnvelope {
  /** N*m*s, each way alike. */
  readonly momentum: number;
  /** points, N*m*s, rising from 0 */
  readonly held: readonly number[];
  /** points, N*m: torque at which the first servo meets its rate. */
  readonly torque: readonly number[];
}

const ENVELOPE_STEPS = 60;

/**
 * Follows momentum about an axis out to the first tilt limit, the distance kept from singularities, or the end of what
 * there is; both senses, the lesser kept.
 *
 * @param beside  N*m*s per N*m*s, of the other level axis that must be stored at the same time
 */
export function axisEnvelope(array: SteeredArray, axis: 0 | 1, beside = 0): AxisEnvelope {
  const work = createSteeringWork(array);
  const most = Math.sqrt(array.meanSquare) * array.count;
  const pace = most / ENVELOPE_STEPS;
  const held: number[] = [];
  const torque: number[] = [];
  const starts = [1, -1].flatMap((sense) =>
    beside === 0
      ? [[sense, 0]]
      : [
          [sense, 1],
          [sense, -1],
        ],
  );
  const states = starts.map(() => ({
    tilt: new Float64Array(array.count),
    last: new Float64Array(array.count),
  }));
  const wanted = new Float64Array(3);
  for (let k = 0; k <= ENVELOPE_STEPS; k++) {
    let least = Number.POSITIVE_INFINITY;
    for (let s = 0; s < states.length; s++) {
      const { tilt, last } = states[s];
      const [sense, side] = starts[s];
      wanted.fill(0);
      wanted[axis] = sense * k * pace;
      wanted[1 - axis] = side * beside * k * pace;
      const missing = steerTo(array, work, wanted, tilt);
      if (!(missing < 1e-9 * most) || !isUsable(array, work, tilt))
        return { momentum: held.at(-1) ?? 0, held, torque };
      for (let i = 0; i < array.count; i++) {
        const turned = Math.abs(tilt[i] - last[i]) / pace;
        if (k > 0 && turned > 0) least = Math.min(least, array.rateLimit[i] / turned);
        last[i] = tilt[i];
      }
    }
    held.push(k * pace);
    if (k > 0) torque.push(least);
    if (k === 1) torque.unshift(least);
  }
  return { momentum: held.at(-1) ?? 0, held, torque };
}

/** Whether a tilt is within the limits and far enough from any singularity. */
export function isUsable(array: SteeredArray, work: SteeringWork, tilt: Float64Array): boolean {
  for (let i = 0; i < array.count; i++) {
    if (!(tilt[i] >= array.tiltMin[i] && tilt[i] <= array.tiltMax[i])) return false;
  }
  return singularityShare(array, work, tilt) >= LEAST_MEASURE_SHARE;
}
