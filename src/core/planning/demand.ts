/**
 * The moment that gravity and inertia leave over about the support, for array and centre of pressure to supply.
 *
 * About the origin of the walking frame (on the ground, moving evenly with the body, so inertial), with a level
 * body that does not turn: M = sum r x m (g - a) - rate of spin. The balance is
 *   roll:   M_x + array_x + y_p F = 0        pitch:   M_y + array_y - x_p F = 0
 * where (x_p, y_p) is the centre of pressure and F the vertical force; the ground's horizontal force has no arm.
 */
import { combineBodies, rigPieces, STANDARD_GRAVITY } from '../physics';
import type { Rig } from '../rig';
import type { DisturbanceCourse } from './disturbances';
import type { GaitCourse } from './gait';
import type { LegMassCourse } from './legMass';
import { type Polygon, pressureStretch, type Stretch, supportPolygon, turningArm } from './supportPolygon';

/** What moves with the hips without turning: torso, payloads, wheels and gimbals. */
export interface Trunk {
  /** kg */
  readonly mass: number;
  /** m, body frame. */
  readonly centre: readonly [number, number, number];
}

/** What the feet stand with. */
export interface Ground {
  readonly footLength: number;
  readonly footWidth: number;
  readonly friction: number;
  /** m, distance the centre of pressure keeps from every edge. */
  readonly margin: number;
}

export interface Demand {
  readonly nodes: number;
  readonly intervals: number;
  readonly isCyclic: boolean;
  /** nodes, s. */
  readonly time: Float64Array;
  /** nodes, N*m about x and y: what gravity, inertia and disturbances leave over (see the balance above). */
  readonly roll: Float64Array;
  readonly pitch: Float64Array;
  /** nodes, N, upward, of the ground on the feet. */
  readonly verticalForce: Float64Array;
  /** nodes, N, size of the horizontal force of the ground on the feet. */
  readonly horizontalForce: Float64Array;
  /** nodes x 3: centre of mass of everything, m, walking frame. */
  readonly centreOfMass: Float64Array;
  /** nodes, m: where the centre of pressure would lie with no array at all. */
  readonly bareAcross: Float64Array;
  readonly bareAlong: Float64Array;
  /** intervals, m: least and greatest y and x of the centre of pressure over the whole interval, margin kept. */
  readonly acrossMin: Float64Array;
  readonly acrossMax: Float64Array;
  readonly alongMin: Float64Array;
  readonly alongMax: Float64Array;
  /** intervals, 1 where the margin leaves no room, so that the interval is one point, or no foot stays down. */
  readonly isPinched: Uint8Array;
  /** nodes, N*m: most moment about the vertical that friction under the feet holds. */
  readonly yawHold: Float64Array;
  /** nodes: outline of the ground under the feet that are down, walking frame. */
  readonly support: readonly Polygon[];
}

/** Everything of a legged rig but its legs, gimbals at rest. */
export function trunkOf(rig: Rig): Trunk {
  const { mass, com } = combineBodies(rigPieces(rig).filter((piece) => piece.group !== 'leg'));
  return { mass, centre: com };
}

/** What the feet of a legged rig stand with on firm footing; undefined for any other. */
export function groundOf(rig: Rig): Ground | undefined {
  if (rig.body.kind !== 'legged' || rig.footing.kind !== 'firm') return undefined;
  const { length, width } = rig.body.foot;
  return { footLength: length, footWidth: width, friction: rig.footing.friction, margin: rig.footing.margin };
}

/**
 * Demand of a gait, with or without disturbances.
 *
 * @param course  the sampled gait
 * @param trunk   what moves with the hips
 * @param legs    the legs over the same instants
 * @param ground  feet and footing
 * @param disturbance  over the same instants; undefined for none
 *
 * O(nodes x legs). Source: Vukobratovic and Borovac, Zero-moment point, Int. J. Humanoid Robotics 1 (2004).
 */
