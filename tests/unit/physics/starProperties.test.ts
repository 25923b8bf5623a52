import { CholeskyDecomposition } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { conservedQuantities, starCentre, starInertia } from '../../../src/core/physics/conserved';
import { type FirmFooting, type StarFooting, tippingEdge } from '../../../src/core/physics/footing';
import {
  compileRighting,
  rightingArea,
  rightingArm,
  rightingSlope,
} from '../../../src/core/physics/footingFloat';
import { basePose } from '../../../src/core/physics/footingMotion';
import { simulateExactly, simulateFree, startState } from '../../../src/core/physics/freeMotion';
import { massMatrix } from '../../../src/core/physics/linearisation';
import { gimbalFrictionTorque, wheelDragTorque } from '../../../src/core/physics/losses';
import { centreOfPressure, supportMargin, supportReaction } from '../../../src/core/physics/reactions';
import { cross3, rotate3, rotationOf, type Sym3, type Vec3 } from '../../../src/core/physics/spatial';
import { fallFacts } from '../../../src/core/physics/stability';
import {
  createStarWork,
  setMovingBase,
  setPlanted,
  starAcceleration,
  starDerivative,
} from '../../../src/core/physics/starDynamics';
import { compileStar, type StarDescription } from '../../../src/core/physics/starModel';
import { expectClose } from '../../support/closeTo';
import { createRandom, pick, randomStar, randomStart, randomVector } from './randomStar';

const kinds: readonly StarFooting['kind'][] = ['firm', 'edge', 'point', 'rocker', 'float', 'free'];

describe('random valid stars', () => {
  it('never give NaN, and their mass matrix stays positive definite (seeds 1 to 300)', () => {
    for (let seed = 1; seed <= 300; seed++) {
      const random = createRandom(seed);
      const description = randomStar(random, {
        gyros: 1 + Math.floor(random() * 6),
        footing: pick(random, kinds),
        isSpatial: random() < 0.5,
        drives: ['servo', 'free', 'locked'],
        spins: ['held', 'coasting', 'driven'],
      });
      const model = compileStar(description);
      const work = createStarWork(model);
      const state = startState(model, randomStart(random, description, model.footing.pose, 2));
      const out = new Float64Array(model.stateSize).fill(Number.NaN);
      starDerivative(model, work, state, new Float64Array(model.effortSize), out);
      expect(out.every(Number.isFinite), `seed ${seed}`).toBe(true);
      const M = massMatrix(model, work, state);
      const even = M.clone().add(M.transpose()).mul(0.5);
      expect(new CholeskyDecomposition(even).isPositiveDefinite(), `seed ${seed}`).toBe(true);
    }
  });

  it('move without NaN for a second (seeds 1 to 40)', () => {
    for (let seed = 1; seed <= 40; seed++) {
      const random = createRandom(1000 + seed);
      const description = randomStar(random, {
        gyros: 1 + Math.floor(random() * 4),
        footing: pick(random, kinds),
        drives: ['servo', 'free', 'locked'],
        spins: ['held', 'coasting'],
      });
      const pose = compileStar(description).footing.pose;
      const motion = simulateFree(description, randomStart(random, description, pose, 0.5), 1, 1e-3, 100);
      for (const column of motion.columns) expect(column.every(Number.isFinite), `seed ${seed}`).toBe(true);
    }
  });
});

