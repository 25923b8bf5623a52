import { describe, expect, it } from 'vitest';
import { compileGait, cycleTimes, sampleGait } from '../../../src/core/planning/gait';
import type { KeyframeGait } from '../../../src/core/planning/keyframes';
import { readKeyframes, readSeries, writeKeyframes } from '../../../src/core/planning/motionFiles';
import { readNumberTable } from '../../../src/core/planning/numberTable';
import { type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

/** A two-legged shuffle in the body frame: shift, left foot forward, shift, right foot forward, 20 mm each. */
const SHUFFLE = [
  'time (s), left x (mm), left y (mm), left z (mm), right x (mm), right y (mm), right z (mm)',
  '0.0,  10, 50,  0,  10, -50,  0',
  '0.5,  10, 60,  0,  10, -40,  0', // both feet to the left: the body sways to the right
  '0.75, 25, 60, 25,   0, -40,  0', // left foot up, the right one carries the body forward
  '1.0,  30, 60,  0, -10, -40,  0',
  '1.5,  30, 40,  0, -10, -60,  0',
  '1.75, 20, 40,  0,   5, -60, 25',
  '2.0,  10, 40,  0,  10, -60,  0',
  '2.5,  10, 50,  0,  10, -50,  0',
].join('\n');

const readGait = (text: string): KeyframeGait => {
  const outcome = readKeyframes(text, 2);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map((r) => r.sentence).join(' '));
  return outcome.gait;
};

const sentenceOf = (text: string): string => {
  const outcome = readKeyframes(text, 2);
  if (outcome.kind !== 'refused') throw new Error('a refusal was expected');
  return outcome.refusals[0]!.sentence;
};

const withGait = (gait: KeyframeGait): Rig => ({ ...STRIDER, jobs: { ...STRIDER.jobs, gait } });

describe('keyframes', () => {
  it('carries the body by the feet that stand, which do not slide', () => {
    const outcome = compileGait(withGait(readGait(SHUFFLE)));
    if (outcome.kind === 'refused') throw new Error(outcome.refusals[0]!.sentence);
    const { gait } = outcome;
    // Both standing feet went back 20 mm relative to the body in each of two steps.
    expectClose([gait.period, gait.velocity[0], gait.velocity[1]], [2.5, 0.04 / 2.5, 0], { abs: 1e-15 }); // measured 0
    const course = sampleGait(gait, cycleTimes(gait, 500), true);
    for (let k = 0; k < 499; k++) {
      for (let leg = 0; leg < 2; leg++) {
        if (course.isFootDownThroughout[2 * k + leg] !== 1) continue;
        const at = 3 * (2 * k + leg);
        expectClose(course.feetWorld.subarray(at, at + 3), course.feetWorld.subarray(at + 6, at + 9), {
          abs: 1e-14,
        }); // measured 2e-18
      }
    }
    // At keyframes the feet are where the table says, seen from the body.
    for (const [time, leftX, leftY, rightX] of [
      [0.5, 0.01, 0.06, 0.01],
      [1, 0.03, 0.06, -0.01],
      [2, 0.01, 0.04, 0.01],
    ] as const) {
      const at = sampleGait(gait, Float64Array.of(time, time + 0.1), false);
      const seen = [0, 1, 3].map((i) => at.feet[i]! - at.body[i % 3]!);
      expectClose(seen, [leftX, leftY, rightX], { abs: 1e-15 }); // measured 7e-18
    }
    const down = course.isFootDown;
    expect([down[2 * 120], down[2 * 120 + 1]]).toEqual([0, 1]); // 0.6 s: the left foot is up
    expect([down[2 * 320], down[2 * 320 + 1]]).toEqual([1, 0]); // 1.6 s: the right one
  });

  it('moves body and feet with continuous velocity and acceleration', () => {
    const outcome = compileGait(withGait(readGait(SHUFFLE)));
    if (outcome.kind === 'refused') throw new Error(outcome.refusals[0]!.sentence);
    for (const edge of [0.5, 0.75, 1, 1.5, 1.75, 2, 2.5]) {
      const jump = (close: number) => {
        const course = sampleGait(outcome.gait, Float64Array.of(edge - close, edge + close), false);
        const values = [...course.feetAcceleration, ...course.bodyAcceleration];
        return Math.max(...values.map(Math.abs));
      };
      expect(jump(1e-6)).toBeLessThan(0.11 * jump(1e-5)); // rest at every keyframe: falls in proportion
    }
  });

  it('finds a foot out of reach between any two of two thousand keyframes', () => {
    const place = (lift: number) => [0, 0.05, lift, 0, -0.05, 0];
    const times = Array.from({ length: 2000 }, (_, k) => k * 0.25);
    const feet = times.map((_, k) => place(k % 2 === 0 || k === 1999 ? 0 : 0.01));
    const plain: KeyframeGait = { kind: 'keyframes', times, feet };
    expect(compileGait(withGait(plain)).kind).toBe('compiled');
    const far = feet.map((row, k) => (k === 1235 ? [0.3, 0.05, 0.01, 0, -0.05, 0] : row));
    const outcome = compileGait(withGait({ ...plain, feet: far }));
    expect(outcome.kind === 'refused' && outcome.refusals[0]!.sentence).toMatch(
      /jobs\.gait\.feet: .*left foot 417.* mm from its hip at 309 s.*from 0.* mm to 320 mm from its hip/,
    );
  });

  it('goes out as a table and comes back the same', () => {
    const gait = readGait(SHUFFLE);
    expect(readGait(writeKeyframes(gait, ['Left', 'Right']))).toEqual(gait);
  });

  it('says what is wrong with a table, naming place, value and range', () => {
    expect(sentenceOf('0,1,2\n1,2,3')).toBe(
      'The table has 3 columns; 2 legs need 7: time, then x, y, z of each foot, left before right and front before back.',
    );
    expect(sentenceOf('0,0,0,0,0,0,0\n1,0,0,0,0,oops,0')).toBe('Line 2, cell 6: "oops" is not a number.');
    expect(sentenceOf('0,0,0,0,0,0,0\n1,0,0,0,0,0')).toContain('Line 2: 6 cells where 7 are expected');
    expect(sentenceOf('0,0,0,0,0,0,0\n1,0,0,0,0,NaN,0')).toContain('"NaN" is not a number');
    expect(sentenceOf('0,0,0,0,0,0,0')).toContain('1 keyframes; from 2 to 2000');
    expect(sentenceOf('')).toBe('The table holds no line of numbers.');
    expect(sentenceOf('0,90,0,0,0,0,0\n1,90,0,0,0,0,0')).toContain('x of foot 1: 90 m; from -50 to 50 m');
    expect(sentenceOf('1,0,0.05,0,0,-0.05,0\n1,0,0.05,0,0,-0.05,0')).toContain('times must rise');
  });

  it('refuses motion that no body could make', () => {
    const still = '0,0,0.05,0,0,-0.05,0';
    expect(sentenceOf(`${still}\n1,0,0.05,0.01,0,-0.05,0.01\n2,0,0.05,0,0,-0.05,0`)).toContain(
      'no foot is on the ground',
    );
    expect(sentenceOf(`${still}\n1,0.02,0.05,0,-0.02,-0.05,0\n${still.replace('0', '2')}`)).toMatch(
      /slide 20.* mm against each other; from 0 to 1.* mm/,
    );
    expect(sentenceOf(`${still}\n1,0.02,0.05,0,0.02,-0.05,0`)).toContain('the last keyframe is 20');
    expect(sentenceOf(`${still}\n1,0,0.05,-0.02,0,-0.05,0\n${still.replace('0', '2')}`)).toContain(
      'below the ground',
    );
  });
});

