/** What prescribed legs weigh, where, and the momentum they carry, from hips and feet by exact differentiation of the knee. */
import type { LeggedBody } from '../rig';
import type { GaitCourse } from './gait';

/** Masses and lengths of one leg; all legs are alike. */
export interface LegModel {
  /** m and kg. */
  readonly thigh: { readonly length: number; readonly mass: number };
  readonly shank: { readonly length: number; readonly mass: number };
  readonly foot: { readonly length: number; readonly width: number; readonly mass: number };
}

/** All legs together over the instants of a plan; walking frame, moments about its origin. */
export interface LegMassCourse {
  /** kg */
  readonly mass: number;
  /** nodes x 3, m. */
  readonly centre: Float64Array;
  /** nodes x 6, kg*m^2 about the legs' own common centre: xx yy zz xy xz yz, products carrying the minus. */
  readonly inertia: Float64Array;
  /** nodes x 3, kg*m/s and N. */
  readonly momentum: Float64Array;
  readonly momentumRate: Float64Array;
  /** nodes x 3, N*m*s and N*m, about the origin of the walking frame. */
  readonly angularMomentum: Float64Array;
  readonly angularMomentumRate: Float64Array;
}

export const legModelOf = (body: LeggedBody): LegModel => ({
  thigh: body.thigh,
  shank: body.shank,
  foot: body.foot,
});

export const legMassOf = (leg: LegModel): number => leg.thigh.mass + leg.shank.mass + leg.foot.mass;

/** Layout of a sum over bodies: mass x position, momentum, force, angular momentum, its rate, second moments. */
const SUMS = { moment: 0, momentum: 3, force: 6, angular: 9, angularRate: 12, second: 15 } as const;
export const LEG_SUMS = 21;

/**
 * Position, velocity and acceleration of the knee between a hip and a foot; it bends forward, in the plane of
 * the leg and the x axis.
 *
 * With d from hip to foot and q = d.d, the knee is hip + alpha d + kappa (q x - d_x d), where
 * alpha = 1/2 + (a^2 - b^2) / (2 q) and kappa^2 = (a^2 - alpha^2 q) / (q (q - d_x^2)); a, b are thigh and shank.
 *
 * @param hip   9: m, m/s, m/s^2
 * @param foot  9: likewise, same frame
 * @param a     m, thigh
 * @param b     m, shank
 * @param out   9: the knee; may not alias an input. NaN where the leg is straight or does not reach
 *
 * O(1), allocates nothing. Source: law of cosines, differentiated twice.
 */
