/** A gait made ready: where feet and body are at any instant, and its figures over the instants of a plan. */
import { hipPositions, legLabels, restFeet, type Vec3 } from '../physics';
import type { LeggedBody, Refusal, Rig } from '../rig';
import { type BodyTrack, bodyStateAt, swayPhaseOf } from './bodyMotion';
import { type FootTrack, footStateAt, isFootDownAt, isFootDownThroughout } from './footMotion';
import { refuseReach } from './gaitReach';
import { keyframeTracks } from './keyframes';
import { patternTracks, refusePattern } from './patternGait';

export interface CompiledGait {
  readonly kind: 'stand' | 'pattern' | 'keyframes';
  readonly legs: number;
  /** s of one cycle; for a stand the length of the run. */
  readonly period: number;
  /** m/s along and across: mean motion, and the velocity of the walking frame, whose origin is the body's at time 0. */
  readonly velocity: readonly [number, number];
  /** In leg order; empty for a body without legs. */
  readonly feet: readonly FootTrack[];
  readonly body: BodyTrack;
  /** m, body frame, in leg order. */
  readonly hips: readonly Vec3[];
  readonly labels: readonly string[];
}

export type GaitOutcome =
  | { readonly kind: 'compiled'; readonly gait: CompiledGait }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/** A block along the ribbon: a foot on the ground. */
export interface PhaseBlock {
  readonly kind: 'phase';
  readonly label: string;
  /** s */
  readonly from: number;
  readonly to: number;
  /** Leg, in leg order. */
  readonly row: number;
}

/**
 * Makes the rig's gait ready: a stand, a pattern or keyframes. Any other body than a legged one stands without feet.
 *
 * Refused with a sentence: a pattern that the body's legs cannot walk, a duty factor that leaves the body
 * without a foot, keyframes that do not fit together, a foot farther from its hip than the leg reaches.
 */
export function compileGait(rig: Rig): GaitOutcome {
  const { body, jobs } = rig;
  if (body.kind !== 'legged') return { kind: 'compiled', gait: stand(jobs.duration, [], [], []) };
  const hips = hipPositions(body);
  const labels = legLabels(body.legs);
  const { gait } = jobs;
  let compiled: CompiledGait;
  switch (gait.kind) {
    case 'stand':
      compiled = stand(jobs.duration, restFeet(body, body.hips.width), hips, labels);
      break;
    case 'pattern': {
      const refusals = refusePattern(body, gait);
      if (refusals.length > 0) return { kind: 'refused', refusals };
      compiled = patternGait(body, gait, hips, labels);
      break;
    }
    case 'keyframes': {
      const outcome = keyframeTracks(gait, body.legs);
      if (outcome.kind === 'refused') return outcome;
      const { period, velocity, feet, body: stops } = outcome;
      compiled = {
        kind: 'keyframes',
        legs: body.legs,
        period,
        velocity,
        feet,
        body: { kind: 'stops', track: stops },
        hips,
        labels,
      };
      break;
    }
  }
  const refusals = refuseReach(body, gait, compiled, (changed) => patternGait(body, changed, hips, labels));
  return refusals.length > 0 ? { kind: 'refused', refusals } : { kind: 'compiled', gait: compiled };
}

type Pattern = Parameters<typeof patternTracks>[1];

function patternGait(
  body: LeggedBody,
  gait: Pattern,
  hips: readonly Vec3[],
  labels: readonly string[],
): CompiledGait {
  const { period, velocity, feet } = patternTracks(body, gait, hips);
  const phase = swayPhaseOf(feet, period) + gait.swayPhase;
  const sway: BodyTrack = { kind: 'sway', amplitude: gait.sway, period, phase };
  return { kind: 'pattern', legs: body.legs, period, velocity, feet, body: sway, hips, labels };
}

function stand(
  period: number,
  places: readonly Vec3[],
  hips: readonly Vec3[],
  labels: readonly string[],
): CompiledGait {
  const feet = places.map(
    (place): FootTrack => ({
      period,
      velocity: [0, 0],
      spans: [{ from: 0, to: period, start: place, end: place, rise: 0, isDown: true }],
    }),
  );
  return {
    kind: 'stand',
    legs: places.length,
    period,
    velocity: [0, 0],
    feet,
    body: { kind: 'still' },
    hips,
    labels,
  };
}

