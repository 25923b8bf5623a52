/** The run of disturbances as a document: what fits a rig, and the edits that a ribbon makes to it. */
import type { Disturbance, Jobs, Refusal, Rig } from '../rig';
import { formatQuantity } from '../units';
import { spanOf } from './disturbanceBlocks';

export type DisturbanceKind = Disturbance['kind'];

/** Kinds that a rig can meet: waves where it floats, turns where it rolls, the rest anywhere on land. */
export function kindsFor(rig: Rig): readonly DisturbanceKind[] {
  if (rig.footing.kind === 'float') return ['waves', 'sea', 'shove', 'sideLoad', 'payload', 'recorded'];
  const land: readonly DisturbanceKind[] = ['shove', 'sideLoad', 'payload', 'slope', 'shake', 'recorded'];
  return rig.body.kind === 'inline' ? [...land, 'turn'] : land;
}

/** A disturbance of a kind as it is first put down, of a size that suits the rig's weight. */
export function firstDisturbance(
  kind: DisturbanceKind,
  time: number,
  mass: number,
  height: number,
): Disturbance {
  switch (kind) {
    case 'shove':
      return { kind, time, impulse: roundTo(0.05 * mass), height, direction: Math.PI / 2 };
    case 'sideLoad':
      return { kind, time, duration: 1, force: roundTo(0.2 * mass), height, direction: Math.PI / 2 };
    case 'payload':
      return { kind, time, duration: 2, mass: roundTo(0.05 * mass), position: [0, 0, height] };
    case 'slope':
      return { kind, time, duration: 2, angle: (3 * Math.PI) / 180, direction: Math.PI / 2 };
    case 'turn':
      return { kind, time, duration: 3, speed: 2, radius: 10 };
    case 'shake':
      return { kind, time, interval: 0.25, acceleration: [0, 0.3, 0, -0.3, 0] };
    case 'waves':
      return { kind, time, duration: 20, height: 0.2, period: 3, heading: Math.PI / 2 };
    case 'sea':
      return {
        kind,
        time,
        duration: 60,
        significantHeight: 0.3,
        peakPeriod: 3,
        spectrum: 'jonswap',
        heading: Math.PI / 2,
        speed: 0,
        seed: 1,
      };
    case 'recorded':
      return { kind, time, interval: 0.25, moment: [0, roundTo(0.05 * mass), 0] };
  }
}

/** One significant digit, as a person would type it. */
const roundTo = (value: number): number => (value > 0 ? Number(value.toPrecision(1)) : 0);

/** Everything in a sequence that does not fit its rig or run, each a sentence with field, value, range and unit. */
export function refuseSequence(rig: Rig): readonly Refusal[] {
  const allowed = kindsFor(rig);
  const { duration, sequence } = rig.jobs;
  return sequence.flatMap((d, i): Refusal[] => {
    const refuse = (name: string, sentence: string): Refusal => {
      const field = `jobs.sequence[${i}].${name}`;
      return { field, sentence: `${field}: ${sentence}` };
    };
    if (!allowed.includes(d.kind)) {
      const where =
        rig.footing.kind === 'float' ? 'a hull that floats' : `a body of kind "${rig.body.kind}" on land`;
      return [
        refuse('kind', `"${d.kind}" does not happen to ${where}; choose one of: ${allowed.join(', ')}.`),
      ];
    }
    if (d.time > duration) {
      const range = `from 0 s to ${formatQuantity(duration, 'time')}`;
      return [
        refuse('time', `${formatQuantity(d.time, 'time')} is after the end of the run; ${range} is allowed.`),
      ];
    }
    if (d.kind === 'turn' && d.radius === 0) {
      return [refuse('radius', `0 m is no turn; give a radius to the left, or a negative one to the right.`)];
    }
    return [];
  });
}

const withSequence = (jobs: Jobs, sequence: readonly Disturbance[]): Jobs => ({ ...jobs, sequence });

/** Puts a disturbance at the end of the list; when it happens is its own time. */
export const addToSequence = (jobs: Jobs, disturbance: Disturbance): Jobs =>
  withSequence(jobs, [...jobs.sequence, disturbance]);

export const removeFromSequence = (jobs: Jobs, index: number): Jobs =>
  withSequence(
    jobs,
    jobs.sequence.filter((_, i) => i !== index),
  );

export const replaceInSequence = (jobs: Jobs, index: number, disturbance: Disturbance): Jobs =>
  withSequence(
    jobs,
    jobs.sequence.map((d, i) => (i === index ? disturbance : d)),
  );

const clamp = (value: number, low: number, high: number): number => Math.min(high, Math.max(low, value));

/**
 * Moves a disturbance along the ribbon; it stays within the run.
 *
 * @param time  s, where its beginning is dragged to
 */
export function moveInSequence(jobs: Jobs, index: number, time: number): Jobs {
  const d = jobs.sequence[index];
  return d === undefined
    ? jobs
    : replaceInSequence(jobs, index, { ...d, time: clamp(time, 0, jobs.duration) });
}

/** Shortest a block may be dragged, s. */
const SHORTEST = 0.01;

/**
 * Drags the end of a block to an instant. What has a duration lasts until then, within the run; recordings are
 * played slower or faster; a shove has no end to drag.
 *
 * @param end  s
 */
export function stretchInSequence(jobs: Jobs, index: number, end: number): Jobs {
  const d = jobs.sequence[index];
  if (d === undefined || d.kind === 'shove') return jobs;
  const lasts = Math.max(SHORTEST, clamp(end, d.time, jobs.duration) - d.time);
  switch (d.kind) {
    case 'shake':
      return replaceInSequence(jobs, index, {
        ...d,
        interval: clamp(lasts / (d.acceleration.length - 1), 1e-4, 1),
      });
    case 'recorded':
      return replaceInSequence(jobs, index, {
        ...d,
        interval: clamp(lasts / (d.moment.length - 1), 1e-4, 10),
      });
    default:
      return replaceInSequence(jobs, index, { ...d, duration: lasts });
  }
}

/** When the last disturbance has ended, s; 0 for none. */
export const sequenceEnd = (jobs: Jobs): number =>
  jobs.sequence.reduce((end, d) => Math.max(end, spanOf(d)[1]), 0);
