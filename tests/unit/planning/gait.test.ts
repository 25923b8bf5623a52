import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compileGait, cycleTimes, phaseBlocks, sampleGait } from '../../../src/core/planning/gait';
import { patternsFor } from '../../../src/core/planning/gaitPatterns';
import { GAIT_PATTERNS, PACER, type PatternGait, type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const strideGait = STRIDER.jobs.gait as PatternGait;

/** A body with so many legs, long enough for any gait drawn here. */
const bodyWith = (legs: 2 | 4 | 6, gait: PatternGait): Rig => {
  const base = legs === 2 ? STRIDER : PACER;
  if (base.body.kind !== 'legged') throw new Error('a legged body was expected');
  const thigh = { length: 0.3, mass: 0.3 };
  const shank = { length: 0.3, mass: 0.2 };
  return { ...base, body: { ...base.body, legs, thigh, shank }, jobs: { ...base.jobs, gait } };
};

const compiled = (rig: Rig) => {
  const outcome = compileGait(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map((r) => r.sentence).join(' '));
  return outcome.gait;
};

const refusal = (rig: Rig) => {
  const outcome = compileGait(rig);
  if (outcome.kind !== 'refused') throw new Error('a refusal was expected');
  return outcome.refusals[0]!;
};

/** Every pattern on every number of legs it applies to. */
const WALKABLE = ([2, 4, 6] as const).flatMap((legs) =>
  patternsFor(legs).map((pattern) => ({ legs, pattern })),
);

/** Evenly spread: a plain double of this library is mostly near zero. */
const evenly = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + ((max - min) * n) / 1_000_000);

const anyGait = fc
  .record({
    which: fc.constantFrom(...WALKABLE),
    stepTime: evenly(0.1, 3),
    dutyShare: evenly(0, 1),
    stepLength: evenly(-0.06, 0.06),
    stepHeight: evenly(0, 0.05),
    dwell: fc.constantFrom(0, 0, 0.2, 1.5),
    sway: evenly(0, 0.05),
    swayPhase: evenly(-3, 3),
  })
  .map(({ which, dutyShare, ...rest }) => {
    const gait: PatternGait = {
      ...strideGait,
      ...rest,
      pattern: which.pattern,
      dutyFactor: 0.02,
      stanceWidth: 0.12,
    };
    // The least duty factor is taken from the sentence that refuses a smaller one, as a person would.
    const sentence = refusal(bodyWith(which.legs, gait)).sentence;
    const least = Number(/from ([\d.]+)\s?% to/.exec(sentence)![1]) / 100 + 0.001;
    return { legs: which.legs, gait: { ...gait, dutyFactor: least + dutyShare * (0.98 - least) } };
  });

