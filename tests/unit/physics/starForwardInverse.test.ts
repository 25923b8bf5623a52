import { CholeskyDecomposition, Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { conservedQuantities } from '../../../src/core/physics/conserved';
import type { StarFooting } from '../../../src/core/physics/footing';
import { startState } from '../../../src/core/physics/freeMotion';
import { inverseDynamics } from '../../../src/core/physics/inverseDynamics';
import { linearise, massMatrix } from '../../../src/core/physics/linearisation';
import { starAcceleration, starDerivative } from '../../../src/core/physics/starDynamics';
import { compileStar, type StarModel } from '../../../src/core/physics/starModel';
import { createStarWork, setMovingBase, setPlanted } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';
import { between, createRandom, type Random, randomStar, randomStart } from './randomStar';

const cases: readonly [StarFooting['kind'], boolean][] = [
  ['firm', false],
  ['edge', false],
  ['point', false],
  ['rocker', false],
  ['rocker', true],
  ['float', false],
  ['float', true],
  ['free', false],
];

const lossy = {
  friction: { coulomb: 0.01, stiction: 0.02, viscous: 0.003, stribeckRate: 0.5, creepRate: 0.1 },
  drag: { constant: 1e-3, viscous: 1e-5, quadratic: 1e-8 },
};

function drawStar(random: Random, footing: StarFooting['kind'], isSpatial: boolean, gyros = 3) {
  const drawn = randomStar(random, {
    gyros,
    footing,
    isSpatial,
    drives: ['servo', 'free', 'locked'],
    spins: ['held', 'coasting', 'driven'],
  });
  const description = { ...drawn, gyros: drawn.gyros.map((gyro) => ({ ...gyro, ...lossy })) };
  const model = compileStar(description);
  const start = randomStart(random, description, model.footing.pose);
  // A hull near lying on its nose has no roll angle to speak of: it floats near upright.
  const pose = footing === 'float' && isSpatial ? [0.9, 0.3, -0.2, 0.25, 0.1, 0.2, -0.05] : start.pose!;
  const state = startState(model, { ...start, pose });
  const effort = Float64Array.from({ length: model.effortSize }, () => between(random, -0.5, 0.5));
  return { description, model, state, effort };
}

/** Efforts the motion should ask for: those given, except where the forward route decides the effort itself. */
function expectAsked(model: StarModel, asked: Float64Array, effort: Float64Array): void {
  const nb = model.footing.speeds;
  const n = model.gimbals;
  expectClose(asked.slice(0, nb), new Float64Array(nb), { abs: 1e-11 }, 'base'); // measured 1.0e-13
  for (let i = 0; i < n; i++) {
    if (model.gimbalMode[i] === 0) expectClose(asked[nb + i]!, effort[i]!, { abs: 1e-12 }, `gimbal ${i}`); // measured 1.1e-14
    if (model.isHeld[i] === 0) expectClose(asked[nb + n + i]!, effort[n + i]!, { abs: 1e-12 }, `motor ${i}`); // measured 4.1e-15
  }
}

describe('forward and inverse dynamics, by separate routes', () => {
  it.each(cases)('agree on footing %s (spatial: %s)', (footing, isSpatial) => {
    for (let seed = 1; seed <= 20; seed++) {
      const random = createRandom(seed);
      const { model, state, effort } = drawStar(random, footing, isSpatial);
      const work = createStarWork(model);
      const acceleration = new Float64Array(model.accelerationSize).fill(Number.NaN);
      starAcceleration(model, work, state, effort, acceleration);
      const asked = new Float64Array(model.accelerationSize).fill(Number.NaN);
      inverseDynamics(model, work, state, acceleration, effort.subarray(2 * model.gimbals), asked);
      expectAsked(model, asked, effort);
      // The work space carries nothing over: the same answer from a used one.
      const again = new Float64Array(model.accelerationSize).fill(Number.NaN);
      starAcceleration(model, work, state, effort, again);
      expect(again).toEqual(acceleration);
    }
  });

  it('agree with legs and planted points moving by prescription', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const random = createRandom(seed);
      for (const footing of ['firm', 'edge', 'point'] as const) {
        const { model, state, effort } = drawStar(random, footing, false);
        const work = createStarWork(model);
        const moving = Float64Array.from(work.base, (v, k) => (k < 10 ? v : between(random, -1, 1)));
        setMovingBase(model, work, moving);
        setPlanted(work, [...Array.from({ length: 9 }, () => between(random, -1, 1))]);
        const acceleration = new Float64Array(model.accelerationSize);
        starAcceleration(model, work, state, effort, acceleration);
        const asked = new Float64Array(model.accelerationSize);
        inverseDynamics(model, work, state, acceleration, effort.subarray(2 * model.gimbals), asked);
        expectAsked(model, asked, effort);
      }
    }
  });
});