/** A gait over the instants of a plan. The walking frame moves with the mean motion and is inertial. */
export interface GaitCourse {
  readonly gait: CompiledGait;
  readonly nodes: number;
  readonly legs: number;
  /** nodes, s. */
  readonly time: Float64Array;
  /** True when the node after the last is the first. */
  readonly isCyclic: boolean;
  /** nodes x legs x 3, m, middle of each sole; walking frame and world. */
  readonly feet: Float64Array;
  readonly feetWorld: Float64Array;
  /** nodes x legs x 3, m/s and m/s^2, walking frame. */
  readonly feetVelocity: Float64Array;
  readonly feetAcceleration: Float64Array;
  /** nodes x legs, 1 from touch-down until lift-off. */
  readonly isFootDown: Uint8Array;
  /** intervals x legs, 1 where the foot is down from one node to the next; as many intervals as nodes, less one unless cyclic. */
  readonly isFootDownThroughout: Uint8Array;
  /** nodes x 3, body origin: m, m/s, m/s^2 in the walking frame, and m in the world. */
  readonly body: Float64Array;
  readonly bodyVelocity: Float64Array;
  readonly bodyAcceleration: Float64Array;
  readonly bodyWorld: Float64Array;
}

/** Instants of a plan that closes on itself: one period, evenly, its end left out. */
export const cycleTimes = (gait: CompiledGait, nodes: number): Float64Array =>
  Float64Array.from({ length: nodes }, (_, k) => (k * gait.period) / nodes);

/** Instants of a plan with given ends: `intervals` + 1 of them from 0 to `duration`, s. */
export const runTimes = (duration: number, intervals: number): Float64Array =>
  Float64Array.from({ length: intervals + 1 }, (_, k) => (k * duration) / intervals);

/**
 * Samples a gait.
 *
 * @param time  nodes, s, evenly spaced, two or more: from `cycleTimes` or `runTimes`
 * @param isCyclic  whether the instants are one cycle with its end left out
 *
 * O(nodes x legs).
 */
export function sampleGait(gait: CompiledGait, time: Float64Array, isCyclic: boolean): GaitCourse {
  const nodes = time.length;
  const { legs } = gait;
  const step = (time[1] as number) - (time[0] as number);
  const intervals = isCyclic ? nodes : nodes - 1;
  const column = () => new Float64Array(nodes * legs * 3);
  const course: GaitCourse = {
    gait,
    nodes,
    legs,
    time,
    isCyclic,
    feet: column(),
    feetWorld: column(),
    feetVelocity: column(),
    feetAcceleration: column(),
    isFootDown: new Uint8Array(nodes * legs),
    isFootDownThroughout: new Uint8Array(intervals * legs),
    body: new Float64Array(nodes * 3),
    bodyVelocity: new Float64Array(nodes * 3),
    bodyAcceleration: new Float64Array(nodes * 3),
    bodyWorld: new Float64Array(nodes * 3),
  };
  const state = new Float64Array(9);
  for (let k = 0; k < nodes; k++) {
    const t = time[k] as number;
    bodyStateAt(gait.body, t, state);
    writeState(
      state,
      k,
      gait.velocity,
      t,
      course.body,
      course.bodyVelocity,
      course.bodyAcceleration,
      course.bodyWorld,
    );
    for (let leg = 0; leg < legs; leg++) {
      const track = gait.feet[leg] as FootTrack;
      const at = k * legs + leg;
      footStateAt(track, t, state);
      writeState(
        state,
        at,
        gait.velocity,
        t,
        course.feet,
        course.feetVelocity,
        course.feetAcceleration,
        course.feetWorld,
      );
      course.isFootDown[at] = isFootDownAt(track, t) ? 1 : 0;
      if (k < intervals) course.isFootDownThroughout[at] = isFootDownThroughout(track, t, t + step) ? 1 : 0;
    }
  }
  return course;
}

function writeState(
  state: Float64Array,
  at: number,
  velocity: readonly [number, number],
  time: number,
  position: Float64Array,
  rate: Float64Array,
  second: Float64Array,
  world: Float64Array,
): void {
  for (let axis = 0; axis < 3; axis++) {
    position[3 * at + axis] = state[axis] as number;
    rate[3 * at + axis] = state[3 + axis] as number;
    second[3 * at + axis] = state[6 + axis] as number;
    world[3 * at + axis] = (state[axis] as number) + (axis < 2 ? (velocity[axis] as number) * time : 0);
  }
}

/** Blocks of feet on the ground between two instants, cut at both; for a stand one block a foot. */
export function phaseBlocks(gait: CompiledGait, from: number, to: number): readonly PhaseBlock[] {
  const blocks: PhaseBlock[] = [];
  gait.feet.forEach((track, row) => {
    const first = track.spans[0]?.from ?? 0;
    for (let cycle = Math.floor((from - first) / gait.period); first + cycle * gait.period < to; cycle++) {
      for (const span of track.spans) {
        if (!span.isDown) continue;
        const start = Math.max(from, span.from + cycle * gait.period);
        const end = Math.min(to, span.to + cycle * gait.period);
        if (end - start > 1e-9 * gait.period) {
          blocks.push({ kind: 'phase', label: `${gait.labels[row]} down`, from: start, to: end, row });
        }
      }
    }
  });
  return blocks;
}
