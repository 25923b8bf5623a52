import { describe, expect, it } from 'vitest';
import { arrayMomentum, compileArray } from '../../../src/core/physics/arrayLaw';
import { timeToTiltLimit } from '../../../src/core/physics/closedForms';
import {
  jacobianMatrix,
  judgeSingularity,
  momentumEnvelope,
  moorePenroseRates,
  pyramidArray,
  robustRates,
  singularForm,
  singularMomentum,
} from '../../../src/core/physics/steeringLaw';
import { expectClose } from '../../support/closeTo';

const degree = Math.PI / 180;
const beta = Math.acos(0.6);
const pyramid = pyramidArray(beta);
const ones = [1, 1, 1, 1];
const at = (...degrees: number[]): number[] => degrees.map((d) => d * degree);
const momentumAt = (array: typeof pyramid, tilt: number[]): Float64Array => {
  const out = new Float64Array(3);
  arrayMomentum(array, tilt, ones, out);
  return out;
};

// Wie, Singularity Analysis and Visualization of Single-Gimbal CMG Systems, JGCD 27(2) 2004, unless said otherwise.
describe('pyramid of four single-gimbal units', () => {
  it('has the published Jacobian at null, and no momentum', () => {
    const A = jacobianMatrix(pyramid, at(0, 0, 0, 0), ones);
    const expected = [-0.6, 0, 0.6, 0, 0, -0.6, 0, 0.6, 0.8, 0.8, 0.8, 0.8];
    expectClose(A.to1DArray(), expected, { abs: 1e-12 }); // measured 1e-16
    expectClose(momentumAt(pyramid, at(0, 0, 0, 0)), [0, 0, 0], { abs: 1e-12 });
  });

  it('has the published momentum at any tilt', () => {
    const d = [0.3, -0.7, 1.1, 2.0] as const;
    const [s, c] = [d.map(Math.sin), d.map(Math.cos)];
    const h = [
      -0.6 * s[0]! - c[1]! + 0.6 * s[2]! + c[3]!,
      c[0]! - 0.6 * s[1]! - c[2]! + 0.6 * s[3]!,
      0.8 * (s[0]! + s[1]! + s[2]! + s[3]!),
    ];
    expectClose(momentumAt(pyramid, [...d]), h, { abs: 1e-12 }); // measured 4e-16
  });

  it('reaches equally far along three axes at acos 0.6', () => {
    expectClose(momentumAt(pyramid, at(-90, 180, 90, 0))[0]!, 3.2, { abs: 1e-9 });
    expectClose(momentumAt(pyramid, at(0, -90, 180, 90))[1]!, 3.2, { abs: 1e-9 });
    expectClose(momentumAt(pyramid, at(90, 90, 90, 90))[2]!, 3.2, { abs: 1e-9 });
  });

  it('reaches as published at atan sqrt 2 (Kurokawa, MEL Report 175, 1998)', () => {
    const skew = pyramidArray(Math.atan(Math.SQRT2));
    expectClose(momentumAt(skew, at(-90, 180, 90, 0))[0]!, 3.15470053838, { abs: 1e-9 });
    expectClose(momentumAt(skew, at(0, -90, 180, 90))[1]!, 3.15470053838, { abs: 1e-9 });
    expectClose(momentumAt(skew, at(90, 90, 90, 90))[2]!, 3.26598632371, { abs: 1e-9 });
  });

  it('has a hyperbolic singularity inside, which null motion can leave', () => {
    const tilt = at(90, 180, -90, 0);
    const form = singularForm(pyramid, tilt, ones);
    expectClose(momentumAt(pyramid, tilt), [0.8, 0, 0], { abs: 1e-8 });
    expectClose(form.eigenvalues, [-0.6, 0.576470588], { abs: 1e-8 });
    expect(form.kind).toBe('hyperbolic');
  });

  it('is saturated along x at (-90, 180, 90, 0): elliptic, rank 2', () => {
    const tilt = at(-90, 180, 90, 0);
    const report = judgeSingularity(jacobianMatrix(pyramid, tilt, ones));
    expect(report.rank).toBe(2);
    expect(report.measure).toBeLessThan(1e-12);
    expectClose(Math.abs(report.weakest[0]), 1, { rel: 1e-12 });
    const form = singularForm(pyramid, tilt, ones);
    expectClose(form.eigenvalues, [0.6, 0.894117647], { abs: 1e-8 });
    expect(form.kind).toBe('elliptic');
    expect(() => singularForm(pyramid, at(0, 0, 0, 0), ones)).toThrow(RangeError);
  });

  it('gives the published least tilt rates at null', () => {
    const A = jacobianMatrix(pyramid, at(0, 0, 0, 0), ones);
    expectClose(moorePenroseRates(A, [1, 0, 0])!, [-0.833333333, 0, 0.833333333, 0], { abs: 1e-8 });
    expectClose(moorePenroseRates(A, [0, 1, 0])!, [0, -0.833333333, 0, 0.833333333], { abs: 1e-8 });
    expectClose(moorePenroseRates(A, [0, 0, 1])!, [0.3125, 0.3125, 0.3125, 0.3125], { abs: 1e-8 });
    expect(moorePenroseRates(jacobianMatrix(pyramid, at(-90, 180, 90, 0), ones), [1, 0, 0])).toBeNull();
  });

  // Nakamura and Hanafusa, ASME JDSMC 108 (1986) 163-171; Bedrossian 1990.
  it('gives the published robust rates, locks along the singular direction and nowhere else', () => {
    const regular = jacobianMatrix(pyramid, at(0, 0, 0, 0), ones);
    const rates = robustRates(regular, [1, 0, 0], 0.1);
    expectClose(rates, [-0.731707317, 0, 0.731707317, 0], { abs: 1e-8 });
    const achieved = (A: typeof regular, r: number[]): number[] =>
      [0, 1, 2].map((j) => r.reduce((sum, x, i) => sum + A.get(j, i) * x, 0));
    expectClose(achieved(regular, rates)[0]!, 0.87804878, { abs: 1e-8 });
    const singular = jacobianMatrix(pyramid, at(-90, 0, 90, 0), ones);
    expectClose(robustRates(singular, [1, 0, 0], 0.1), [0, 0, 0, 0], { abs: 1e-8 });
    const y = robustRates(singular, [0, 1, 0], 0.1);
    expectClose(y, [0.354609929, -0.212765957, 0.354609929, 0.212765957], { abs: 1e-8 });
    const z = robustRates(singular, [0, 0, 1], 0.1);
    expectClose(z, [0, 0.579710145, 0, 0.579710145], { abs: 1e-8 });
    expectClose(achieved(singular, y)[1]!, 0.964539007, { abs: 1e-8 });
    expectClose(achieved(singular, z)[2]!, 0.927536232, { abs: 1e-8 });
  });

  it('null motion leaves the momentum still', () => {
    const tilt = [0.3, -0.7, 1.1, 2.0];
    const A = jacobianMatrix(pyramid, tilt, ones);
    const { nullMotion, rank, measure } = judgeSingularity(A);
    expect([rank, nullMotion.columns]).toEqual([3, 1]);
    expectClose(A.mmul(nullMotion).to1DArray(), [0, 0, 0], { abs: 1e-14 });
    // sqrt(det A A^T) by the determinant itself.
    const S = A.mmul(A.transpose()).to2DArray() as [number, number, number][];
    const [[a, b, c], [d, e, f], [g, h, i]] = S as unknown as [number[], number[], number[]];
    const determinant = a! * (e! * i! - f! * h!) - b! * (d! * i! - f! * g!) + c! * (d! * h! - e! * g!);
    expectClose(measure, Math.sqrt(determinant), { rel: 1e-12 });
  });
});