export function computeDemand(
  course: GaitCourse,
  trunk: Trunk,
  legs: LegMassCourse,
  ground: Ground,
  disturbance?: DisturbanceCourse,
): Demand {
  const { nodes } = course;
  const intervals = course.isCyclic ? nodes : nodes - 1;
  const column = () => new Float64Array(nodes);
  const demand: Demand = {
    nodes,
    intervals,
    isCyclic: course.isCyclic,
    time: course.time,
    roll: column(),
    pitch: column(),
    verticalForce: column(),
    horizontalForce: column(),
    centreOfMass: new Float64Array(3 * nodes),
    bareAcross: column(),
    bareAlong: column(),
    acrossMin: new Float64Array(intervals),
    acrossMax: new Float64Array(intervals),
    alongMin: new Float64Array(intervals),
    alongMax: new Float64Array(intervals),
    isPinched: new Uint8Array(intervals),
    yawHold: column(),
    support: Array.from({ length: nodes }, (_, k) =>
      supportPolygon(feetDown(course, k, course.isFootDown, k), ground.footLength, ground.footWidth),
    ),
  };
  for (let k = 0; k < nodes; k++) addMoments(k, course, trunk, legs, disturbance, demand);
  for (let k = 0; k < nodes; k++) {
    demand.bareAcross[k] = -demand.roll[k] / demand.verticalForce[k];
    demand.bareAlong[k] = demand.pitch[k] / demand.verticalForce[k];
    demand.yawHold[k] = yawHoldAt(k, course, ground, demand);
  }
  for (let k = 0; k < intervals; k++) boundPressure(k, course, ground, demand);
  return demand;
}

function addMoments(
  k: number,
  course: GaitCourse,
  trunk: Trunk,
  legs: LegMassCourse,
  disturbance: DisturbanceCourse | undefined,
  out: Demand,
): void {
  const at = 3 * k;
  const gx = disturbance ? disturbance.gravity[at] : 0;
  const gy = disturbance ? disturbance.gravity[at + 1] : 0;
  const gz = disturbance ? disturbance.gravity[at + 2] : -STANDARD_GRAVITY;
  // First moment of what moves with the hips.
  const added = disturbance ? disturbance.addedMass[k] : 0;
  const mass = trunk.mass + added;
  const sx =
    trunk.mass * trunk.centre[0] + (disturbance ? disturbance.addedMoment[at] : 0) + mass * course.body[at];
  const sy =
    trunk.mass * trunk.centre[1] +
    (disturbance ? disturbance.addedMoment[at + 1] : 0) +
    mass * course.body[at + 1];
  const sz =
    trunk.mass * trunk.centre[2] +
    (disturbance ? disturbance.addedMoment[at + 2] : 0) +
    mass * course.body[at + 2];
  const fx = gx - course.bodyAcceleration[at];
  const fy = gy - course.bodyAcceleration[at + 1];
  const fz = gz - course.bodyAcceleration[at + 2];
  const lx = legs.mass * legs.centre[at];
  const ly = legs.mass * legs.centre[at + 1];
  const lz = legs.mass * legs.centre[at + 2];
  out.roll[k] = sy * fz - sz * fy + ly * gz - lz * gy - legs.angularMomentumRate[at];
  out.pitch[k] = sz * fx - sx * fz + lz * gx - lx * gz - legs.angularMomentumRate[at + 1];
  let pushX = mass * fx + legs.mass * gx - legs.momentumRate[at];
  let pushY = mass * fy + legs.mass * gy - legs.momentumRate[at + 1];
  let pushZ = mass * fz + legs.mass * gz - legs.momentumRate[at + 2];
  if (disturbance) {
    out.roll[k] += disturbance.roll[k];
    out.pitch[k] += disturbance.pitch[k];
    pushX += disturbance.force[at];
    pushY += disturbance.force[at + 1];
    pushZ += disturbance.force[at + 2];
  }
  out.verticalForce[k] = -pushZ;
  out.horizontalForce[k] = Math.sqrt(pushX * pushX + pushY * pushY);
  const total = mass + legs.mass;
  out.centreOfMass[at] = (sx + lx) / total;
  out.centreOfMass[at + 1] = (sy + ly) / total;
  out.centreOfMass[at + 2] = (sz + lz) / total;
}

/** x y of the soles marked down in `flags` at row `row`, as they are at node k. */
function feetDown(course: GaitCourse, k: number, flags: Uint8Array, row: number): number[] {
  const centres: number[] = [];
  for (let leg = 0; leg < course.legs; leg++) {
    if (flags[row * course.legs + leg] !== 1) continue;
    const at = 3 * (k * course.legs + leg);
    centres.push(course.feet[at], course.feet[at + 1]);
  }
  return centres;
}

/**
 * Friction holds mu F times the mean arm of the soles' area about its middle, pressure taken as even, less what
 * the horizontal force uses up, by the ellipse of Howe and Cutkosky, Practical force-motion models for sliding
 * manipulation, Int. J. Robotics Research 15 (1996).
 */
