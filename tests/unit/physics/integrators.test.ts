import { Solver } from 'odex';
import { describe, expect, it } from 'vitest';
import { conservedQuantities } from '../../../src/core/physics/conserved';
import { simulateFree, startState } from '../../../src/core/physics/freeMotion';
import {
  createRk4Work,
  type Derivative,
  integrateAdaptively,
  stepEuler,
  stepRk4,
} from '../../../src/core/physics/integrators';
import { settleState, starDerivative } from '../../../src/core/physics/starDynamics';
import { compileStar, type StarDescription } from '../../../src/core/physics/starModel';
import { createStarWork } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';
import { createRandom, randomStar, randomStart } from './randomStar';

const asymmetric: StarDescription = {
  base: { mass: 1, com: [0, 0, 0], inertia: [1, 2, 3, 0, 0, 0] },
  gyros: [],
  footing: { kind: 'free' },
  gravity: [0, 0, 0],
};

/** Kepler's ellipse of eccentricity 0.6: closes after 2 pi, and asks for steps of very different size. */
const kepler: Derivative = (_t, x, out) => {
  const r3 = Math.hypot(x[0]!, x[1]!) ** 3;
  out[0] = x[2]!;
  out[1] = x[3]!;
  out[2] = -x[0]! / r3;
  out[3] = -x[1]! / r3;
};
const perihelion = (): Float64Array => Float64Array.from([0.4, 0, 0, 2]);

describe('RK4', () => {
  it('has order four on the asymmetric body of Landau and Lifshitz, sec. 37: halving divides the error by 16', () => {
    const exact = simulateFree(asymmetric, { baseSpeeds: [1, 0, 1, 0, 0, 0] }, 5, 5 / 6400);
    const errors = [50, 100, 200, 400].map((steps) => {
      const run = simulateFree(asymmetric, { baseSpeeds: [1, 0, 1, 0, 0, 0] }, 5, 5 / steps, steps);
      return Math.hypot(...[7, 8, 9].map((k) => run.last[k]! - exact.last[k]!));
    });
    // Halving ratios 16.03, 16.02, 16.01 by numerical analysis (from memory); measured the same.
    const ratios = [0, 1, 2].map((k) => errors[k]! / errors[k + 1]!);
    for (const ratio of ratios) expect(Math.abs(ratio - 16)).toBeLessThan(0.5);
  });

  it('has order four on a star with wheels', () => {
    const random = createRandom(5);
    const star = randomStar(random, { gyros: 2, footing: 'point', drives: ['free'], spins: ['coasting'] });
    const start = randomStart(random, star, 'attitude', 0.3);
    const run = (steps: number): Float64Array => simulateFree(star, start, 0.2, 0.2 / steps, steps).last;
    const exact = run(12800);
    const errors = [400, 800, 1600].map((steps) => Math.hypot(...run(steps).map((x, k) => x - exact[k]!)));
    for (const k of [0, 1]) expect(Math.abs(errors[k]! / errors[k + 1]! - 16)).toBeLessThan(1.5);
  });
});

describe('explicit Euler', () => {
  it('makes energy out of nothing on a gyro, where RK4 at the same step does not', () => {
    const random = createRandom(3);
    const star = randomStar(random, { gyros: 1, footing: 'point', drives: ['locked'], spins: ['coasting'] });
    const model = compileStar(star);
    const work = createStarWork(model);
    const effort = new Float64Array(model.effortSize);
    const start = startState(model, randomStart(random, star, 'attitude', 0.3));
    const derivative: Derivative = (_t, x, out) => starDerivative(model, work, x, effort, out);
    const energy = (x: Float64Array): number => {
      const { kinetic, potential } = conservedQuantities(model, work, x);
      return kinetic + potential;
    };
    const gainOf = (step: typeof stepRk4): number => {
      const rk = createRk4Work(model.stateSize);
      const x = Float64Array.from(start);
      for (let k = 0; k < 1000; k++) {
        step(derivative, k * 1e-3, x, 1e-3, rk);
        settleState(model, x);
      }
      return energy(x) - energy(start);
    };
    const euler = gainOf(stepEuler);
    const rk4 = gainOf(stepRk4);
    expect(euler).toBeGreaterThan(0.01); // J in one second
    expect(Math.abs(rk4)).toBeLessThan(1e-6 * euler);
  });
});

describe('adaptive eighth order', () => {
  it('closes an ellipse, and error follows the tolerance', () => {
    const errorAt = (tolerance: number): number => {
      const x = perihelion();
      const outcome = integrateAdaptively(kepler, 0, 2 * Math.PI, x, {
        absolute: tolerance,
        relative: tolerance,
      });
      expect(outcome.kind).toBe('reached');
      return Math.hypot(...x.map((v, k) => v - perihelion()[k]!));
    };
    expect(errorAt(1e-8)).toBeLessThan(2e-6); // measured 4.5e-7
    expect(errorAt(1e-13)).toBeLessThan(1e-10); // measured 2.1e-11
  });

  it('takes one step with error of ninth order', () => {
    const exact = (h: number): Float64Array => {
      const x = perihelion();
      integrateAdaptively(kepler, 0, h, x, { absolute: 1e-15, relative: 1e-15 });
      return x;
    };
    const oneStep = (h: number): number => {
      const x = perihelion();
      integrateAdaptively(kepler, 0, h, x, { absolute: 1, relative: 1, firstStep: h });
      return Math.hypot(...x.map((v, k) => v - exact(h)[k]!));
    };
    const order = Math.log2(oneStep(0.06) / oneStep(0.03));
    expect(order).toBeGreaterThan(8.5); // measured 8.84
    expect(order).toBeLessThan(9.5);
  });

  it('agrees with the independent extrapolation code odex', () => {
    const solver = new Solver(4);
    solver.absoluteTolerance = 1e-12;
    solver.relativeTolerance = 1e-12;
    const out = new Float64Array(4);
    const rhs = (_t: number, x: number[]): number[] => {
      kepler(0, Float64Array.from(x), out);
      return Array.from(out);
    };
    const theirs = solver.solve(rhs, 0, [...perihelion()], 3).y;
    const x = perihelion();
    integrateAdaptively(kepler, 0, 3, x, { absolute: 1e-13, relative: 1e-13 });
    expectClose(x, theirs, { abs: 1e-10 });
  });

  it('goes back the way it came', () => {
    const x = perihelion();
    integrateAdaptively(kepler, 0, 3, x, { absolute: 1e-13, relative: 1e-13 });
    integrateAdaptively(kepler, 3, 0, x, { absolute: 1e-13, relative: 1e-13 });
    expectClose(x, perihelion(), { abs: 1e-10 });
  });

  it('says when it gives up: a wall in the motion, or too many steps', () => {
    const wall: Derivative = (_t, x, out) => {
      out[0] = x[0]! * x[0]!;
    };
    const tolerance = { absolute: 1e-10, relative: 1e-10 };
    const blown = integrateAdaptively(wall, 0, 2, Float64Array.from([1]), tolerance);
    expect(blown.kind).toBe('gave-up');
    if (blown.kind === 'gave-up') expectClose(blown.time, 1, { abs: 1e-3 });
    const few = integrateAdaptively(kepler, 0, 100, perihelion(), { ...tolerance, mostSteps: 3 });
    expect(few).toMatchObject({ kind: 'gave-up', reason: 'too many steps' });
  });
});