describe('momentum envelope', () => {
  it('is singular everywhere, the outer one saturated and no tilt goes beyond it', () => {
    const { outer, inner } = momentumEnvelope(pyramid, ones, 8, 12);
    expect(outer.points.length).toBe(3 * 96);
    expect(inner.length).toBe(7);
    // Along u the outer surface is the most any tilt gives: each wheel gives at most |u across its gimbal|.
    for (let k = 0; k < 200; k++) {
      const tilt = [k * 0.37, k * 1.7, k * 2.3, k * 0.11];
      const h = momentumAt(pyramid, tilt);
      for (const u of [
        [1, 0, 0],
        [0, 0, 1],
        [0.6, 0.64, 0.48],
      ] as const) {
        const most = singularMomentum(pyramid, ones, [1, 1, 1, 1], u);
        const along = (v: ArrayLike<number>): number => u[0] * v[0]! + u[1] * v[1]! + u[2] * v[2]!;
        expect(along(h)).toBeLessThanOrEqual(along(most) + 1e-12);
      }
    }
    expectClose(singularMomentum(pyramid, ones, [1, 1, 1, 1], [1, 0, 0]), [3.2, 0, 0], { abs: 1e-12 });
    expectClose(singularMomentum(pyramid, ones, [-1, 1, -1, 1], [1, 0, 0]), [0.8, 0, 0], { abs: 1e-12 });
  });
});

it('time to the gimbal limit under a constant torque: H sin(limit)/torque', () => {
  expectClose(timeToTiltLimit(5, 60 * degree, 2), 2.16506350946, { rel: 1e-10 });
  // The same by marching the law: tilt rate = torque / (H cos tilt).
  let tilt = 0;
  const steps = 20000;
  const dt = 2.16506350946 / steps;
  for (let k = 0; k < steps; k++) {
    const half = tilt + (dt / 2) * (2 / (5 * Math.cos(tilt)));
    tilt += dt * (2 / (5 * Math.cos(half)));
  }
  expectClose(tilt, 60 * degree, { abs: 1e-8 }); // measured 1.2e-9
});

it('a pair of wheels has no measure: it cannot turn the body about three axes', () => {
  const pair = compileArray([
    { gimbalAxis: [0, 1, 0], spinAxis: [0, 0, 1], axialInertia: 1 },
    { gimbalAxis: [0, -1, 0], spinAxis: [0, 0, -1], axialInertia: 1 },
  ]);
  const report = judgeSingularity(jacobianMatrix(pair, [0.3, 0.3], [1, 1]));
  expect([report.measure, report.rank]).toEqual([0, 2]);
});
