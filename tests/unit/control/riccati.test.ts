import { Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { exponentiate, holdInput, holdNoise } from '../../../src/core/control/linear/exponential';
import { solveDiscreteLyapunov, solveLyapunov } from '../../../src/core/control/linear/lyapunov';
import {
  type RiccatiOutcome,
  solveDiscreteRiccati,
  solveKalman,
  solveRiccati,
} from '../../../src/core/control/linear/riccati';
import { createRandom, drawNormal } from '../../../src/core/control/randomness';
import { expectClose } from '../../support/closeTo';

const solved = (outcome: RiccatiOutcome) => {
  if (outcome.kind === 'failed') throw new Error(outcome.reason);
  return outcome;
};
const matrix = (rows: number[][]): Matrix => new Matrix(rows);
const flat = (m: Matrix): number[] => m.to1DArray();

describe('continuous Riccati equation', () => {
  it('gives Laub 1979, CAREX (Benner, Laub, Mehrmann) example 1.1', () => {
    const s = solved(
      solveRiccati(
        matrix([
          [0, 1],
          [0, 0],
        ]),
        matrix([[0], [1]]),
        matrix([
          [1, 0],
          [0, 2],
        ]),
        matrix([[1]]),
      ),
    );
    expectClose(flat(s.X), [2, 1, 1, 2], { abs: 1e-10 }); // measured 0
  });

  it('gives CAREX example 1.2, semidefinite weight of rank one', () => {
    const s = solved(
      solveRiccati(
        matrix([
          [4, 3],
          [-4.5, -3.5],
        ]),
        matrix([[1], [-1]]),
        matrix([
          [9, 6],
          [6, 4],
        ]),
        matrix([[1]]),
      ),
    );
    const f = 1 + Math.SQRT2;
    expectClose(flat(s.X), [9 * f, 6 * f, 6 * f, 4 * f], { rel: 1e-8 }); // measured 1e-15
  });

  it.each([1, 1e-3, 1e-6])('gives CAREX example 2.1 at epsilon %f (closed form; from memory)', (e) => {
    const s = solved(
      solveRiccati(
        matrix([
          [1, 0],
          [0, -2],
        ]),
        matrix([[e], [0]]),
        matrix([
          [1, 1],
          [1, 1],
        ]),
        matrix([[1]]),
      ),
    );
    const root = Math.sqrt(1 + e * e);
    const x12 = 1 / (2 + root);
    expectClose(flat(s.X), [(1 + root) / (e * e), x12, x12, 0.25 * (1 - e * e * x12 * x12)], { rel: 1e-8 }); // measured 2e-16
  });

  it('gives the double integrator of Anderson and Moore', () => {
    const s = solved(
      solveRiccati(
        matrix([
          [0, 1],
          [0, 0],
        ]),
        matrix([[0], [1]]),
        Matrix.eye(2, 2),
        matrix([[1]]),
      ),
    );
    expectClose(flat(s.K), [1, 1.73205080757], { abs: 1e-9 }); // measured 1e-12
    expectClose(flat(s.X), [1.73205080757, 1, 1, 1.73205080757], { abs: 1e-9 }); // measured 1e-12
  });

  it('gives the inverted pendulum solved by hand (analytic 2 x 2)', () => {
    const a = 12.2625;
    const s = solved(
      solveRiccati(
        matrix([
          [0, 1],
          [a, 0],
        ]),
        matrix([[0], [1]]),
        matrix([
          [10, 0],
          [0, 1],
        ]),
        matrix([[0.1]]),
      ),
    );
    expectClose(flat(s.K), [28.0855498403, 8.13456204603], { rel: 1e-8 }); // measured 2e-12
    expectClose(s.slowest, -3.2189149, { rel: 1e-7 }); // measured 2e-10
  });

  it('says no for a mode that cannot be stabilised', () => {
    const r = solveRiccati(
      matrix([
        [1, 0],
        [0, -1],
      ]),
      matrix([[0], [1]]),
      Matrix.eye(2, 2),
      matrix([[1]]),
    );
    expect(r.kind).toBe('failed');
  });

  it('leaves small residuals on random systems, seed 7', () => {
    const random = createRandom(7);
    for (let trial = 0; trial < 40; trial++) {
      const n = 2 + (trial % 6);
      const draw = (r: number, c: number): Matrix =>
        new Matrix(Array.from({ length: r }, () => Array.from({ length: c }, () => drawNormal(random))));
      const root = draw(n, n);
      const s = solved(solveRiccati(draw(n, n), draw(n, 2), root.mmul(root.transpose()), Matrix.eye(2, 2)));
      expect(s.residual).toBeLessThan(1e-11);
      expect(s.slowest).toBeLessThan(0);
    }
  });
});

describe('discrete Riccati equation', () => {
  it('gives the twin of CAREX 1.2 (DAREX, Benner, Laub, Mehrmann 1995)', () => {
    const s = solved(
      solveDiscreteRiccati(
        matrix([
          [4, 3],
          [-4.5, -3.5],
        ]),
        matrix([[1], [-1]]),
        matrix([
          [9, 6],
          [6, 4],
        ]),
        matrix([[1]]),
      ),
    );
    const f = (1 + Math.sqrt(5)) / 2;
    expectClose(flat(s.X), [9 * f, 6 * f, 6 * f, 4 * f], { rel: 1e-8 }); // measured 2e-16
  });

  it('gives DAREX example 1.2 (Gudmundsson, Kenney, Laub; figures from memory of the collection)', () => {
    const s = solved(
      solveDiscreteRiccati(
        matrix([
          [0.9512, 0],
          [0, 0.9048],
        ]),
        matrix([
          [4.877, 4.877],
          [-1.1895, 3.569],
        ]),
        matrix([
          [0.005, 0],
          [0, 0.02],
        ]),
        matrix([
          [1 / 3, 0],
          [0, 3],
        ]),
      ),
    );
    expectClose(flat(s.X), [0.01045908232097, 0.003224644477419, 0.003224644477419, 0.050397741135643], {
      abs: 1e-13,
    }); // measured 5e-16
  });

  it('gives the double integrator sampled at 0.1 s and the scalar golden ratio', () => {
    const s = solved(
      solveDiscreteRiccati(
        matrix([
          [1, 0.1],
          [0, 1],
        ]),
        matrix([[0.005], [0.1]]),
        Matrix.eye(2, 2),
        matrix([[1]]),
      ),
    );
    expectClose(flat(s.X), [17.83493132, 10.0124922, 10.0124922, 17.85658646], { rel: 1e-7 }); // measured 3e-10
    expectClose(flat(s.K), [0.91707456, 1.63559619], { rel: 1e-7 }); // measured 3e-9
    const one = matrix([[1]]);
    const scalar = solved(solveDiscreteRiccati(one, one, one, one));
    expectClose([scalar.X.get(0, 0), scalar.K.get(0, 0)], [1.61803398875, 0.61803398875], { rel: 1e-10 }); // measured 2e-13
  });

  it('leaves small residuals on random systems, seed 8', () => {
    const random = createRandom(8);
    for (let trial = 0; trial < 40; trial++) {
      const n = 2 + (trial % 6);
      const draw = (r: number, c: number): Matrix =>
        new Matrix(Array.from({ length: r }, () => Array.from({ length: c }, () => drawNormal(random))));
      const root = draw(n, n);
      const s = solved(
        solveDiscreteRiccati(draw(n, n), draw(n, 2), root.mmul(root.transpose()), Matrix.eye(2, 2)),
      );
      expect(s.residual).toBeLessThan(1e-10);
    }
  });

  it('gives the Kalman gain as its dual: a scalar random walk seen with equal noise', () => {
    const one = matrix([[1]]);
    const k = solveKalman(one, one, one, one)!;
    /* P = P/(P+1) + 1, the golden ratio again; gain P/(P+1) */
    expectClose(
      [k.before.get(0, 0), k.gain.get(0, 0), k.after.get(0, 0)],
      [1.61803398875, 0.61803398875, 0.61803398875],
      { rel: 1e-10 },
    ); // measured 2e-13
  });
});

describe('matrix exponential and holds', () => {
  it('turns a rotation and a defective block right', () => {
    const w = 40;
    const e = exponentiate(
      matrix([
        [0, -w],
        [w, 0],
      ]),
    );
    expectClose(flat(e), [Math.cos(w), -Math.sin(w), Math.sin(w), Math.cos(w)], { abs: 1e-12 }); // measured 4e-16
    const d = exponentiate(
      matrix([
        [-3, 1],
        [0, -3],
      ]),
    );
    expectClose(flat(d), [Math.exp(-3), Math.exp(-3), 0, Math.exp(-3)], { rel: 1e-14, abs: 1e-18 }); // measured 2e-17
  });

  it('holds input and noise of a double integrator as the closed forms do', () => {
    const a = matrix([
      [0, 1],
      [0, 0],
    ]);
    const held = holdInput(a, matrix([[0], [1]]), 0.3);
    expectClose(flat(held.transition), [1, 0.3, 0, 1], { abs: 1e-15 }); // measured 0
    expectClose(flat(held.input), [0.045, 0.3], { abs: 1e-15 }); // measured 0
    const q = holdNoise(
      a,
      matrix([
        [0, 0],
        [0, 2],
      ]),
      0.3,
    );
    expectClose(flat(q), [(2 * 0.027) / 3, 0.09, 0.09, 0.6], { rel: 1e-13 }); // measured 2e-16
  });

  it('solves both Lyapunov equations to rounding and refuses unstable ones', () => {
    const a = matrix([
      [-1, 2, 0],
      [0, -3, 1],
      [0.5, 0, -2],
    ]);
    const q = matrix([
      [2, 0.3, 0],
      [0.3, 1, 0],
      [0, 0, 0.5],
    ]);
    const x = solveLyapunov(a, q)!;
    expectClose(flat(Matrix.add(a.mmul(x), x.mmul(a.transpose())).add(q)), new Array(9).fill(0), {
      abs: 1e-14,
    }); // measured 2e-15
    const f = matrix([
      [0.9, 0.2, 0],
      [0, -0.5, 0.1],
      [0.1, 0, 0.3],
    ]);
    const y = solveDiscreteLyapunov(f, q)!;
    expectClose(flat(f.mmul(y).mmul(f.transpose()).add(q).sub(y)), new Array(9).fill(0), { abs: 1e-13 }); // measured 4e-16
    expect(solveLyapunov(matrix([[1]]), matrix([[1]]))).toBeUndefined();
    expect(solveDiscreteLyapunov(matrix([[1.1]]), matrix([[1]]))).toBeUndefined();
  });
});
