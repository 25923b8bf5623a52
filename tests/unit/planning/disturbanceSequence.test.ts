import * as v from 'valibot';
import { describe, expect, it } from 'vitest';
import {
  addToSequence,
  firstDisturbance,
  kindsFor,
  moveInSequence,
  refuseSequence,
  removeFromSequence,
  replaceInSequence,
  sequenceEnd,
  stretchInSequence,
} from '../../../src/core/planning/sequence';
import { DisturbanceSchema, type Jobs, type Rig, SKIFF, STRIDER } from '../../../src/core/rig';

const jobs: Jobs = {
  ...STRIDER.jobs,
  duration: 8,
  sequence: [
    { kind: 'shove', time: 1, impulse: 0.4, height: 0.4, direction: 1 },
    { kind: 'sideLoad', time: 2, duration: 1, force: 2, height: 0.4, direction: 1 },
    { kind: 'shake', time: 3, interval: 0.1, acceleration: [0, 1, 0, -1, 0] },
  ],
};

describe('editing a sequence', () => {
  it('offers what can happen to a rig, each as a document the rig file takes', () => {
    expect(kindsFor(SKIFF)).toContain('sea');
    expect(kindsFor(STRIDER)).not.toContain('waves');
    for (const rig of [SKIFF, STRIDER]) {
      for (const kind of kindsFor(rig)) {
        for (const mass of [0.2, 6, 900]) {
          const first = firstDisturbance(kind, 1, mass, 0.4);
          expect(v.safeParse(DisturbanceSchema, first).success).toBe(true);
          expect(refuseSequence({ ...rig, jobs: { ...rig.jobs, sequence: [first] } })).toEqual([]);
        }
      }
    }
  });

  it('adds, replaces and removes without touching what was there', () => {
    const before = JSON.stringify(jobs);
    const shove = firstDisturbance('shove', 4, 6, 0.4);
    expect(addToSequence(jobs, shove).sequence.at(-1)).toBe(shove);
    expect(replaceInSequence(jobs, 1, shove).sequence).toEqual([jobs.sequence[0], shove, jobs.sequence[2]]);
    expect(removeFromSequence(jobs, 1).sequence).toEqual([jobs.sequence[0], jobs.sequence[2]]);
    expect(JSON.stringify(jobs)).toBe(before);
  });

  it('drags a block within the run, and its end', () => {
    expect(moveInSequence(jobs, 0, 5.5).sequence[0]!.time).toBe(5.5);
    expect(moveInSequence(jobs, 0, -3).sequence[0]!.time).toBe(0);
    expect(moveInSequence(jobs, 0, 30).sequence[0]!.time).toBe(8);
    expect(moveInSequence(jobs, 9, 1)).toBe(jobs);
    expect(stretchInSequence(jobs, 1, 5).sequence[1]).toMatchObject({ time: 2, duration: 3 });
    expect(stretchInSequence(jobs, 1, 1).sequence[1]).toMatchObject({ duration: 0.01 });
    expect(stretchInSequence(jobs, 2, 5).sequence[2]).toMatchObject({ interval: 0.5 });
    expect(stretchInSequence(jobs, 0, 5)).toBe(jobs);
    expect(sequenceEnd(jobs)).toBe(3.4);
    expect(sequenceEnd({ ...jobs, sequence: [] })).toBe(0);
  });

  it('refuses what cannot happen, naming field, value and range', () => {
    const sentences = (rig: Rig) => refuseSequence(rig).map((r) => r.sentence);
    const wet: Rig = { ...STRIDER, jobs: { ...jobs, sequence: [firstDisturbance('waves', 0, 6, 0.4)] } };
    expect(sentences(wet)[0]).toMatch(
      /^jobs\.sequence\[0\]\.kind: "waves" does not happen to .*legged.*choose one of: shove/,
    );
    const late: Rig = { ...STRIDER, jobs: { ...jobs, sequence: [firstDisturbance('shove', 9, 6, 0.4)] } };
    expect(sentences(late)).toEqual([
      'jobs.sequence[0].time: 9.00 s is after the end of the run; from 0 s to 8.00 s is allowed.',
    ]);
  });
});