describe('mass matrix', () => {
  it('is symmetric, positive definite and gives the kinetic energy of the bodies', () => {
    for (const [footing, isSpatial] of cases) {
      for (let seed = 1; seed <= 10; seed++) {
        const random = createRandom(seed);
        const drawn = drawStar(random, footing, isSpatial);
        const description = {
          ...drawn.description,
          gyros: drawn.description.gyros.map((g) => ({ ...g, spin: 'driven' as const })),
        };
        const model = compileStar(description);
        const work = createStarWork(model);
        const conserved = conservedQuantities(model, work, drawn.state);
        const M = massMatrix(model, work, drawn.state);
        expect(M.clone().sub(M.transpose()).abs().max()).toBeLessThan(1e-12);
        const even = M.clone().add(M.transpose()).mul(0.5);
        expect(new CholeskyDecomposition(even).isPositiveDefinite()).toBe(true);
        const v = Matrix.columnVector(Array.from(drawn.state.slice(model.baseSpeedAt)));
        const half = v.transpose().mmul(M).mmul(v).get(0, 0) / 2;
        expectClose(half, conserved.kinetic, { rel: 1e-13 }, footing); // measured 7e-16
      }
    }
  });
});

/** Moves a state by a small tangent step. */
function moved(model: StarModel, state: Float64Array, k: number, e: number): Float64Array {
  const x = Float64Array.from(state);
  const pose = model.footing.pose;
  const size = pose === 'rolling-ball' ? 5 : model.footing.speeds;
  if (k >= size) x[model.tiltAt + k - size]! += e;
  else if (pose === 'angle') x[0]! += e;
  else if (k < 3) {
    const half = [0, 0, 0];
    half[k] = Math.sin(e / 2);
    const c = Math.cos(e / 2);
    const [w, a, b, d] = Array.from(state.slice(0, 4)) as [number, number, number, number];
    const [p, q, r] = half as [number, number, number];
    x.set([
      w * c - a * p - b * q - d * r,
      w * p + a * c + b * r - d * q,
      w * q - a * r + b * c + d * p,
      w * r + a * q - b * p + d * c,
    ]);
  } else if (pose === 'rolling-ball') x[k + 1]! += e;
  else {
    const [w, a, b, c] = Array.from(state.slice(0, 4)) as [number, number, number, number];
    const R = [
      [1 - 2 * (b * b + c * c), 2 * (a * b - w * c), 2 * (a * c + w * b)],
      [2 * (a * b + w * c), 1 - 2 * (a * a + c * c), 2 * (b * c - w * a)],
      [2 * (a * c - w * b), 2 * (b * c + w * a), 1 - 2 * (a * a + b * b)],
    ];
    for (let j = 0; j < 3; j++) x[4 + j]! += e * R[j]![k - 3]!;
  }
  return x;
}