export function kneeState(
  hip: Float64Array,
  foot: Float64Array,
  a: number,
  b: number,
  out: Float64Array,
): void {
  const dx = foot[0] - hip[0];
  const dy = foot[1] - hip[1];
  const dz = foot[2] - hip[2];
  const ex = foot[3] - hip[3];
  const ey = foot[4] - hip[4];
  const ez = foot[5] - hip[5];
  const fx = foot[6] - hip[6];
  const fy = foot[7] - hip[7];
  const fz = foot[8] - hip[8];
  const q = dx * dx + dy * dy + dz * dz;
  const q1 = 2 * (dx * ex + dy * ey + dz * ez);
  const q2 = 2 * (ex * ex + ey * ey + ez * ez + dx * fx + dy * fy + dz * fz);
  const c = (a * a - b * b) / 2;
  const alpha = 0.5 + c / q;
  const alpha1 = (-c * q1) / (q * q);
  const alpha2 = c * ((2 * q1 * q1) / (q * q * q) - q2 / (q * q));
  // Square of the knee's height over the line from hip to foot.
  const w = a * a - alpha * alpha * q;
  const w1 = -(2 * alpha * alpha1 * q + alpha * alpha * q1);
  const w2 = -(2 * (alpha1 * alpha1 + alpha * alpha2) * q + 4 * alpha * alpha1 * q1 + alpha * alpha * q2);
  const s = dx * dx;
  const s1 = 2 * dx * ex;
  const s2 = 2 * (ex * ex + dx * fx);
  const p = q * (q - s);
  const p1 = q1 * (q - s) + q * (q1 - s1);
  const p2 = q2 * (q - s) + 2 * q1 * (q1 - s1) + q * (q2 - s2);
  const g = w / p;
  const g1 = (w1 - g * p1) / p;
  const g2 = (w2 - 2 * g1 * p1 - g * p2) / p;
  const kappa = Math.sqrt(g);
  const kappa1 = g1 / (2 * kappa);
  const kappa2 = (g2 - 2 * kappa1 * kappa1) / (2 * kappa);
  for (let i = 0; i < 3; i++) {
    const d = foot[i] - hip[i];
    const e = foot[3 + i] - hip[3 + i];
    const f = foot[6 + i] - hip[6 + i];
    const isX = i === 0 ? 1 : 0;
    const m = isX * q - dx * d;
    const m1 = isX * q1 - (ex * d + dx * e);
    const m2 = isX * q2 - (fx * d + 2 * ex * e + dx * f);
    out[i] = hip[i] + alpha * d + kappa * m;
    out[3 + i] = hip[3 + i] + alpha1 * d + alpha * e + kappa1 * m + kappa * m1;
    out[6 + i] =
      hip[6 + i] + alpha2 * d + 2 * alpha1 * e + alpha * f + kappa2 * m + 2 * kappa1 * m1 + kappa * m2;
  }
}

/** Adds what a moving point mass brings to angular momentum, its rate and the second moments. */
function addMass(
  mass: number,
  rx: number,
  ry: number,
  rz: number,
  vx: number,
  vy: number,
  vz: number,
  ax: number,
  ay: number,
  az: number,
  sums: Float64Array,
): void {
  sums[9] += mass * (ry * vz - rz * vy);
  sums[10] += mass * (rz * vx - rx * vz);
  sums[11] += mass * (rx * vy - ry * vx);
  sums[12] += mass * (ry * az - rz * ay);
  sums[13] += mass * (rz * ax - rx * az);
  sums[14] += mass * (rx * ay - ry * ax);
  sums[15] += mass * rx * rx;
  sums[16] += mass * ry * ry;
  sums[17] += mass * rz * rz;
  sums[18] += mass * rx * ry;
  sums[19] += mass * rx * rz;
  sums[20] += mass * ry * rz;
}

/** Adds a thin rod between two moving points. */
function addRod(mass: number, a: Float64Array, b: Float64Array, sums: Float64Array): void {
  addMass(
    mass,
    0.5 * (a[0] + b[0]),
    0.5 * (a[1] + b[1]),
    0.5 * (a[2] + b[2]),
    0.5 * (a[3] + b[3]),
    0.5 * (a[4] + b[4]),
    0.5 * (a[5] + b[5]),
    0.5 * (a[6] + b[6]),
    0.5 * (a[7] + b[7]),
    0.5 * (a[8] + b[8]),
    sums,
  );
  // About its centre a rod turns like a twelfth of its mass at the end of the vector from end to end.
  addMass(
    mass / 12,
    b[0] - a[0],
    b[1] - a[1],
    b[2] - a[2],
    b[3] - a[3],
    b[4] - a[4],
    b[5] - a[5],
    b[6] - a[6],
    b[7] - a[7],
    b[8] - a[8],
    sums,
  );
  for (let i = 0; i < 9; i++) sums[i] += 0.5 * mass * (a[i] + b[i]);
}

/**
 * Adds one leg, thigh and shank as thin rods and a foot kept level, to sums over bodies.
 *
 * @param leg    masses and lengths
 * @param hip    9: position, velocity, acceleration in an inertial frame
 * @param foot   9: likewise, middle of the sole
 * @param knee   9, overwritten with the knee
 * @param sums   21, added to: sum of m r, m v, m a, r x m v, r x m a, and of m r r^T as xx yy zz xy xz yz
 *
 * O(1), allocates nothing.
 */