describe('one thing described in two ways', () => {
  it('a payload folded into the body or kept apart: the same motion to 1e-10', () => {
    for (const footing of ['edge', 'point', 'free'] as const) {
      const random = createRandom(77);
      const star = randomStar(random, { gyros: 2, footing, drives: ['free'], spins: ['coasting'] });
      const payload = {
        mass: 0.7,
        com: randomVector(random, 0.2),
        inertia: [2e-3, 1e-3, 1.5e-3, 1e-4, 0, 0] as Sym3,
      };
      const apart: StarDescription = {
        ...star,
        gyros: [
          ...star.gyros,
          {
            position: [0, 0, 0],
            gimbalAxis: [0, 1, 0],
            spinAxis: [0, 0, 1],
            frame: payload,
            wheel: { mass: 0, axialInertia: 0, transverseInertia: 0, centre: [0, 0, 0] },
            drive: { kind: 'locked' },
            spin: 'held',
          },
        ],
      };
      const { base } = star;
      const mass = base.mass + payload.mass;
      const com = base.com.map(
        (c, j) => (base.mass * c + payload.mass * payload.com[j]!) / mass,
      ) as unknown as Vec3;
      const shifted = (part: typeof payload): number[] => {
        const [x, y, z] = part.com.map((c, j) => c - com[j]!) as [number, number, number];
        const shift = [y * y + z * z, x * x + z * z, x * x + y * y, -x * y, -x * z, -y * z];
        return part.inertia.map((v, k) => v + part.mass * shift[k]!);
      };
      const bodyPart = shifted({ ...base, inertia: base.inertia });
      const inertia = shifted(payload).map((v, k) => v + bodyPart[k]!) as unknown as Sym3;
      const folded: StarDescription = { ...star, base: { mass, com, inertia } };
      const start = randomStart(random, star, compileStar(star).footing.pose, 0.3);
      const startApart = {
        ...start,
        tilt: [...start.tilt!, 0],
        tiltRate: [...start.tiltRate!, 0],
        wheelSpeed: [...start.wheelSpeed!, 0],
      };
      const one = simulateFree(folded, start, 1, 1e-3, 1000);
      const two = simulateFree(apart, startApart, 1, 1e-3, 1000);
      const angles = (m: typeof one): number[] => [...m.pose, m.tilt[0]!, m.tilt[1]!].map((c) => c.at(-1)!);
      expectClose(angles(one), angles(two), { abs: 1e-10 }, footing); // measured 9e-16
      const [a, b] = [compileStar(folded), compileStar(apart)];
      expectClose(starCentre(a, [0.3, 0.2]).com_B, starCentre(b, [0.3, 0.2, 0]).com_B, { abs: 1e-15 });
      const about: Vec3 = [0.1, 0.2, -0.1];
      expectClose(starInertia(a, [0.3, 0.2], about), starInertia(b, [0.3, 0.2, 0], about), { abs: 1e-15 });
    }
  });

  it('a ball of no radius rolls like a point, a cylinder of no radius like an edge', () => {
    const random = createRandom(78);
    const star = randomStar(random, { gyros: 2, footing: 'point', drives: ['free'], spins: ['coasting'] });
    const centre = randomVector(random, 0.2);
    const run = (footing: StarFooting, pose: number[], speeds: number[]): Float64Array =>
      simulateFree(
        { ...star, footing },
        { pose, baseSpeeds: speeds, tilt: [0.1, 0.2], wheelSpeed: [200, -300] },
        1,
        1e-3,
        1000,
      ).last;
    const w = [0.2, -0.1, 0.3];
    const point = run({ kind: 'point', point: centre }, [1, 0, 0, 0], w);
    const ball = run(
      { kind: 'rocker', shape: 'ball', centre, radius: 0, axis: [1, 0, 0] },
      [1, 0, 0, 0, 0, 0],
      w,
    );
    expectClose(ball.slice(0, 4), point.slice(0, 4), { abs: 1e-14 });
    const edge = run({ kind: 'edge', point: centre, axis: [1, 0, 0] }, [0.1], [0.2]);
    const drum = run({ kind: 'rocker', shape: 'cylinder', centre, radius: 0, axis: [1, 0, 0] }, [0.1], [0.2]);
    expectClose(drum, edge, { abs: 1e-14 });
  });

  it('a free body started as a rolling ball with the ground reaction applied keeps rolling', () => {
    const random = createRandom(79);
    const star = randomStar(random, {
      gyros: 2,
      footing: 'rocker',
      isSpatial: true,
      drives: ['free'],
      spins: ['coasting'],
    });
    const model = compileStar(star);
    const work = createStarWork(model);
    const state = startState(model, randomStart(random, star, model.footing.pose, 0.5));
    const effort = new Float64Array(model.effortSize);
    const acceleration = new Float64Array(model.accelerationSize);
    starAcceleration(model, work, state, effort, acceleration);
    const reaction = supportReaction(model, work, state, acceleration, new Float64Array(6));
    // The ground gives a force at the contact and no moment there.
    const up = [work.place.R_WB[6]!, work.place.R_WB[7]!, work.place.R_WB[8]!];
    const contact = [0, 1, 2].map(
      (j) => model.footing.point[j]! - model.footing.radius * up[j]!,
    ) as unknown as Vec3;
    expectClose(reaction.moment, cross3(contact, reaction.force), { abs: 1e-12 }); // measured 5e-15
    // The same body free in space under that wrench accelerates alike.
    const free = compileStar({ ...star, footing: { kind: 'free' } });
    const freeWork = createStarWork(free);
    const V = work.place.velocity;
    const freeState = startState(free, {
      pose: [...state.subarray(0, 4), 0, 0, 0],
      baseSpeeds: [...V],
      tilt: [...state.subarray(6, 8)],
      tiltRate: [...state.subarray(11, 13)],
      wheelSpeed: [...state.subarray(13, 15)],
    });
    const freeEffort = new Float64Array(free.effortSize);
    freeEffort.set([...reaction.moment, ...reaction.force], 4);
    const freeAcceleration = new Float64Array(free.accelerationSize);
    starAcceleration(free, freeWork, freeState, freeEffort, freeAcceleration);
    expectClose(freeAcceleration.slice(0, 3), acceleration.slice(0, 3), { abs: 1e-11 }); // measured 1.0e-13
    expectClose(freeAcceleration.slice(6, 8), acceleration.slice(3, 5), { abs: 1e-8 });
  });
});

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
});