describe('gaits by pattern', () => {
  it('keeps what was asked and closes on itself, whatever the pattern', () => {
    fc.assert(
      fc.property(anyGait, ({ legs, gait }) => {
        const walk = compiled(bodyWith(legs, gait));
        const beats = Math.round(walk.period / (gait.stepTime + gait.dwell));
        const walking = beats * gait.stepTime;
        expectClose(walk.velocity[0] * walk.period, beats * gait.stepLength, { abs: 1e-12 }); // measured 6e-17
        for (const track of walk.feet) {
          // Duty factor: stance as a share of the cycle, dwells left out.
          let down = 0;
          for (const span of track.spans) if (span.isDown) down += span.to - span.from;
          expectClose((down - beats * gait.dwell) / walking, gait.dutyFactor, { rel: 1e-9 }); // measured 3e-15
        }
        const course = sampleGait(walk, cycleTimes(walk, 97), true);
        const step = walk.period / 97;
        const later = sampleGait(
          walk,
          course.time.map((t) => t + walk.period),
          true,
        );
        expectClose(later.feet, course.feet, { abs: 1e-12 }); // measured 3e-15
        expectClose(later.body, course.body, { abs: 1e-12 }); // measured 1e-16
        expect(later.isFootDown).toEqual(course.isFootDown);
        for (const values of [
          course.feet,
          course.feetWorld,
          course.feetVelocity,
          course.feetAcceleration,
          course.body,
        ]) {
          expect(values.every(Number.isFinite)).toBe(true);
        }
        for (let k = 0; k < 97; k++) {
          expect(course.isFootDown.subarray(k * legs, (k + 1) * legs).includes(1)).toBe(true);
          for (let leg = 0; leg < legs; leg++) {
            if (course.isFootDownThroughout[k * legs + leg] !== 1 || k === 96) continue;
            // No slide: the world place of a standing foot does not change over the interval.
            const at = 3 * (k * legs + leg);
            expectClose(
              course.feetWorld.subarray(at + 3 * legs, at + 3 * legs + 3),
              course.feetWorld.subarray(at, at + 3),
              { abs: 1e-12 },
            ); // measured 2e-16
            expect(course.feetWorld[at + 2]).toBe(0);
          }
        }
        expect(step).toBeGreaterThan(0);
      }),
      { seed: 20_240_611, numRuns: 120 },
    );
  });

  it('moves feet and body without a jump in position, velocity or acceleration', () => {
    for (const { legs, pattern } of WALKABLE) {
      const gait: PatternGait = { ...strideGait, pattern, dutyFactor: 0.86, stepLength: 0.02, dwell: 0 };
      const walk = compiled(bodyWith(legs, gait));
      // Steps on either side of each touch-down and lift-off.
      const edges = walk.feet.flatMap((track) => track.spans.map((span) => span.from));
      const jumps = (edge: number, close: number): number[] => {
        const course = sampleGait(walk, Float64Array.of(edge - close, edge + close), false);
        return [course.feet, course.feetVelocity, course.feetAcceleration].map((values) => {
          const half = values.length / 2;
          let worst = 0;
          for (let i = 0; i < half; i++) worst = Math.max(worst, Math.abs(values[half + i]! - values[i]!));
          return worst;
        });
      };
      for (const edge of edges) {
        const wide = jumps(edge, 1e-6 * walk.period);
        const near = jumps(edge, 1e-7 * walk.period);
        // A true jump would stay; what is continuous shrinks with the gap, here to a tenth.
        near.forEach((jump, order) => {
          expect(jump).toBeLessThan(0.11 * wide[order]! + 1e-9);
        });
      }
    }
  });

  it('gives velocity and acceleration that are derivatives of position', () => {
    const walk = compiled(PACER);
    const h = 1e-4;
    for (const t of [0.03, 0.11, 0.29, 0.37, 0.52, 0.71]) {
      const course = sampleGait(walk, Float64Array.of(t - h, t, t + h), false);
      const size = course.feet.length / 3;
      const at = (values: Float64Array, node: number) => values.slice(node * size, (node + 1) * size);
      const slope = at(course.feet, 2).map((x, i) => (x - at(course.feet, 0)[i]!) / (2 * h));
      const bend = at(course.feetVelocity, 2).map((x, i) => (x - at(course.feetVelocity, 0)[i]!) / (2 * h));
      expectClose(slope, at(course.feetVelocity, 1), { abs: 1e-5 }); // measured 2e-8
      expectClose(bend, at(course.feetAcceleration, 1), { abs: 1e-3 }); // measured 6e-7
      const swing = course.bodyVelocity[7]! - course.bodyVelocity[1]!;
      expectClose(swing / (2 * h), course.bodyAcceleration[4]!, { abs: 1e-6 }); // measured 2e-8
    }
  });

  it('lifts a foot by the step height half way through its swing', () => {
    const walk = compiled(STRIDER);
    const swing = walk.feet[0]!.spans.find((span) => !span.isDown)!;
    const course = sampleGait(walk, Float64Array.of((swing.from + swing.to) / 2, swing.to), false);
    expectClose(course.feet[2]!, strideGait.stepHeight, { rel: 1e-12 }); // measured 0
    // The body goes one step length in a step time, the foot two steps in its swing.
    expectClose(swing.end[0] - swing.start[0], 2 * strideGait.stepLength, { rel: 1e-12 }); // measured 2e-16
    expectClose(walk.period, 2 * strideGait.stepTime, { rel: 1e-12 }); // measured 0
  });

  it('puts all feet down for the dwell after every touch-down', () => {
    for (const { legs, pattern } of WALKABLE.filter((w) => w.pattern !== 'amble')) {
      const gait: PatternGait = { ...strideGait, pattern, dutyFactor: 0.9, stepLength: 0.01, dwell: 0.4 };
      const walk = compiled(bodyWith(legs, gait));
      const course = sampleGait(walk, cycleTimes(walk, 4000), true);
      let allDown = 0;
      for (let k = 0; k < 4000; k++) {
        if (!course.isFootDown.subarray(k * legs, (k + 1) * legs).includes(0)) allDown++;
      }
      const beats = walk.period / (gait.stepTime + gait.dwell);
      const lifted = new Set(walk.feet.map((f) => f.spans[1]!.from.toFixed(9))).size;
      const swing = 0.1 * beats * gait.stepTime;
      expectClose((allDown / 4000) * walk.period, walk.period - lifted * swing, { abs: 0.01 }); // measured 4e-3
      expect((allDown / 4000) * walk.period).toBeGreaterThan(beats * gait.dwell - 0.01);
    }
  });

  it('sways over the feet that carry', () => {
    const walk = compiled(STRIDER);
    const left = walk.feet[0]!.spans.find((span) => span.isDown)!;
    const right = walk.feet[1]!.spans.find((span) => span.isDown)!;
    const middles = [left, right].map((span) => (span.from + span.to) / 2);
    const course = sampleGait(walk, Float64Array.from(middles), false);
    expectClose([course.body[1]!, course.body[4]!], [strideGait.sway, -strideGait.sway], { rel: 1e-12 }); // measured 0
  });

  it('shows feet on the ground as blocks, cut at the ends of the ribbon', () => {
    const walk = compiled(STRIDER);
    const blocks = phaseBlocks(walk, 0, walk.period);
    const down = [0, 0];
    for (const block of blocks) down[block.row]! += block.to - block.from;
    expectClose(down, [0.6 * walk.period, 0.6 * walk.period], { rel: 1e-12 }); // measured 2e-16
    expect(blocks.every((b) => b.from >= 0 && b.to <= walk.period)).toBe(true);
    expect(blocks.find((b) => b.row === 0)!.label).toBe('Left down');
  });
});

