import { CholeskyDecomposition } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { starCentre, starInertia } from '../../../src/core/physics/conserved';
import type { StarFooting } from '../../../src/core/physics/footing';
import { simulateFree, startState } from '../../../src/core/physics/freeMotion';
import { massMatrix } from '../../../src/core/physics/linearisation';
import { supportReaction } from '../../../src/core/physics/reactions';
import { cross3, type Sym3, type Vec3 } from '../../../src/core/physics/spatial';
import { starAcceleration, starDerivative } from '../../../src/core/physics/starDynamics';
import { compileStar, type StarDescription } from '../../../src/core/physics/starModel';
import { createStarWork } from '../../../src/core/physics/starWork';
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