function yawHoldAt(k: number, course: GaitCourse, ground: Ground, demand: Demand): number {
  const grip = ground.friction * demand.verticalForce[k];
  if (!(grip > 0)) return 0;
  const used = demand.horizontalForce[k] / grip;
  if (used >= 1) return 0;
  const centres = feetDown(course, k, course.isFootDown, k);
  return grip * turningArm(centres, ground.footLength, ground.footWidth) * Math.sqrt(1 - used * used);
}

/** Bounds the centre of pressure over one interval: what is allowed at both of its ends by the feet that stay down. */
function boundPressure(k: number, course: GaitCourse, ground: Ground, out: Demand): void {
  const next = (k + 1) % course.nodes;
  // The feet as they stand at either end of the interval: they move back evenly in the walking frame.
  const ends = [k, next].map((node) => {
    if (isSameFeet(course, node, k)) return out.support[node] as Polygon;
    const centres = feetDown(course, node, course.isFootDownThroughout, k);
    return centres.length > 0
      ? supportPolygon(centres, ground.footLength, ground.footWidth)
      : (out.support[node] as Polygon);
  });
  if (!course.isFootDownThroughout.subarray(k * course.legs, (k + 1) * course.legs).includes(1))
    out.isPinched[k] = 1;
  const across = [k, next].map((node, i) =>
    pressureStretch(ends[i] as Polygon, 1, out.bareAlong[node], ground.margin),
  );
  const along = [k, next].map((node, i) =>
    pressureStretch(ends[i] as Polygon, 0, out.bareAcross[node], ground.margin),
  );
  write(k, across, out.acrossMin, out.acrossMax, out.isPinched);
  write(k, along, out.alongMin, out.alongMax, out.isPinched);
}

/** Whether the feet down at a node are those that stay down over an interval, so that its outline serves again. */
function isSameFeet(course: GaitCourse, node: number, interval: number): boolean {
  for (let leg = 0; leg < course.legs; leg++) {
    const throughout = course.isFootDownThroughout[interval * course.legs + leg];
    if (course.isFootDown[node * course.legs + leg] !== throughout) return false;
  }
  return true;
}

function write(
  k: number,
  ends: readonly Stretch[],
  min: Float64Array,
  max: Float64Array,
  isPinched: Uint8Array,
): void {
  const least = Math.max(ends[0][0], ends[1][0]);
  const most = Math.min(ends[0][1], ends[1][1]);
  if (most - least < 1e-9) isPinched[k] = 1;
  min[k] = most >= least ? least : (least + most) / 2;
  max[k] = most >= least ? most : min[k];
}

/** Mean moment over the cycle or run, N*m: what the centre of pressure must carry on the mean, the array being unable to. */
export function meanMoment(demand: Demand): { readonly roll: number; readonly pitch: number } {
  const mean = (values: Float64Array): number => {
    let sum = 0;
    for (let k = 0; k < values.length; k++) sum += values[k];
    if (!demand.isCyclic) sum -= (values[0] + values[values.length - 1]) / 2;
    return sum / demand.intervals;
  };
  return { roll: mean(demand.roll), pitch: mean(demand.pitch) };
}

/**
 * Roll moment left over about the middle of the support, N*m at each node: what the array must give when the
 * centre of pressure stays in the middle. This is the demand as screens show it.
 */
export function rollLeftOver(demand: Demand): Float64Array {
  return demand.roll.map((moment, k) => {
    const interval = Math.min(k, demand.intervals - 1);
    const middle = (demand.acrossMin[interval] + demand.acrossMax[interval]) / 2;
    return -moment - demand.verticalForce[k] * middle;
  });
}

/** One axis as the planner takes it: what array and support must give together, and how far the support may reach. */
export interface FirmAsk {
  /** nodes, N*m: array + verticalForce x pressure = ask. */
  readonly ask: Float64Array;
  /** nodes, N. */
  readonly verticalForce: Float64Array;
  /** intervals, m: y about the roll axis, minus x about the pitch axis. */
  readonly pressureMin: Float64Array;
  readonly pressureMax: Float64Array;
}

/** Turns a demand about one axis into the planner's terms: ask = -M, and pressure measured so that it adds a positive moment. */
export function firmAsk(demand: Demand, axis: 'roll' | 'pitch'): FirmAsk {
  const { verticalForce } = demand;
  if (axis === 'roll') {
    return {
      ask: demand.roll.map((m) => -m),
      verticalForce,
      pressureMin: demand.acrossMin,
      pressureMax: demand.acrossMax,
    };
  }
  return {
    ask: demand.pitch.map((m) => -m),
    verticalForce,
    pressureMin: demand.alongMax.map((x) => -x),
    pressureMax: demand.alongMin.map((x) => -x),
  };
}