describe('exact linearisation', () => {
  it.each(cases)(
    'agrees with central differences of the forward kernel on footing %s (spatial: %s)',
    (footing, isSpatial) => {
      for (let seed = 1; seed <= 4; seed++) {
        const random = createRandom(seed);
        const { model, state, effort } = drawStar(random, footing, isSpatial);
        const work = createStarWork(model);
        const { A, B } = linearise(model, work, state, effort);
        const size = A.rows;
        const accelerationRows = model.accelerationSize;
        const f = (x: Float64Array, u: Float64Array): Float64Array => {
          const out = new Float64Array(model.accelerationSize);
          starAcceleration(model, work, x, u, out);
          return out;
        };
        const e = 1e-4;
        const scale = 1 + A.clone().abs().max();
        for (let k = 0; k < size; k++) {
          const [far, up, down, under] = [2 * e, e, -e, -2 * e].map((d) =>
            f(moved(model, state, k, d), effort),
          ) as [Float64Array, Float64Array, Float64Array, Float64Array];
          for (let j = 0; j < accelerationRows; j++) {
            const difference = (8 * (up[j]! - down[j]!) - (far[j]! - under[j]!)) / (12 * e);
            // Fourth-order differences are good to about 1e-10 of the largest entry here: measured 1.2e-10.
            expectClose(
              A.get(size - accelerationRows + j, k),
              difference,
              { abs: 1e-9 * scale },
              `A[${j}, ${k}]`,
            );
          }
        }
        const before = f(state, effort);
        for (let k = 0; k < model.effortSize; k++) {
          const u = Float64Array.from(effort);
          u[k] = u[k]! + 1;
          const after = f(state, u);
          for (let j = 0; j < accelerationRows; j++) {
            const column = after[j]! - before[j]!;
            expectClose(
              B.get(size - accelerationRows + j, k),
              column,
              { abs: 1e-9, rel: 1e-8 },
              `B[${j}, ${k}]`,
            );
          }
        }
      }
    },
  );

  it('has the kinematics of a small turn: pose rows agree with differences of the pose rate', () => {
    for (const [footing, isSpatial] of [
      ['point', false],
      ['rocker', true],
      ['free', false],
    ] as const) {
      const random = createRandom(7);
      const { model, state, effort } = drawStar(random, footing, isSpatial, 1);
      const work = createStarWork(model);
      const { A } = linearise(model, work, state, effort);
      // Two motions a small step apart stay apart by (1 + A dt): compare with the pose rates themselves.
      const rate = (x: Float64Array): Float64Array => {
        const out = new Float64Array(model.stateSize);
        starDerivative(model, work, x, effort, out);
        return out;
      };
      const dt = 1e-4;
      const march = (x: Float64Array): Float64Array => {
        const r = rate(x);
        const mid = rate(x.map((v, j) => v + (dt / 2) * r[j]!));
        return x.map((v, j) => v + dt * mid[j]!);
      };
      const back = (x: Float64Array): Float64Array => {
        const r = rate(x);
        const mid = rate(x.map((v, j) => v - (dt / 2) * r[j]!));
        return x.map((v, j) => v - dt * mid[j]!);
      };
      const e = 1e-4;
      const size = footing === 'rocker' ? 5 : model.footing.speeds;
      for (let k = 0; k < A.columns; k++) {
        const expected = (side: (x: Float64Array) => Float64Array): Float64Array => {
          const plain = side(Float64Array.from(state));
          const apart = side(moved(model, state, k, e));
          // Tangent difference: 2 vec(conj(q) q') for the attitude, body components for a free origin.
          const [w, a, b, c] = Array.from(plain.slice(0, 4)) as [number, number, number, number];
          const [w2, a2, b2, c2] = Array.from(apart.slice(0, 4)) as [number, number, number, number];
          const turn = [
            2 * (w * a2 - a * w2 - b * c2 + c * b2),
            2 * (w * b2 - b * w2 - c * a2 + a * c2),
            2 * (w * c2 - c * w2 - a * b2 + b * a2),
          ];
          const shift = [4, 5, 6].map((j) => apart[j]! - plain[j]!);
          const R = [
            [1 - 2 * (b * b + c * c), 2 * (a * b - w * c), 2 * (a * c + w * b)],
            [2 * (a * b + w * c), 1 - 2 * (a * a + c * c), 2 * (b * c - w * a)],
            [2 * (a * c - w * b), 2 * (b * c + w * a), 1 - 2 * (a * a + b * b)],
          ];
          const inBody = [0, 1, 2].map(
            (j) => R[0]![j]! * shift[0]! + R[1]![j]! * shift[1]! + R[2]![j]! * shift[2]!,
          );
          return Float64Array.from([...turn, ...(footing === 'rocker' ? shift.slice(0, 2) : inBody)]).slice(
            0,
            size,
          );
        };
        const later = expected(march);
        const earlier = expected(back);
        for (let j = 0; j < size; j++) {
          const slope = (later[j]! - earlier[j]!) / (2 * dt * e);
          expectClose(A.get(j, k), slope, { abs: 5e-4 }, `${footing} A[${j}, ${k}]`); // measured 4.9e-5
        }
      }
    }
  });
});
