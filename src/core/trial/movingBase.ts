/** Mass properties of the base while its legs walk by prescription, as the star takes them. */
import { addSymmetric, carrierPieces, combineBodies, pointInertia, type Sym3 } from '../physics';
import { type GaitCourse, type LegMassCourse, legMassCourse, legModelOf } from '../planning';
import type { Rig } from '../rig';

/** Numbers the star wants of a base that changes: see `setMovingBase`. */
export const MOVING_BASE = 28;

/** The gait as seen from the body: feet relative to it, the body itself at rest. */
function seenFromBody(course: GaitCourse): GaitCourse {
  const { nodes, legs } = course;
  const relative = (values: Float64Array, body: Float64Array): Float64Array =>
    values.map((value, at) => value - (body[3 * Math.floor(at / (3 * legs)) + (at % 3)] as number));
  const still = new Float64Array(3 * nodes);
  return {
    ...course,
    feet: relative(course.feet, course.body),
    feetVelocity: relative(course.feetVelocity, course.bodyVelocity),
    feetAcceleration: relative(course.feetAcceleration, course.bodyAcceleration),
    body: still,
    bodyVelocity: still,
    bodyAcceleration: still,
  };
}

/**
 * Base of a legged rig (body, payloads, legs; no gyros) at every node of a gait.
 *
 * @returns nodes x 28, body frame, about its origin: mass, first moment, inertia, momentum and angular momentum
 *          of the legs' own motion, then the rates of the last three
 *
 * O(nodes x legs).
 */
export function movingBaseCourse(rig: Rig, course: GaitCourse): Float64Array {
  const trunk = combineBodies(carrierPieces(rig).filter((piece) => piece.group !== 'leg'));
  const trunkInertia = addSymmetric(trunk.inertia, pointInertia(trunk.mass, trunk.com));
  const out = new Float64Array(course.nodes * MOVING_BASE);
  const legs =
    rig.body.kind === 'legged' ? legMassCourse(legModelOf(rig.body), seenFromBody(course)) : undefined;
  for (let k = 0; k < course.nodes; k++) {
    const at = k * MOVING_BASE;
    out[at] = trunk.mass + (legs?.mass ?? 0);
    for (let axis = 0; axis < 3; axis++) {
      out[at + 1 + axis] =
        trunk.mass * (trunk.com[axis] as number) +
        (legs ? legs.mass * (legs.centre[3 * k + axis] as number) : 0);
    }
    const inertia = legs ? addSymmetric(trunkInertia, legInertia(legs, k)) : trunkInertia;
    for (let j = 0; j < 6; j++) out[at + 4 + j] = inertia[j] as number;
    if (!legs) continue;
    for (let axis = 0; axis < 3; axis++) {
      out[at + 10 + axis] = legs.momentum[3 * k + axis] as number;
      out[at + 13 + axis] = legs.angularMomentum[3 * k + axis] as number;
      out[at + 22 + axis] = legs.momentumRate[3 * k + axis] as number;
      out[at + 25 + axis] = legs.angularMomentumRate[3 * k + axis] as number;
    }
  }
  fillInertiaRates(out, course);
  return out;
}

function legInertia(legs: LegMassCourse, k: number): Sym3 {
  const own = Array.from(legs.inertia.subarray(6 * k, 6 * k + 6)) as unknown as Sym3;
  const centre = [legs.centre[3 * k], legs.centre[3 * k + 1], legs.centre[3 * k + 2]] as [
    number,
    number,
    number,
  ];
  return addSymmetric(own, pointInertia(legs.mass, centre));
}

/** Rates of the inertia by central differences along the course: second order in its step. */
function fillInertiaRates(out: Float64Array, course: GaitCourse): void {
  const { nodes, isCyclic, time } = course;
  const step = (time[1] as number) - (time[0] as number);
  for (let k = 0; k < nodes; k++) {
    const before = isCyclic ? (k - 1 + nodes) % nodes : Math.max(0, k - 1);
    const after = isCyclic ? (k + 1) % nodes : Math.min(nodes - 1, k + 1);
    const span = isCyclic ? 2 * step : (after - before) * step;
    for (let j = 0; j < 6; j++) {
      const rise =
        (out[after * MOVING_BASE + 4 + j] as number) - (out[before * MOVING_BASE + 4 + j] as number);
      out[k * MOVING_BASE + 16 + j] = rise / span;
    }
  }
}