export function addLeg(
  leg: LegModel,
  hip: Float64Array,
  foot: Float64Array,
  knee: Float64Array,
  sums: Float64Array,
): void {
  kneeState(hip, foot, leg.thigh.length, leg.shank.length, knee);
  addRod(leg.thigh.mass, hip, knee, sums);
  addRod(leg.shank.mass, knee, foot, sums);
  const m = leg.foot.mass;
  addMass(m, foot[0], foot[1], foot[2], foot[3], foot[4], foot[5], foot[6], foot[7], foot[8], sums);
  sums[15] += (m * leg.foot.length * leg.foot.length) / 12;
  sums[16] += (m * leg.foot.width * leg.foot.width) / 12;
  for (let i = 0; i < 9; i++) sums[i] += m * foot[i];
}

/**
 * Mass properties and momentum of all legs over the instants of a gait.
 *
 * @param leg     masses and lengths of one leg
 * @param course  the sampled gait, within reach of the legs
 *
 * O(nodes x legs). Source: Koenig's theorem for each link.
 */
export function legMassCourse(leg: LegModel, course: GaitCourse): LegMassCourse {
  const { nodes, legs } = course;
  const out: LegMassCourse = {
    mass: legs * legMassOf(leg),
    centre: new Float64Array(3 * nodes),
    inertia: new Float64Array(6 * nodes),
    momentum: new Float64Array(3 * nodes),
    momentumRate: new Float64Array(3 * nodes),
    angularMomentum: new Float64Array(3 * nodes),
    angularMomentumRate: new Float64Array(3 * nodes),
  };
  const hip = new Float64Array(9);
  const foot = new Float64Array(9);
  const knee = new Float64Array(9);
  const sums = new Float64Array(LEG_SUMS);
  for (let k = 0; k < nodes; k++) {
    sums.fill(0);
    for (let i = 0; i < legs; i++) {
      const place = course.gait.hips[i];
      for (let axis = 0; axis < 3; axis++) {
        const at = 3 * (k * legs + i) + axis;
        hip[axis] = place[axis] + course.body[3 * k + axis];
        hip[3 + axis] = course.bodyVelocity[3 * k + axis];
        hip[6 + axis] = course.bodyAcceleration[3 * k + axis];
        foot[axis] = course.feet[at];
        foot[3 + axis] = course.feetVelocity[at];
        foot[6 + axis] = course.feetAcceleration[at];
      }
      addLeg(leg, hip, foot, knee, sums);
    }
    writeSums(sums, k, out);
  }
  return out;
}

function writeSums(sums: Float64Array, k: number, out: LegMassCourse): void {
  const { mass } = out;
  for (let axis = 0; axis < 3; axis++) {
    const at = 3 * k + axis;
    out.centre[at] = mass > 0 ? sums[SUMS.moment + axis] / mass : 0;
    out.momentum[at] = sums[SUMS.momentum + axis];
    out.momentumRate[at] = sums[SUMS.force + axis];
    out.angularMomentum[at] = sums[SUMS.angular + axis];
    out.angularMomentumRate[at] = sums[SUMS.angularRate + axis];
  }
  const x = out.centre[3 * k];
  const y = out.centre[3 * k + 1];
  const z = out.centre[3 * k + 2];
  const xx = sums[15] - mass * x * x;
  const yy = sums[16] - mass * y * y;
  const zz = sums[17] - mass * z * z;
  out.inertia[6 * k] = yy + zz;
  out.inertia[6 * k + 1] = xx + zz;
  out.inertia[6 * k + 2] = xx + yy;
  out.inertia[6 * k + 3] = mass * x * y - sums[18];
  out.inertia[6 * k + 4] = mass * x * z - sums[19];
  out.inertia[6 * k + 5] = mass * y * z - sums[20];
}
