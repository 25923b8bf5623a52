/**
 * Mass properties of a rig about its own centre of mass, with gimbals tilted and legs where the gait has them, and
 * the momentum of everything that moves on its body. Written for bodies carried by their centre of mass, where the
 * star is carried by the body's origin: the compiled numbers are the star's, the bookkeeping is not.
 */
import { axialMomentum, placeSpinAxis, type StarModel } from '../core/physics';

/** A rig's mass at one instant; body axes. */
export interface RigMass {
  mass: number;
  /** 3, m, from the body's origin. */
  readonly centre: Float64Array;
  /** 3, m/s: how fast the centre moves on the body. */
  readonly centreRate: Float64Array;
  /** 9, row-major, kg*m^2, about the centre of mass. */
  readonly inertia: Float64Array;
  /** 3, N*m*s, about the centre of mass: wheels, gimbals and legs as seen from the body. */
  readonly inner: Float64Array;
  /** 3n, kg*m^2: angular momentum about the centre of mass for one rad/s of each gimbal. */
  readonly hingeMomentum: Float64Array;
  /** 3n, kg*m: momentum for one rad/s of each gimbal. */
  readonly hingePush: Float64Array;
  /** 3n: spin axes; and how they change with tilt. */
  readonly spin: Float64Array;
  readonly spinSlope: Float64Array;
}

export const createRigMass = (gimbals: number): RigMass => ({
  mass: 0,
  centre: new Float64Array(3),
  centreRate: new Float64Array(3),
  inertia: new Float64Array(9),
  inner: new Float64Array(3),
  hingeMomentum: new Float64Array(3 * gimbals),
  hingePush: new Float64Array(3 * gimbals),
  spin: new Float64Array(3 * gimbals),
  spinSlope: new Float64Array(3 * gimbals),
});

const about = new Float64Array(10);
const own = new Float64Array(10);
const moving = new Float64Array(6);

/**
 * Mass, centre, inertia and inner momentum of a rig.
 *
 * @param model  its compiled star; the footing plays no part
 * @param base   16 or more: mass, first moment 3, inertia 6 about the origin, momentum and angular momentum 3 + 3 of
 *               the legs as seen from the body (the first sixteen numbers the star takes of a moving base)
 * @param tilt   n, rad
 * @param rate   n, rad/s
 * @param spin   n: wheel speed relative to its gimbal where it is held, rad/s; elsewhere momentum along the spin
 *               axis, N*m*s
 * @param out    written whole
 *
 * O(n), allocates nothing.
 */
export function weighRig(
  model: StarModel,
  base: Float64Array,
  tilt: Float64Array,
  rate: Float64Array,
  spin: Float64Array,
  out: RigMass,
): void {
  for (let k = 0; k < 10; k++) about[k] = base[k];
  for (let k = 0; k < 6; k++) moving[k] = base[10 + k];
  for (let i = 0; i < model.gimbals; i++) {
    addGimbal(model, i, tilt[i], rate[i], out);
    const h = model.isHeld[i] === 1 ? axialMomentum(model.array.axialInertia[i], spin[i], 0) : spin[i];
    for (let j = 0; j < 3; j++) moving[3 + j] += h * out.spin[3 * i + j];
  }
  const mass = about[0];
  out.mass = mass;
  for (let j = 0; j < 3; j++) {
    out.centre[j] = about[1 + j] / mass;
    out.centreRate[j] = moving[j] / mass;
  }
  const [x, y, z] = out.centre;
  const I = out.inertia;
  I[0] = about[4] - mass * (y * y + z * z);
  I[4] = about[5] - mass * (x * x + z * z);
  I[8] = about[6] - mass * (x * x + y * y);
  I[1] = I[3] = about[7] + mass * x * y;
  I[2] = I[6] = about[8] + mass * x * z;
  I[5] = I[7] = about[9] + mass * y * z;
  out.inner[0] = moving[3] - (y * moving[2] - z * moving[1]);
  out.inner[1] = moving[4] - (z * moving[0] - x * moving[2]);
  out.inner[2] = moving[5] - (x * moving[1] - y * moving[0]);
  for (let i = 0; i < model.gimbals; i++) {
    const k = 3 * i;
    const p = out.hingePush;
    out.hingeMomentum[k] -= y * p[k + 2] - z * p[k + 1];
    out.hingeMomentum[k + 1] -= z * p[k] - x * p[k + 2];
    out.hingeMomentum[k + 2] -= x * p[k + 1] - y * p[k];
  }
}

/** Adds one gimbal and its wheel, about the origin, to what is being summed. */
function addGimbal(model: StarModel, i: number, tilt: number, rate: number, out: RigMass): void {
  const c1 = Math.cos(tilt);
  const s1 = Math.sin(tilt);
  const c2 = c1 * c1 - s1 * s1;
  const s2 = 2 * s1 * c1;
  own[0] = model.mass[i];
  for (let j = 0; j < 3; j++) {
    const e = 9 * i + j;
    own[1 + j] = model.momentSeries[e] + model.momentSeries[e + 3] * c1 + model.momentSeries[e + 6] * s1;
  }
  for (let j = 0; j < 6; j++) {
    const t = 30 * i + j;
    const series = model.inertiaSeries;
    own[4 + j] =
      series[t] + series[t + 6] * c1 + series[t + 12] * s1 + series[t + 18] * c2 + series[t + 24] * s2;
  }
  for (let k = 0; k < 10; k++) about[k] += own[k];
  const h = 6 * i;
  const [ax, ay, az] = [model.hinge[h], model.hinge[h + 1], model.hinge[h + 2]];
  const [bx, by, bz] = [model.hinge[h + 3], model.hinge[h + 4], model.hinge[h + 5]];
  const k = 3 * i;
  const push = out.hingePush;
  push[k] = own[0] * bx + ay * own[3] - az * own[2];
  push[k + 1] = own[0] * by + az * own[1] - ax * own[3];
  push[k + 2] = own[0] * bz + ax * own[2] - ay * own[1];
  const turn = out.hingeMomentum;
  turn[k] = own[4] * ax + own[7] * ay + own[8] * az + own[2] * bz - own[3] * by;
  turn[k + 1] = own[7] * ax + own[5] * ay + own[9] * az + own[3] * bx - own[1] * bz;
  turn[k + 2] = own[8] * ax + own[9] * ay + own[6] * az + own[1] * by - own[2] * bx;
  for (let j = 0; j < 3; j++) {
    moving[j] += rate * push[k + j];
    moving[3 + j] += rate * turn[k + j];
  }
  placeSpinAxis(model.array, i, c1, s1, out.spin, k);
  out.spinSlope[k] = ay * out.spin[k + 2] - az * out.spin[k + 1];
  out.spinSlope[k + 1] = az * out.spin[k] - ax * out.spin[k + 2];
  out.spinSlope[k + 2] = ax * out.spin[k + 1] - ay * out.spin[k];
}
