import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeKnee, STANDARD_GRAVITY } from '../../src/core/physics';
import { bodyStateAt } from '../../src/core/planning/bodyMotion';
import { computeDemand, type Ground } from '../../src/core/planning/demand';
import { footStateAt } from '../../src/core/planning/footMotion';
import { type CompiledGait, compileGait, sampleGait } from '../../src/core/planning/gait';
import { footfallsOf, patternsFor } from '../../src/core/planning/gaitPatterns';
import { legMassCourse, legModelOf } from '../../src/core/planning/legMass';
import { type LeggedBody, PACER, type PatternGait, type Rig } from '../../src/core/rig';
import { expectClose } from '../support/closeTo';

const pacer = PACER.body as LeggedBody;
const GROUND: Ground = { footLength: 0.05, footWidth: 0.05, friction: 0.7, margin: 0 };

/** Evenly spread: a plain double of this library is mostly near zero. */
const number = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + ((max - min) * n) / 1_000_000);
const link = fc.record({ length: number(0.16, 0.22), mass: number(0, 0.6) });

const anyWalker = fc
  .record({
    which: fc.constantFrom(
      ...([2, 4, 6] as const).flatMap((legs) => patternsFor(legs).map((pattern) => ({ legs, pattern }))),
    ),
    thigh: link,
    shank: link,
    footMass: number(0, 0.3),
    stepTime: number(0.15, 1.5),
    dutyFactor: number(0.84, 0.95),
    stride: number(-0.14, 0.14),
    stepHeight: number(0, 0.05),
    dwell: fc.constantFrom(0, 0.3),
    sway: number(0, 0.03),
    swayPhase: number(-3, 3),
    stanceWidth: number(0.05, 0.2),
  })
  .map(({ which, thigh, shank, footMass, stride, ...figures }): Rig => {
    const stepLength = stride / footfallsOf(which.pattern, which.legs)!.beats.length;
    const gait: PatternGait = { kind: 'pattern', pattern: which.pattern, stepLength, ...figures };
    const body: LeggedBody = {
      ...pacer,
      legs: which.legs,
      thigh,
      shank,
      foot: { ...pacer.foot, mass: footMass },
    };
    return { ...PACER, body, jobs: { ...PACER.jobs, gait } };
  });

/** Grains of the legs at an instant as x y z mass: rods cut into pieces whose spin is that of the rod. */
function grainsAt(gait: CompiledGait, body: LeggedBody, time: number): number[] {
  const state = new Float64Array(9);
  const foot = new Float64Array(9);
  const knee = new Float64Array(3);
  const grains: number[] = [];
  bodyStateAt(gait.body, time, state);
  gait.hips.forEach((rest, leg) => {
    footStateAt(gait.feet[leg]!, time, foot);
    const hip = rest.map((x, axis) => x + state[axis]!);
    placeKnee(hip, foot, body.thigh.length, body.shank.length, knee);
    for (const [mass, from, to] of [
      [body.thigh.mass, hip, knee],
      [body.shank.mass, knee, foot],
    ] as const) {
      // Simpson's weights on both ends and the middle are exact for moments of second order along a rod.
      for (const [share, at] of [
        [1 / 6, 0],
        [2 / 3, 0.5],
        [1 / 6, 1],
      ] as const) {
        grains.push(...[0, 1, 2].map((axis) => from[axis]! + at * (to[axis]! - from[axis]!)), share * mass);
      }
    }
    grains.push(foot[0]!, foot[1]!, foot[2]!, body.foot.mass);
  });
  return grains;
}

/** Eighth-order second derivative of samples at t - 4h .. t + 4h. */
const bend = (values: readonly number[], h: number): number => {
  const weights = [-1 / 560, 8 / 315, -1 / 5, 8 / 5, -205 / 72, 8 / 5, -1 / 5, 8 / 315, -1 / 560];
  return weights.reduce((sum, w, i) => sum + w * values[i]!, 0) / (h * h);
};

describe('demand from every grain of the legs', () => {
  it('is what places alone give, knees from the still leg, differentiated twice', () => {
    let compared = 0;
    fc.assert(
      fc.property(anyWalker, number(0, 1), (rig, share) => {
        const outcome = compileGait(rig);
        fc.pre(outcome.kind === 'compiled');
        if (outcome.kind !== 'compiled') return;
        const { gait } = outcome;
        const body = rig.body as LeggedBody;
        const swing = Math.min(...gait.feet.map((f) => f.spans[1]!.to - f.spans[1]!.from));
        const h = swing / 80;
        const t = share * gait.period;
        const edges = gait.feet.flatMap((f) => f.spans.map((span) => span.from));
        fc.pre(
          edges.every(
            (edge) =>
              Math.abs(((((t - edge) % gait.period) + 1.5 * gait.period) % gait.period) - 0.5 * gait.period) >
              5 * h,
          ),
        );
        const rows = Array.from({ length: 9 }, (_, i) => grainsAt(gait, body, t + (i - 4) * h));
        const moment = [0, 0, 0];
        let lift = 0;
        for (let g = 0; g < rows[0]!.length; g += 4) {
          const m = rows[4]![g + 3]!;
          const [x, y, z] = rows[4]!.slice(g, g + 3) as [number, number, number];
          const a = [0, 1, 2].map((axis) =>
            bend(
              rows.map((row) => row[g + axis]!),
              h,
            ),
          );
          const f = [-m * a[0]!, -m * a[1]!, -m * (STANDARD_GRAVITY + a[2]!)];
          moment[0]! += y * f[2]! - z * f[1]!;
          moment[1]! += z * f[0]! - x * f[2]!;
          lift -= f[2]!;
        }
        const course = sampleGait(gait, Float64Array.of(t, t + h), false);
        const legs = legMassCourse(legModelOf(body), course);
        const demand = computeDemand(course, { mass: 0, centre: [0, 0, 0] }, legs, GROUND);
        // Forces scale with accelerations: judge against what the legs weigh and how hard they are moved.
        const scale = legs.mass * (STANDARD_GRAVITY + 6 * (0.12 / swing ** 2)) * 0.3 + 1e-12;
        expectClose(
          [demand.roll[0]!, demand.pitch[0]!, demand.verticalForce[0]!],
          [moment[0]!, moment[1]!, lift],
          {
            abs: 1e-8 * scale, // measured 7e-10
          },
        );
        compared++;
      }),
      { seed: 1_917, numRuns: 600 },
    );
    expect(compared).toBeGreaterThan(500);
  });
});