describe('gaits that cannot be', () => {
  const changed = (rig: Rig, change: Partial<PatternGait>): Rig => ({
    ...rig,
    jobs: { ...rig.jobs, gait: { ...(rig.jobs.gait as PatternGait), ...change } },
  });

  it('refuses every pattern the legs cannot walk, and offers those they can', () => {
    for (const legs of [2, 4, 6] as const) {
      for (const pattern of GAIT_PATTERNS) {
        if (patternsFor(legs).includes(pattern)) continue;
        const { field, sentence } = refusal(bodyWith(legs, { ...strideGait, pattern }));
        expect(field).toBe('jobs.gait.pattern');
        expect(sentence).toContain(`this body has ${legs}`);
        for (const offered of patternsFor(legs)) expect(sentence).toContain(offered);
      }
    }
  });

  it('refuses a duty factor that leaves no foot on the ground', () => {
    const { field, sentence } = refusal(changed(STRIDER, { dutyFactor: 0.45 }));
    expect(field).toBe('jobs.gait.dutyFactor');
    expect(sentence).toMatch(/45.*% is out of the range from 50.*% to 98.*%/);
  });

  it('refuses a crawl that would lift two feet at once', () => {
    expect(refusal(changed(PACER, { pattern: 'crawl', dutyFactor: 0.7 })).sentence).toMatch(/from 75.*%/);
  });

  it('refuses a dwell that would find a foot in the air', () => {
    const { sentence } = refusal(changed(PACER, { pattern: 'walk', dutyFactor: 0.6, dwell: 0.2 }));
    expect(sentence).toMatch(/from 75.*% .*dwell/);
  });

  it('names the step length that is within reach, and that much is', () => {
    const long = changed(STRIDER, { stepLength: 0.3 });
    const { field, sentence } = refusal(long);
    expect(field).toBe('jobs.gait.stepLength');
    const most = Number(/to ([\d.]+) mm is within reach/.exec(sentence)![1]) / 1000;
    expect(most).toBeGreaterThan(0.05);
    expect(compileGait(changed(STRIDER, { stepLength: most - 0.001 })).kind).toBe('compiled');
    expect(refusal(changed(STRIDER, { stepLength: most + 0.001 })).field).toBe('jobs.gait.stepLength');
  });

  it('names the sway when it is the sway, and the hips when nothing else helps', () => {
    expect(refusal(changed(STRIDER, { sway: 0.2, stepLength: 0 })).field).toBe('jobs.gait.sway');
    if (STRIDER.body.kind !== 'legged') throw new Error('a legged body was expected');
    const tall: Rig = {
      ...STRIDER,
      body: { ...STRIDER.body, hips: { ...STRIDER.body.hips, height: 0.33 } },
    };
    expect(refusal(tall).field).toBe('body.hips.height');
  });
});
