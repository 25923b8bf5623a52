/** A run of disturbances over the instants of a plan: moments, forces, gravity's direction, added mass and sudden jumps of momentum. */
import { STANDARD_GRAVITY } from '../physics';
import type { Disturbance, InlineBody } from '../rig';
import { spanOf } from './disturbanceBlocks';
import { hatShare, sampleSeries } from './loadSampling';
import { createWaveTrain, sampleWaveMoment, type WaveBody } from './waveLoad';

/** What the moments are taken about, and what a disturbance must know of the rig. */
export interface DisturbanceSetting {
  /** m above the ground (or the keel line): the point or line moments are about. 0 for feet on firm ground. */
  readonly referenceHeight: number;
  /** m/s along and across: mean motion of the body over the ground. */
  readonly velocity: readonly [number, number];
  /** A floating body's share of waves; undefined on land. */
  readonly waves: WaveBody | undefined;
  /** Spin inertia and radius of road wheels that gyrate in a turn; undefined for a body without any. */
  readonly road: { readonly spinInertia: number; readonly radius: number } | undefined;
}

/** A sudden change of momentum: a blow, or a mass picked up on the move. */
export interface Jump {
  /** s */
  readonly time: number;
  /** N*m*s about x and y: what it adds to the body's angular momentum about the reference. */
  readonly roll: number;
  readonly pitch: number;
  /** N*s along x, y, z. */
  readonly impulse: readonly [number, number, number];
  /** Place in the sequence. */
  readonly index: number;
}

export interface DisturbanceCourse {
  readonly nodes: number;
  /** nodes, s. */
  readonly time: Float64Array;
  /** nodes, N*m about x and y through the reference, not counting gravity, added mass and jumps. */
  readonly roll: Float64Array;
  readonly pitch: Float64Array;
  /** nodes x 3, N: outside forces on the body. */
  readonly force: Float64Array;
  /** nodes x 3, m/s^2: gravity as the body feels it, ground axes: slope, turn and floor shake are in it. */
  readonly gravity: Float64Array;
  /** nodes, kg, and nodes x 3, kg*m (mass times place, body frame): what has been picked up less what was put down. */
  readonly addedMass: Float64Array;
  readonly addedMoment: Float64Array;
  /** nodes, rad/s about the vertical: turning of the body in a turn. */
  readonly yawRate: Float64Array;
  readonly jumps: readonly Jump[];
}

/** Twice the mass at the tread: the two road wheels of an in-line body as thin rings. */
export const roadWheelsOf = (body: InlineBody): NonNullable<DisturbanceSetting['road']> => ({
  spinInertia: 2 * body.tyre.mass * body.tyre.radius ** 2,
  radius: body.tyre.radius,
});

const emptyCourse = (time: Float64Array): DisturbanceCourse & { jumps: Jump[] } => {
  const nodes = time.length;
  const gravity = new Float64Array(3 * nodes);
  for (let k = 0; k < nodes; k++) gravity[3 * k + 2] = -STANDARD_GRAVITY;
  return {
    nodes,
    time,
    roll: new Float64Array(nodes),
    pitch: new Float64Array(nodes),
    force: new Float64Array(3 * nodes),
    gravity,
    addedMass: new Float64Array(nodes),
    addedMoment: new Float64Array(3 * nodes),
    yawRate: new Float64Array(nodes),
    jumps: [],
  };
};

/**
 * Samples a sequence of disturbances.
 *
 * Directions run from forward to the left. A slope falls away towards its direction. Gravity on a slope is
 * turned once for each slope that is on, one after another. Loads that switch on and off are averaged so that
 * values joined by straight lines carry exactly the load's impulse; waves, shakes and recordings are sampled.
 *
 * @param sequence  as in the rig
 * @param time      nodes, s, evenly spaced, two or more
 * @param setting   reference, motion and what the body is sensitive to
 *
 * O(nodes x disturbances), and for a sea x its components.
 */
export function sampleDisturbances(
  sequence: readonly Disturbance[],
  time: Float64Array,
  setting: DisturbanceSetting,
): DisturbanceCourse {
  const course = emptyCourse(time);
  sequence.forEach((disturbance, index) => {
    addDisturbance(disturbance, index, setting, course);
  });
  course.jumps.sort((a, b) => a.time - b.time);
  return course;
}

type Course = ReturnType<typeof emptyCourse>;

/** Calls `add` with the share of an on-off load at each instant it touches. */
function overSpan(d: Disturbance, course: Course, add: (k: number, share: number) => void): void {
  const [from, to] = spanOf(d);
  const { time, nodes } = course;
  const step = (time[1] as number) - (time[0] as number);
  for (let k = 0; k < nodes; k++) {
    const share = hatShare(from, to, time[k] as number, step, k === 0 ? -1 : k === nodes - 1 ? 1 : 0);
    if (share !== 0) add(k, share);
  }
}

