import { describe, expect, it } from 'vitest';
import { carrierPieces, combineBodies, placeKnee, STANDARD_GRAVITY } from '../../../src/core/physics';
import { captureCourse } from '../../../src/core/planning/captureMargin';
import { computeDemand, firmAsk, groundOf, meanMoment, trunkOf } from '../../../src/core/planning/demand';
import { type CompiledGait, compileGait, cycleTimes, sampleGait } from '../../../src/core/planning/gait';
import { kneeState, legMassCourse, legModelOf } from '../../../src/core/planning/legMass';
import { type LeggedBody, PACER, type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const compiled = (rig: Rig): CompiledGait => {
  const outcome = compileGait(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map((r) => r.sentence).join(' '));
  return outcome.gait;
};

const demandOf = (rig: Rig, time?: Float64Array) => {
  const gait = compiled(rig);
  const course = sampleGait(gait, time ?? cycleTimes(gait, 240), time === undefined);
  const legs = legMassCourse(legModelOf(rig.body as LeggedBody), course);
  return { gait, course, legs, demand: computeDemand(course, trunkOf(rig), legs, groundOf(rig)!) };
};

/** Eighth-order central difference over instants t - 4h .. t + 4h of rows of `size` values. */
const slopeOf = (values: Float64Array, size: number, axis: number, h: number): number => {
  const weights = [1 / 280, -4 / 105, 1 / 5, -4 / 5, 0, 4 / 5, -1 / 5, 4 / 105, -1 / 280];
  return weights.reduce((sum, w, i) => sum + w * values[size * i + axis]!, 0) / h;
};

const stencil = (t: number, h: number) => Float64Array.from({ length: 9 }, (_, i) => t + (i - 4) * h);

/** Instants away from touch-downs and lift-offs, where the third derivative jumps. */
const quietInstants = (gait: CompiledGait, h: number): number[] => {
  const edges = gait.feet.flatMap((track) => track.spans.map((span) => span.from % gait.period));
  return Array.from({ length: 23 }, (_, i) => ((i + 0.37) / 23) * gait.period).filter((t) =>
    edges.every(
      (edge) => Math.abs(((t - edge + 1.5 * gait.period) % gait.period) - 0.5 * gait.period) > 5 * h,
    ),
  );
};

describe('the legs as moving mass', () => {
  it('bends the knee where the still leg has it, and moves it by its derivatives', () => {
    const hip = (t: number) => Float64Array.of(0.02 * t, 0.05 + 0.01 * Math.sin(3 * t), 0.3 - 0.02 * t * t);
    const foot = (t: number) => Float64Array.of(0.04 * Math.cos(t), 0.06 + 0.02 * t, 0.02 * Math.sin(t) ** 2);
    const state = (place: (t: number) => Float64Array, t: number): Float64Array => {
      const h = 1e-3;
      const rows = Float64Array.from(Array.from(stencil(t, h)).flatMap((s) => [...place(s)]));
      const weights = [-1 / 560, 8 / 315, -1 / 5, 8 / 5, -205 / 72, 8 / 5, -1 / 5, 8 / 315, -1 / 560];
      return Float64Array.from([
        ...place(t),
        ...[0, 1, 2].map((axis) => slopeOf(rows, 3, axis, h)),
        ...[0, 1, 2].map((axis) => weights.reduce((sum, w, i) => sum + w * rows[3 * i + axis]!, 0) / (h * h)),
      ]);
    };
    for (const [thigh, shank] of [
      [0.17, 0.17],
      [0.2, 0.15],
      [0.14, 0.21],
    ] as const) {
      const knee = (t: number) => {
        const out = new Float64Array(3);
        placeKnee(hip(t), foot(t), thigh, shank, out);
        return out;
      };
      for (const t of [0.1, 0.4, 0.9]) {
        const out = new Float64Array(9).fill(Number.NaN);
        kneeState(state(hip, t), state(foot, t), thigh, shank, out);
        const expected = state(knee, t);
        expectClose(out.subarray(0, 3), expected.subarray(0, 3), { abs: 1e-14 }); // measured 6e-17
        expectClose(out.subarray(3, 6), expected.subarray(3, 6), { abs: 1e-11 }); // measured 4e-14
        expectClose(out.subarray(6), expected.subarray(6), { abs: 1e-8 }); // measured 2e-10
      }
    }
  });

  it('weighs and stands as the pieces of the rig do', () => {
    const rig: Rig = { ...STRIDER, jobs: { ...STRIDER.jobs, gait: { kind: 'stand' } } };
    const pieces = combineBodies(carrierPieces(rig).filter((piece) => piece.group === 'leg'));
    const { legs } = demandOf(rig);
    expectClose(legs.mass, pieces.mass, { rel: 1e-14 }); // measured 0
    expectClose(legs.centre.subarray(0, 3), pieces.com, { abs: 1e-14 }); // measured 0
    expectClose(legs.inertia.subarray(0, 6), pieces.inertia, { abs: 1e-14 }); // measured 5e-18
    expect(legs.momentum.every((p) => p === 0)).toBe(true);
  });

  it('has forces and moments that are the rates of its momentum', () => {
    for (const rig of [STRIDER, PACER]) {
      const gait = compiled(rig);
      const h = 2e-3 * gait.period;
      const quiet = quietInstants(gait, h);
      expect(quiet.length).toBeGreaterThan(12);
      for (const t of quiet) {
        const { legs } = demandOf(rig, stencil(t, h));
        for (let axis = 0; axis < 3; axis++) {
          expectClose(slopeOf(legs.momentum, 3, axis, h), legs.momentumRate[12 + axis]!, { abs: 1e-10 }); // measured 3e-12
          expectClose(slopeOf(legs.angularMomentum, 3, axis, h), legs.angularMomentumRate[12 + axis]!, {
            abs: 1e-9,
          }); // measured 4e-13
          const moved = legs.centre.map((c) => c * legs.mass);
          expectClose(slopeOf(moved, 3, axis, h), legs.momentum[12 + axis]!, { abs: 1e-9 }); // measured 9e-14
        }
      }
    }
  });
});

describe('demand', () => {
  it('is the same by bodies as by the rate of total angular momentum', () => {
    for (const rig of [STRIDER, PACER]) {
      const gait = compiled(rig);
      const trunk = trunkOf(rig);
      const h = 2e-3 * gait.period;
      for (const t of quietInstants(gait, h)) {
        const { course, legs, demand } = demandOf(rig, stencil(t, h));
        // Angular momentum of everything about the walking frame's origin, from places and velocities alone.
        const total = new Float64Array(27);
        for (let i = 0; i < 9; i++) {
          const r = [0, 1, 2].map((axis) => trunk.centre[axis]! + course.body[3 * i + axis]!);
          const v = [0, 1, 2].map((axis) => course.bodyVelocity[3 * i + axis]!);
          total[3 * i] = trunk.mass * (r[1]! * v[2]! - r[2]! * v[1]!) + legs.angularMomentum[3 * i]!;
          total[3 * i + 1] = trunk.mass * (r[2]! * v[0]! - r[0]! * v[2]!) + legs.angularMomentum[3 * i + 1]!;
        }
        const weight = (trunk.mass + legs.mass) * STANDARD_GRAVITY;
        const roll = -weight * demand.centreOfMass[13]! - slopeOf(total, 3, 0, h);
        const pitch = weight * demand.centreOfMass[12]! - slopeOf(total, 3, 1, h);
        expectClose([demand.roll[4]!, demand.pitch[4]!], [roll, pitch], { abs: 1e-9 }); // measured 4e-13
      }
    }
  });

  it('asks nothing of a body that stands over its feet', () => {
    for (const rig of [STRIDER, PACER]) {
      const still: Rig = { ...rig, jobs: { ...rig.jobs, gait: { kind: 'stand' } } };
      const { demand, legs } = demandOf(still);
      const trunk = trunkOf(still);
      const weight = (trunk.mass + legs.mass) * STANDARD_GRAVITY;
      expectClose(demand.verticalForce, new Float64Array(240).fill(weight), { rel: 1e-13 }); // measured 0
      for (let k = 0; k < 240; k++) {
        expect(demand.bareAcross[k]).toBeGreaterThan(demand.acrossMin[k]!);
        expect(demand.bareAcross[k]).toBeLessThan(demand.acrossMax[k]!);
        expect(demand.bareAlong[k]).toBeGreaterThan(demand.alongMin[k]!);
        expect(demand.bareAlong[k]).toBeLessThan(demand.alongMax[k]!);
      }
      // Hand figure: the outline of two feet side by side is as wide as the outer edges, less the margin.
      if (rig.body.kind !== 'legged' || rig.footing.kind !== 'firm') throw new Error('feet were expected');
      const half = (rig.body.hips.width + rig.body.foot.width) / 2 - rig.footing.margin;
      expectClose([demand.acrossMin[0]!, demand.acrossMax[0]!], [-half, half], { rel: 1e-12 }); // measured 0
    }
  });

  it('leans on gravity with the sign of the frame: a centre to the left falls to the left', () => {
    const off: Rig = {
      ...STRIDER,
      jobs: { ...STRIDER.jobs, gait: { kind: 'stand' } },
      payloads: [
        ...STRIDER.payloads,
        { name: 'Lead', mass: 1, size: [0.05, 0.05, 0.05], position: [0, 0.04, 0.4] },
      ],
    };
    const { demand } = demandOf(off);
    expectClose(demand.roll[0]!, -STANDARD_GRAVITY * 0.04, { rel: 1e-12 }); // measured 0
    const ask = firmAsk(demand, 'roll');
    // The centre of pressure under the centre of mass answers it all.
    expectClose(ask.ask[0]!, ask.verticalForce[0]! * demand.centreOfMass[1]!, { rel: 1e-12 }); // measured 0
  });

  it('has a mean moment that weight and mean centre explain, for motion that closes on itself', () => {
    for (const rig of [STRIDER, PACER]) {
      const { demand, legs } = demandOf(rig);
      const weight = (trunkOf(rig).mass + legs.mass) * STANDARD_GRAVITY;
      let across = 0;
      let along = 0;
      for (let k = 0; k < demand.nodes; k++) {
        along += demand.centreOfMass[3 * k]! / demand.nodes;
        across += demand.centreOfMass[3 * k + 1]! / demand.nodes;
      }
      const mean = meanMoment(demand);
      expectClose(mean.roll, -weight * across, { abs: 1e-4 }); // measured 9e-16
      expectClose(mean.pitch, weight * along, { abs: 1e-4 }); // measured 2e-5
    }
  });

  it('bounds the pressure over a whole interval by the feet that stay down', () => {
    const { course, demand } = demandOf(PACER);
    if (PACER.body.kind !== 'legged' || PACER.footing.kind !== 'firm') throw new Error('feet were expected');
    const half = PACER.body.foot.width / 2 - PACER.footing.margin;
    let single = 0;
    for (let k = 0; k < demand.intervals; k++) {
      const down = [0, 1, 2, 3].filter((leg) => course.isFootDownThroughout[4 * k + leg] === 1);
      if (down.join() !== '0,2') continue;
      single++;
      expectClose([demand.acrossMin[k]!, demand.acrossMax[k]!], [0.065 - half, 0.065 + half], { rel: 1e-12 }); // measured 2e-16
    }
    expect(single).toBeGreaterThan(90);
    expect(demand.isPinched.every((pinched) => pinched === 0)).toBe(true);
  });
});

describe('capture point of a gait', () => {
  const captured = (rig: Rig) => {
    const { course, legs, demand } = demandOf(rig);
    return { course, demand, capture: captureCourse(course, trunkOf(rig), legs, demand) };
  };

  it('is under the centre of a body at rest, as far from the edge as it looks', () => {
    if (STRIDER.body.kind !== 'legged') throw new Error('feet were expected');
    const { capture } = captured({ ...STRIDER, jobs: { ...STRIDER.jobs, gait: { kind: 'stand' } } });
    const edge = (STRIDER.body.hips.width + STRIDER.body.foot.width) / 2;
    expectClose(capture.across, new Float64Array(240), { abs: 1e-12 }); // measured 1e-19
    expectClose(capture.margin, new Float64Array(240).fill(edge), { rel: 1e-12 }); // measured 0
  });

  it('leads the sway by its speed over the rate of fall, and leaves the single foot', () => {
    const { course, demand, capture } = captured(STRIDER);
    for (let k = 0; k < 240; k++) {
      const before = demand.centreOfMass[3 * ((k + 239) % 240) + 1]!;
      const after = demand.centreOfMass[3 * ((k + 1) % 240) + 1]!;
      const speed = ((after - before) * 240) / (2 * course.gait.period);
      const height = demand.centreOfMass[3 * k + 2]!;
      const lead = speed / Math.sqrt(STANDARD_GRAVITY / height);
      expectClose(capture.across[k]! - demand.centreOfMass[3 * k + 1]!, lead, { abs: 1e-5 }); // measured 2e-6
    }
    // This walker sways less than its feet would need: the array has work to do.
    expect(Math.min(...capture.margin)).toBeLessThan(0);
  });
});