describe('tables and series', () => {
  it('reads commas, semicolons with decimal commas, tabs, spaces, headers and notes', () => {
    const values = (text: string) => {
      const table = readNumberTable(text);
      if (table.kind === 'refused') throw new Error(table.sentence);
      return [table.columns, table.rows, ...table.values];
    };
    const expected = [2, 2, 0.5, -1, 1e-3, 2];
    expect(values('0.5,-1\n1e-3,2')).toEqual(expected);
    expect(values('\uFEFFt;a\r\n0,5;-1\r\n\r\n0,001;2\r\n')).toEqual(expected);
    expect(values('# shaken on a table\n0.5\t-1\n.001\t+2')).toEqual(expected);
    expect(values('0.5  -1\n  0.001 2')).toEqual(expected);
  });

  it('reads a series with or without its times, and refuses an uneven one', () => {
    expect(readSeries('time (ms),a\n0,1\n10,2\n20,-3', 1, 200, 'm/s²')).toEqual({
      kind: 'read',
      interval: 0.01,
      values: [1, 2, -3],
    });
    expect(readSeries('1\n2\n-3', 0.02, 200, 'm/s²')).toEqual({
      kind: 'read',
      interval: 0.02,
      values: [1, 2, -3],
    });
    const sentence = (text: string) => {
      const outcome = readSeries(text, 0.1, 200, 'm/s²');
      return outcome.kind === 'refused' ? outcome.sentence : '';
    };
    expect(sentence('0,1\n0.5,2\n2,3')).toContain(
      'Sample 2 is at 0.5 s; evenly spaced by 1 s it would be at 1 s',
    );
    expect(sentence('0,1\n1,900')).toBe('Sample 2 is 900 m/s²; from -200 to 200 m/s² is allowed.');
    expect(sentence('3,1\n1,900')).toContain('they must rise');
    expect(sentence('1,2,3\n1,2,3')).toContain('3 columns');
  });
});
