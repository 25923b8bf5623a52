import { describe, expect, it } from 'vitest';
import { conservedQuantities, starCentre, starInertia } from '../../../src/core/physics/conserved';
import { type FirmFooting, tippingEdge } from '../../../src/core/physics/footing';
import { basePose } from '../../../src/core/physics/footingMotion';
import { simulateExactly, startState } from '../../../src/core/physics/freeMotion';
import { centreOfPressure, supportMargin, supportReaction } from '../../../src/core/physics/reactions';
import { cross3, rotate3, rotationOf, type Sym3, type Vec3 } from '../../../src/core/physics/spatial';
import { fallFacts } from '../../../src/core/physics/stability';
import { starAcceleration } from '../../../src/core/physics/starDynamics';
import { compileStar, type StarDescription } from '../../../src/core/physics/starModel';
import { createStarWork, setMovingBase, setPlanted } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';
import { createRandom, randomStar, randomStart } from './randomStar';

describe('support', () => {
  const feet: FirmFooting = {
    kind: 'firm',
    support: [
      [-0.1, -0.05],
      [0.1, -0.05],
      [0.1, 0.05],
      [-0.1, 0.05],
    ],
    soleHeight: -0.3,
  };

  it('standing still, feet press under the centre of mass with the weight', () => {
    const random = createRandom(21);
    const star = {
      ...randomStar(random, { gyros: 2, footing: 'firm', drives: ['locked'], spins: ['held'] }),
      gravity: [0, 0, -9.81] as Vec3,
    };
    const model = compileStar({ ...star, footing: feet });
    const work = createStarWork(model);
    const state = startState(model, { tilt: [0.3, -0.4], wheelSpeed: [300, 200] });
    const acceleration = new Float64Array(model.accelerationSize);
    starAcceleration(model, work, state, new Float64Array(model.effortSize), acceleration);
    const reaction = supportReaction(model, work, state, acceleration, new Float64Array(6));
    const { mass, com_B } = starCentre(model, [0.3, -0.4]);
    expectClose(reaction.force, [0, 0, mass * 9.81], { abs: 1e-12 });
    const cop = centreOfPressure(reaction, feet.soleHeight);
    expectClose([cop.x, cop.y, cop.load], [com_B[0], com_B[1], mass * 9.81], { abs: 1e-13 });
  });

  it('a body carried sideways over planted feet presses as a cart on a table does (Vukobratovic and Borovac 2004)', () => {
    const model = compileStar({
      base: { mass: 6, com: [0, 0, 0], inertia: [0.1, 0.1, 0.05, 0, 0, 0] },
      gyros: [],
      footing: feet,
      gravity: [0, 0, -9.81],
    });
    const work = createStarWork(model);
    // Body accelerates left at 1.2: the planted point goes right in the body frame.
    setPlanted(work, [0, 0, 0, 0, 0, 0, 0, -1.2, 0]);
    const acceleration = new Float64Array(0);
    starAcceleration(model, work, new Float64Array(0), new Float64Array(6), acceleration);
    const reaction = supportReaction(model, work, [], acceleration, new Float64Array(6));
    const cop = centreOfPressure(reaction, -0.3);
    expectClose(cop.y, (-0.3 * 1.2) / 9.81, { rel: 1e-14 });
    expectClose(reaction.force[1], 6 * 1.2, { rel: 1e-14 });
  });

  it('legs set by prescription act as the bodies they are: a leg swung about the hip', () => {
    // Base 4 kg, leg 1 kg on an arm from the hip swinging about y by prescription; against a servo-driven star.
    const swing = 0.4;
    const rate = 3;
    const pushing = 7;
    const leg = { mass: 1, com: [0.02, 0, -0.15] as Vec3, inertia: [4e-3, 3e-3, 1e-3, 0, 0, 0] as Sym3 };
    const whole: StarDescription = {
      base: { mass: 4, com: [0, 0, 0.05], inertia: [0.03, 0.03, 0.02, 0, 0, 0] },
      gyros: [
        {
          position: [0, 0.05, -0.02],
          gimbalAxis: [0, 1, 0],
          spinAxis: [0, 0, 1],
          frame: leg,
          wheel: { mass: 0, axialInertia: 0, transverseInertia: 0, centre: [0, 0, 0] },
          drive: { kind: 'servo', input: 'acceleration' },
          spin: 'held',
        },
      ],
      footing: { kind: 'point', point: [0, 0, -0.3] },
    };
    const star = compileStar(whole);
    const work = createStarWork(star);
    const state = startState(star, {
      pose: [0.9, 0.3, 0.2, 0.1],
      baseSpeeds: [0.4, -0.3, 0.7],
      tilt: [swing],
      tiltRate: [rate],
    });
    const effort = new Float64Array(star.effortSize);
    effort[0] = pushing;
    const expected = new Float64Array(star.accelerationSize);
    starAcceleration(star, work, state, effort, expected);
    const bare = compileStar({ ...whole, gyros: [] });
    const bareWork = createStarWork(bare);
    // About O along the swing, by fourth-order differences in time of mass properties seen at each angle.
    const along = (t: number): { about: number[]; spin: number[] } => {
      const angle = swing + rate * t + (pushing * t * t) / 2;
      const { mass, com_B } = starCentre(star, [angle]);
      return {
        about: [mass, ...com_B.map((c) => c * mass), ...starInertia(star, [angle], [0, 0, 0])],
        spin: [],
      };
    };
    const e = 1e-3;
    const [f2, f1, f0, b1, b2] = [2, 1, 0, -1, -2].map((k) => along(k * e).about) as number[][];
    const slope = f0!.map((_, k) => (8 * (f1![k]! - b1![k]!) - (f2![k]! - b2![k]!)) / (12 * e));
    const bend = f0!.map(
      (_, k) => (16 * (f1![k]! + b1![k]!) - f2![k]! - b2![k]! - 30 * f0![k]!) / (12 * e * e),
    );
    // Relative angular momentum about O of the leg: its own inertia and its centre's motion relative to the body.
    const relative = (t: number): number[] => {
      const angle = swing + rate * t + (pushing * t * t) / 2;
      const omega = rate + pushing * t;
      const R = [Math.cos(angle), Math.sin(angle)];
      const arm: Vec3 = [R[0]! * 0.02 - R[1]! * 0.15, 0, -R[1]! * 0.02 - R[0]! * 0.15];
      const at: Vec3 = [arm[0], 0.05, arm[2] - 0.02];
      const v = cross3([0, omega, 0], arm);
      const spun = cross3(at, v);
      return [spun[0], spun[1] + 3e-3 * omega, spun[2]];
    };
    const L = relative(0);
    const dL = [0, 1, 2].map(
      (k) =>
        (8 * (relative(e)[k]! - relative(-e)[k]!) - (relative(2 * e)[k]! - relative(-2 * e)[k]!)) / (12 * e),
    );
    const moving = [...f0!, ...slope.slice(1, 4), ...L, ...slope.slice(4), ...bend.slice(1, 4), ...dL];
    setMovingBase(bare, bareWork, moving);
    const out = new Float64Array(bare.accelerationSize);
    const bareState = startState(bare, { pose: [0.9, 0.3, 0.2, 0.1], baseSpeeds: [0.4, -0.3, 0.7] });
    starAcceleration(bare, bareWork, bareState, new Float64Array(6), out);
    expectClose(out, expected.slice(0, 3), { abs: 1e-7 }); // measured 3.4e-10, of the differences
  });

  it('margin to the nearest side, and the edge it would tip about', () => {
    const margin = supportMargin(feet, { x: 0.02, y: 0.04 });
    expectClose(margin.distance, 0.01, { rel: 1e-12 });
    expect(margin.side).toBe(2);
    const edge = tippingEdge(feet, margin.side);
    expect(edge.axis).toEqual([-1, 0, 0]);
    expectClose(edge.point, [0.1, 0.05, -0.3], { abs: 1e-15 });
    expect(supportMargin(feet, { x: 0.02, y: 0.06 }).distance).toBeLessThan(0);
    const facts = fallFacts({
      base: { mass: 6, com: [0, 0.02, 0.1], inertia: [0.1, 0.1, 0.05, 0, 0, 0] },
      gyros: [],
      footing: feet,
      gravity: [0, 0, -9.81],
    });
    // About the left side: arm (0.03 in, 0.4 up), I = 0.1 + 6 (0.03^2 + 0.4^2), a = sqrt(m g r / I).
    const r = Math.hypot(0.03, 0.4);
    expect(facts.kind).toBe('topples');
    if (facts.kind !== 'topples') return;
    expectClose(facts.rate, Math.sqrt((6 * 9.81 * r) / (0.1 + 6 * r * r)), { rel: 1e-12 });
    expectClose(Math.abs(facts.balanceAngle), Math.atan2(0.03, 0.4), { rel: 1e-12 });
    expectClose(facts.doubling, Math.LN2 / facts.rate, { rel: 1e-14 });
  });

  it('a float swings in its natural period, 2 pi sqrt((I + added)/(W GM)), with the damping ratio of its numbers', () => {
    const facts = fallFacts({
      base: { mass: 5, com: [0, 0, 0], inertia: [0.2, 1, 1, 0, 0, 0] },
      gyros: [],
      footing: {
        kind: 'float',
        freedoms: 'roll',
        point: [0, 0, 0],
        righting: { kind: 'metacentric', metacentricHeight: 0.05 },
        addedInertia: 0.05,
        linearDamping: 0.04,
        quadraticDamping: 0.5,
      },
      gravity: [0, 0, -9.81],
    });
    const k = 5 * 9.81 * 0.05;
    const ratio = 0.04 / (2 * Math.sqrt(k * 0.25));
    expect(facts.kind).toBe('swings');
    if (facts.kind !== 'swings') return;
    expectClose(facts.dampingRatio, ratio, { rel: 1e-12 });
    expectClose(facts.period, (2 * Math.PI) / (Math.sqrt(k / 0.25) * Math.sqrt(1 - ratio ** 2)), {
      rel: 1e-12,
    });
  });

  it('a slope is a gravity that leans: an edge balances against it', () => {
    const facts = fallFacts({
      base: { mass: 5, com: [0, 0, 0.2], inertia: [0.2, 1, 1, 0, 0, 0] },
      gyros: [],
      footing: { kind: 'edge', point: [0, 0, 0], axis: [1, 0, 0] },
      gravity: [0, 9.81 * Math.sin(0.1), -9.81 * Math.cos(0.1)],
    });
    expectClose(facts.balanceAngle, 0.1, { rel: 1e-12 });
  });

  it('poses: a planted point stays where it is, a ball rolls on its ground', () => {
    const random = createRandom(5);
    const star = randomStar(random, { gyros: 1, footing: 'point', drives: ['free'], spins: ['coasting'] });
    const model = compileStar(star);
    const work = createStarWork(model);
    const state = startState(model, randomStart(random, star, 'attitude', 1));
    const pose = new Float64Array(7);
    basePose(model, work.place, state, pose);
    const at = rotate3(rotationOf(pose), [...model.footing.point] as unknown as Vec3);
    expectClose(
      [0, 1, 2].map((j) => at[j]! + pose[4 + j]!),
      model.footing.point,
      { abs: 1e-15 },
    );
    // Momentum is mass times the velocity of the centre, by differences of the centre along the motion.
    const motion = simulateExactly(star, randomStart(random, star, 'attitude', 0.5), 2e-3, 2, 1e-13);
    const centre = (k: number): Vec3 =>
      conservedQuantities(
        model,
        work,
        Float64Array.from(motion.columns, (c) => c[k]!),
      ).centreOfMass;
    const middle = conservedQuantities(
      model,
      work,
      Float64Array.from(motion.columns, (c) => c[1]!),
    );
    const speed = [0, 1, 2].map((j) => (centre(2)[j]! - centre(0)[j]!) / 2e-3);
    expectClose(middle.velocity, speed, { abs: 1e-5 }); // measured 1.4e-6, of the differences over 2 ms
  });

  it('a reaction wheel: gimbal locked, the motor turns the body the other way', () => {
    const Js = 2e-3;
    const description: StarDescription = {
      base: { mass: 5, com: [0, 0, 0], inertia: [0.2, 1, 1, 0, 0, 0] },
      gyros: [
        {
          position: [0, 0, 0],
          gimbalAxis: [0, 1, 0],
          spinAxis: [1, 0, 0],
          frame: { mass: 0.1, com: [0, 0, 0], inertia: [1e-3, 1e-3, 1e-3, 0, 0, 0] },
          wheel: { mass: 0.5, axialInertia: Js, transverseInertia: 1.1e-3, centre: [0, 0, 0] },
          drive: { kind: 'locked' },
          spin: 'driven',
        },
      ],
      footing: { kind: 'edge', point: [0, 0, 0], axis: [1, 0, 0] },
      gravity: [0, 0, 0],
    };
    const model = compileStar(description);
    const effort = new Float64Array(model.effortSize);
    effort[1] = 0.3;
    const out = new Float64Array(model.accelerationSize);
    starAcceleration(model, createStarWork(model), startState(model, { wheelSpeed: [100] }), effort, out);
    // The wheel turns freely about roll, so it is no load there; it gains what the body loses.
    expectClose(out[0]!, -0.3 / 0.201, { rel: 1e-14 });
    expectClose(out[2]!, 0.3 / Js + 0.3 / 0.201, { rel: 1e-14 });
  });
});