function addDisturbance(d: Disturbance, index: number, setting: DisturbanceSetting, course: Course): void {
  switch (d.kind) {
    case 'shove': {
      const x = d.impulse * Math.cos(d.direction);
      const y = d.impulse * Math.sin(d.direction);
      const arm = d.height - setting.referenceHeight;
      course.jumps.push({ time: d.time, roll: -arm * y, pitch: arm * x, impulse: [x, y, 0], index });
      return;
    }
    case 'sideLoad': {
      const x = d.force * Math.cos(d.direction);
      const y = d.force * Math.sin(d.direction);
      const arm = d.height - setting.referenceHeight;
      overSpan(d, course, (k, share) => {
        course.roll[k] += -arm * y * share;
        course.pitch[k] += arm * x * share;
        course.force[3 * k] += x * share;
        course.force[3 * k + 1] += y * share;
      });
      return;
    }
    case 'payload':
      addPayload(d, index, setting, course);
      return;
    case 'slope':
      overSpan(d, course, (k, share) => tiltGravity(course.gravity, k, d.angle * share, d.direction));
      return;
    case 'turn':
      addTurn(d, setting, course);
      return;
    case 'shake':
      for (let k = 0; k < course.nodes; k++) {
        course.gravity[3 * k + 1] -= sampleSeries(
          d.acceleration,
          d.time,
          d.interval,
          course.time[k] as number,
        );
      }
      return;
    case 'recorded':
      for (let k = 0; k < course.nodes; k++) {
        course.roll[k] += sampleSeries(d.moment, d.time, d.interval, course.time[k] as number);
      }
      return;
    case 'waves':
    case 'sea': {
      if (setting.waves === undefined) return;
      const first = course.time[0] as number;
      const moments = new Float64Array(course.nodes);
      sampleWaveMoment(
        createWaveTrain(d),
        setting.waves,
        first - d.time,
        (course.time[1] as number) - first,
        moments,
      );
      overSpan(d, course, (k, share) => {
        course.roll[k] += share * (moments[k] as number);
      });
      return;
    }
  }
}

/**
 * A mass that joins the body on the move is brought up to the body's mean speed by the body: a jump of momentum.
 * One that is put down keeps its speed and takes nothing.
 */
function addPayload(
  d: Extract<Disturbance, { kind: 'payload' }>,
  index: number,
  setting: DisturbanceSetting,
  course: Course,
): void {
  overSpan(d, course, (k, share) => {
    course.addedMass[k] += d.mass * share;
    for (let axis = 0; axis < 3; axis++) {
      course.addedMoment[3 * k + axis] += d.mass * share * (d.position[axis] as number);
    }
  });
  const [vx, vy] = setting.velocity;
  const joined = Math.abs(d.mass);
  if (joined === 0 || (vx === 0 && vy === 0)) return;
  const time = d.mass > 0 ? d.time : d.time + d.duration;
  const arm = (d.position[2] as number) - setting.referenceHeight;
  course.jumps.push({
    time,
    roll: arm * joined * vy,
    pitch: -arm * joined * vx,
    impulse: [-joined * vx, -joined * vy, 0],
    index,
  });
}

/** Turns gravity at one instant towards a direction on the ground, by the rotation that lowers the ground there. */
function tiltGravity(gravity: Float64Array, k: number, angle: number, direction: number): void {
  const cx = Math.cos(direction);
  const cy = Math.sin(direction);
  const x = gravity[3 * k] as number;
  const y = gravity[3 * k + 1] as number;
  const z = gravity[3 * k + 2] as number;
  const towards = cx * x + cy * y;
  const turnedTowards = towards * Math.cos(angle) - z * Math.sin(angle);
  gravity[3 * k] = x + cx * (turnedTowards - towards);
  gravity[3 * k + 1] = y + cy * (turnedTowards - towards);
  gravity[3 * k + 2] = z * Math.cos(angle) + towards * Math.sin(angle);
}

/**
 * A turn to the left (positive radius) is felt as gravity to the right, v^2 / R, and the road wheels, spinning
 * forward, press outward: inertia leaves over + (spin momentum) x (yaw rate) about x.
 */
function addTurn(
  d: Extract<Disturbance, { kind: 'turn' }>,
  setting: DisturbanceSetting,
  course: Course,
): void {
  if (d.radius === 0) return;
  const yawRate = d.speed / d.radius;
  const outward = d.speed * yawRate;
  const wheels = setting.road ? (setting.road.spinInertia * d.speed) / setting.road.radius : 0;
  overSpan(d, course, (k, share) => {
    course.gravity[3 * k + 1] -= outward * share;
    course.yawRate[k] += yawRate * share;
    course.roll[k] += wheels * yawRate * share;
  });
}

/**
 * Spreads jumps over the instants on either side of each, so that moments joined by straight lines carry them.
 * For footings on which a blow must be met while it lasts; a body free to lean takes jumps as they are.
 *
 * @returns the course with no jumps left
 */
export function spreadJumps(course: DisturbanceCourse): DisturbanceCourse {
  const roll = course.roll.slice();
  const pitch = course.pitch.slice();
  const force = course.force.slice();
  const { time, nodes } = course;
  const step = (time[1] as number) - (time[0] as number);
  for (const jump of course.jumps) {
    const place = (jump.time - (time[0] as number)) / step;
    if (place < 0 || place > nodes - 1) continue;
    const i = Math.min(nodes - 2, Math.floor(place));
    for (const [k, share] of [
      [i, 1 - (place - i)],
      [i + 1, place - i],
    ] as const) {
      // The first and last instants stand for half a step only.
      const weight = share / (step * (k === 0 || k === nodes - 1 ? 0.5 : 1));
      roll[k] += jump.roll * weight;
      pitch[k] += jump.pitch * weight;
      for (let axis = 0; axis < 3; axis++) force[3 * k + axis] += (jump.impulse[axis] as number) * weight;
    }
  }
  return { ...course, roll, pitch, force, jumps: [] };
}
