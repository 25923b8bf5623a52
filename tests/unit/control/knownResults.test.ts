import { Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import {
  findUltimateGain,
  measureTransfer,
  tuneByUltimateGain,
} from '../../../src/core/control/classicTuning';
import {
  findDelayAbscissa,
  limitDelayFirstOrder,
  limitDelaySecondOrder,
  shortestDrivenStick,
  shortestSlidingStick,
} from '../../../src/core/control/delayLimits';
import { findAbscissa, findRootAbscissa } from '../../../src/core/control/linear/spectrum';
import { buildFreeGimbal, judgeFreeGimbal } from '../../../src/core/control/plantModels';
import { expandPidTiltRate, testRouth } from '../../../src/core/control/routh';
import { expectClose } from '../../support/closeTo';

describe('Routh-Hurwitz', () => {
  const bare = { inertia: 1, stiffness: 25, damping: 0, momentum: 1, servoLag: 0 };
  it('judges PID on 1/(s^2 - 25) with kp 60, ki 100 as its roots do; border at kd = 100/35', () => {
    const found = [4, 2.9, 2.8].map((kd) =>
      findRootAbscissa(expandPidTiltRate(bare, { kp: 60, ki: 100, kd })),
    );
    expectClose(found, [-0.4480922, -0.01735715, 0.02320078], { rel: 1e-6 }); // measured 8e-8
    const kinds = [4, 2.9, 2.8].map((kd) => testRouth(expandPidTiltRate(bare, { kp: 60, ki: 100, kd })).kind);
    expect(kinds).toEqual(['stable', 'stable', 'unstable']);
    const border = 100 / 35;
    expectClose(findRootAbscissa(expandPidTiltRate(bare, { kp: 60, ki: 100, kd: border })), 0, {
      abs: 1e-10,
    }); // measured 8e-16
  });
  it('counts right half plane roots of polynomials with known roots, and says border for a whole row of zeros', () => {
    expect(testRouth([1, 6, 11, 6])).toMatchObject({ kind: 'stable' });
    expect(testRouth([1, 0, -7, 6])).toMatchObject({ kind: 'unstable', roots: 2 });
    expect(testRouth([1, 1, 1, 1])).toMatchObject({ kind: 'border' });
    expect(testRouth([1, 2, 2, 4, 11, 10])).toMatchObject({ kind: 'unstable', roots: 2 }); // zero in the column; Ogata, from memory
  });
});

describe('delay limits', () => {
  const abscissa = (gain: number, tau: number): number =>
    findDelayAbscissa(new Matrix([[1]]), new Matrix([[-gain]]), tau);
  /* A coarse grid over the gain, then a fine one about its best. */
  const best = (tau: number): number => {
    let gain = 0.9;
    for (let g = 0.9; g < 3; g += 0.02) if (abscissa(g, tau) < abscissa(gain, tau)) gain = g;
    let found = Number.POSITIVE_INFINITY;
    for (let g = gain - 0.02; g < gain + 0.02; g += 2e-5) found = Math.min(found, abscissa(g, tau));
    return found;
  };
  it('holds an unstable pole by proportional feedback iff p tau < 1 (De Paor and O’Malley 1989)', () => {
    const found = [0.8, 0.95, 1.05, 1.2].map(best);
    expect(found.map((x) => x < 0)).toEqual([true, true, false, false]);
    /* the best is the double root p - 1/tau; a square-root border, so the grid of gains must be fine */
    expectClose(
      found,
      [0.8, 0.95, 1.05, 1.2].map((tau) => 1 - 1 / tau),
      { abs: 1e-4 },
    ); // measured 6e-6
    /* figures of a search on a coarser grid of gains, which can only be worse than the best */
    const coarse = [-0.2445, -0.0482, 0.0517, 0.1693];
    expect(found.map((x, i) => x < coarse[i]!)).toEqual([true, true, true, true]);
    expect(limitDelayFirstOrder(1)).toBe(1);
  });
  it('agrees with the Lambert function on a scalar equation with a complex pair', () => {
    /* x' = -b x(t - 1) at b = pi/2 has the pair +- i pi/2 exactly */
    expectClose(findDelayAbscissa(new Matrix([[0]]), new Matrix([[-Math.PI / 2]]), 1), 0, { abs: 1e-10 }); // measured 4e-15
    /* and at b = 1/e the double real root -1 */
    expectClose(findDelayAbscissa(new Matrix([[0]]), new Matrix([[-Math.exp(-1)]]), 1), -1, { abs: 1e-5 }); // measured 4e-14
  });
  it('gives stick lengths for a reflex delay of 0.1 s (Insperger 2011)', () => {
    expectClose([shortestSlidingStick(0.1, 9.81), shortestDrivenStick(0.1, 9.81)], [0.2943, 0.073575], {
      rel: 1e-8,
    }); // measured 0
  });
  it('bounds lean and lean rate feedback at sqrt(2 / a): some gains hold just below, none of a wide grid above', () => {
    const a = 25;
    const limit = limitDelaySecondOrder(a);
    const canHold = (tau: number): boolean => {
      for (let p = 1.001 * a; p < 1.3 * a; p += 0.01 * a) {
        for (let d = 0.8 * limit; d < 1.4 * limit; d += 0.02 * limit) {
          const free = new Matrix([
            [0, 1],
            [a, 0],
          ]);
          if (
            findDelayAbscissa(
              free,
              new Matrix([
                [0, 0],
                [-p, -a * d],
              ]),
              tau,
              10,
            ) < 0
          )
            return true;
        }
      }
      return false;
    };
    expect([canHold(0.93 * limit), canHold(1.02 * limit)]).toEqual([true, false]);
  });
});

describe('classic tuning', () => {
  const process = { numerator: [1], denominator: [1, 3, 3, 1] };
  it('finds the ultimate gain and period of 1/(s + 1)^3 and Ziegler and Nichols’s gains (1942)', () => {
    const u = findUltimateGain(process, 0.01, 100)!;
    expectClose([u.gain, u.period], [8, 3.62759873], { rel: 1e-8 }); // measured 4e-10
    const t = tuneByUltimateGain(u);
    expectClose([t.kp, t.integralTime, t.derivativeTime], [4.8, 1.81379936, 0.453449841], { rel: 1e-8 }); // measured 2e-9
    expect(findUltimateGain({ numerator: [1], denominator: [1, 1] }, 0.01, 100)).toBeUndefined();
  });
  it('gives the margins of loops solved by hand', () => {
    const margins = measureTransfer({ numerator: [4], denominator: [1, 3, 3, 1] }, 1e-3, 1e3);
    expectClose(margins.gainUp, 2, { rel: 1e-9 }); // measured 6e-15
    /* |L| = 1 where (1 + w^2)^(3/2) = 4; phase there pi - 3 atan(w) */
    const w = Math.sqrt(4 ** (2 / 3) - 1);
    expectClose(
      [margins.phase, margins.delay],
      [Math.PI - 3 * Math.atan(w), (Math.PI - 3 * Math.atan(w)) / w],
      { rel: 1e-9 },
    ); // measured 1e-15
    /* an integrator with delay: gain margin pi / (2 k tau), delay margin pi / (2 k) - tau */
    const lagging = measureTransfer({ numerator: [2], denominator: [1, 0], delay: 0.3 }, 1e-3, 1e2);
    expectClose([lagging.gainUp, lagging.delay], [Math.PI / 1.2, Math.PI / 4 - 0.3], { rel: 1e-9 }); // measured 6e-15
  });
  it('reports both gain limits of a toppling body held by PD with lag', () => {
    /* L = g (s + 5) 12 / ((s^2 - 25)(0.05 s + 1)): s^3/20 + s^2 + (12 g - 1.25) s + 60 g - 25 */
    const m = measureTransfer({ numerator: [12, 60], denominator: [0.05, 1, -1.25, -25] }, 1e-3, 1e4);
    expectClose(m.gainDown, 25 / 60, { rel: 1e-5 }); // measured 3e-8
    expect(m.gainUp).toBe(Number.POSITIVE_INFINITY);
  });
});

describe('passive gimbal', () => {
  const base = {
    inertia: 0.8,
    stiffness: 20,
    damping: 0,
    momentum: 1.5,
    gimbalInertia: 0.012,
    gimbalStiffness: 0.5,
    gimbalDamping: 0,
  };
  it('holds above sqrt(I k2) + sqrt(J k) and not below, by eigenvalues', () => {
    const verdict = judgeFreeGimbal(base);
    if (verdict.kind !== 'holds') throw new Error('must hold');
    expectClose(verdict.least, 1.12235348059, { rel: 1e-10 }); // measured 3e-13
    expectClose(findAbscissa(buildFreeGimbal({ ...base, momentum: verdict.least * 1.001 })), 0, {
      abs: 1e-9,
    }); // measured 1e-12
    expect(findAbscissa(buildFreeGimbal({ ...base, momentum: verdict.least * 0.999 }))).toBeGreaterThan(0.05);
    expect(judgeFreeGimbal({ ...base, momentum: 1.1 }).kind).toBe('too-little-momentum');
  });
  it('never holds with one of the two bottom-heavy', () => {
    expect(judgeFreeGimbal({ ...base, gimbalStiffness: -0.5 })).toMatchObject({ kind: 'impossible' });
    expect(judgeFreeGimbal({ ...base, stiffness: -20 })).toMatchObject({ kind: 'impossible' });
    const found = [0.5, 1.5, 5, 50].map((momentum) =>
      findAbscissa(buildFreeGimbal({ ...base, gimbalStiffness: -0.5, momentum })),
    );
    expectClose(found, [4.16479741, 2.02063645, 0.63039355, 0.06324353], { rel: 1e-6 }); // from memory, recomputed (measured 2e-8)
  });
});