describe('laws of loss and righting', () => {
  it('friction and drag oppose the motion, are odd, and stiction stands above Coulomb', () => {
    for (const rate of [1e-4, 0.01, 1, 30]) {
      const f = gimbalFrictionTorque(0.01, 0.02, 0.001, 0.05, 0.001, rate);
      expect(f).toBeLessThan(0);
      expect(gimbalFrictionTorque(0.01, 0.02, 0.001, 0.05, 0.001, -rate)).toBe(-f);
      const d = wheelDragTorque(1e-3, 1e-5, 1e-8, rate);
      expect(d).toBeLessThan(0);
      expect(wheelDragTorque(1e-3, 1e-5, 1e-8, -rate)).toBe(-d);
    }
    expectClose(gimbalFrictionTorque(0.01, 0.02, 0, 0.05, 0.001, 0.005), -0.02, { rel: 0.01 });
    expectClose(gimbalFrictionTorque(0.01, 0.02, 0.001, 0.05, 0.001, 1), -0.011, { rel: 1e-12 });
    expectClose(wheelDragTorque(1e-3, 1e-5, 1e-8, 500), -(1e-3 + 5e-3 + 2.5e-3), { rel: 1e-12 });
  });

  it('a coasting wheel on firm feet slows by the law alone', () => {
    const description: StarDescription = {
      base: { mass: 1, com: [0, 0, 0], inertia: [1, 1, 1, 0, 0, 0] },
      gyros: [
        {
          position: [0, 0, 0],
          gimbalAxis: [0, 1, 0],
          spinAxis: [0, 0, 1],
          frame: { mass: 0.1, com: [0, 0, 0], inertia: [1e-4, 1e-4, 1e-4, 0, 0, 0] },
          wheel: { mass: 0.1, axialInertia: 1e-3, transverseInertia: 6e-4, centre: [0, 0, 0] },
          drive: { kind: 'locked' },
          spin: 'coasting',
          drag: { constant: 0, viscous: 2e-4, quadratic: 0 },
        },
      ],
      footing: {
        kind: 'firm',
        support: [
          [-1, -1],
          [1, -1],
          [1, 1],
          [-1, 1],
        ],
        soleHeight: 0,
      },
    };
    const motion = simulateFree(description, { wheelSpeed: [400] }, 5, 1e-2, 500);
    expectClose(motion.wheelSpeed[0]!.at(-1)!, 400 * Math.exp(-1), { rel: 1e-9 });
  });

  it('a righting curve goes through its points, is odd, and its slope and area are its own', () => {
    const angle = [0, 0.2, 0.4, 0.7, 1.05];
    const arm = [0, 0.03, 0.05, 0.045, 0.01];
    const model = compileRighting({ kind: 'curve', angle, arm });
    angle.forEach((a, k) => {
      expectClose(rightingArm(model, a), arm[k]!, { abs: 1e-15 });
      expectClose(rightingArm(model, -a), -arm[k]!, { abs: 1e-15 });
    });
    for (const a of [-0.9, -0.3, 0.1, 0.55, 1]) {
      const e = 1e-5;
      expectClose(
        rightingSlope(model, a),
        (rightingArm(model, a + e) - rightingArm(model, a - e)) / (2 * e),
        { abs: 1e-9 },
      );
      expectClose(
        rightingArm(model, a),
        (rightingArea(model, a + e) - rightingArea(model, a - e)) / (2 * e),
        { abs: 1e-9 },
      );
    }
    expect(() => compileRighting({ kind: 'curve', angle: [0, 0.2, 0.1], arm: [0, 1, 1] })).toThrow(
      RangeError,
    );
    expect(() => compileRighting({ kind: 'curve', angle: [0.1, 0.2, 0.3], arm: [0, 1, 1] })).toThrow(
      RangeError,
    );
  });
});
