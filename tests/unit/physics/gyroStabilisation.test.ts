/**
 * A toppling body held by a wheel in a free gimbal. Thomson and Tait, Treatise on Natural Philosophy (1879), sec. 345;
 * Chetaev, Stability of Motion (1961); Merkin, Introduction to the Theory of Stability (1997); Bloch, Krishnaprasad,
 * Marsden and Ratiu (1994).
 */
import { Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import {
  judgePassiveGimbal,
  laggedTiltLoopPolynomial,
  largestShove,
  leastPassiveMomentum,
  passiveGimbalPolynomial,
  tiltLoopPolynomial,
} from '../../../src/core/physics/closedForms';
import { type EffortLaw, simulateFree } from '../../../src/core/physics/freeMotion';
import { type Mode, modesOf, starModes } from '../../../src/core/physics/stability';
import { compileStar, restState, type StarDescription } from '../../../src/core/physics/starModel';
import { createStarWork } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';

const [I1, I2, k1] = [0.8, 0.012, 20];
const g = 9.81;
const Js = 0.005;

/**
 * A star with exactly these: roll inertia I1, toppling stiffness k1 and damping d1 by way of a float with a negative
 * metacentric height; gimbal inertia I2 and toppling stiffness k2 by a frame's weight above (below) its axis.
 */
function rollAndGimbal(k2: number, d1 = 0, d2 = 0): StarDescription {
  const frameMass = 0.5;
  const d = k2 / (frameMass * g);
  const Jt = 0.003;
  const Iyy = I2 - Jt - frameMass * d * d;
  const weight = (3 + frameMass) * g;
  return {
    base: { mass: 3, com: [0, 0, 0], inertia: [I1 - I2, 0.5, 0.5, 0, 0, 0] },
    gyros: [
      {
        position: [0, 0, 0],
        gimbalAxis: [0, 1, 0],
        spinAxis: [0, 0, 1],
        frame: { mass: frameMass, com: [0, 0, d], inertia: [Iyy, Iyy, 0.004, 0, 0, 0] },
        wheel: { mass: 0, axialInertia: Js, transverseInertia: Jt, centre: [0, 0, 0] },
        drive: { kind: 'free', stiffness: 0, restTilt: 0, damping: d2 },
        spin: 'coasting',
      },
    ],
    footing: {
      kind: 'float',
      freedoms: 'roll',
      point: [0, 0, 0],
      righting: { kind: 'metacentric', metacentricHeight: -k1 / weight },
      addedInertia: 0,
      linearDamping: d1,
      quadraticDamping: 0,
    },
    gravity: [0, 0, -g],
  };
}

function modesAt(description: StarDescription, H: number): Mode[] {
  const model = compileStar(description);
  const state = restState(model);
  state[model.wheelSpeedAt] = H / Js;
  return starModes(model, createStarWork(model), state, new Float64Array(model.effortSize));
}

/** Roots of a polynomial, highest power first, by its companion matrix. */
function rootsOf(coefficients: readonly number[]): Mode[] {
  const n = coefficients.length - 1;
  const C = Matrix.zeros(n, n);
  for (let k = 0; k < n; k++) {
    C.set(0, k, -coefficients[k + 1]! / coefficients[0]!);
    if (k > 0) C.set(k, k - 1, 1);
  }
  return modesOf(C);
}

const swings = (modes: Mode[]): number[] =>
  modes
    .map((mode) => mode.imaginary)
    .filter((w) => w > 1e-3)
    .sort((a, b) => b - a);
const growth = (modes: Mode[]): number => modes[0]!.real;

describe('free gimbal on a toppling body', () => {
  it('has the published characteristic polynomial and frequencies, in closed form and in the star', () => {
    expectClose(passiveGimbalPolynomial(I1, I2, k1, 0.5, 1.5), [0.0096, 0, 1.61, 0, 10], { abs: 1e-12 });
    const expected = [12.6983588551, 2.541656098];
    const verdict = judgePassiveGimbal(I1, I2, k1, 0.5, 1.5);
    expect(verdict.kind).toBe('held');
    if (verdict.kind !== 'held') return;
    expectClose([verdict.fast, verdict.slow], expected, { rel: 1e-9 });
    expectClose(verdict.fast * verdict.slow, 32.2748612184, { rel: 1e-10 });
    const star = modesAt(rollAndGimbal(0.5), 1.5);
    expectClose(swings(star), expected, { rel: 1e-9 }); // measured 8e-12
    expect(growth(star)).toBeLessThan(1e-9);
  });

  it('needs the published least momentum, and the star agrees just above and just below', () => {
    expectClose(leastPassiveMomentum(I1, I2, k1, 0.5), 1.12235348059, { rel: 1e-10 });
    expectClose([Math.sqrt(I1 * 0.5), Math.sqrt(I2 * k1)], [0.63245553203, 0.48989794856], { rel: 1e-10 });
    const critical = 1.12235348059;
    expectClose(swings(modesAt(rollAndGimbal(0.5), 1.001 * critical)), [5.9431, 5.4307], { abs: 1e-4 });
    expectClose(growth(modesAt(rollAndGimbal(0.5), 0.999 * critical)), 0.2560769, { rel: 1e-6 }); // measured 9e-8, printed to 7 digits
    expect(judgePassiveGimbal(I1, I2, k1, 0.5, 0.999 * critical)).toEqual({
      kind: 'falls',
      why: 'too little momentum',
    });
  });

  it('bottom-heavy gimbal: one root stays positive at any momentum', () => {
    const expected = [4.16479741, 2.02063645, 0.63039355, 0.06324353];
    const found = [0.5, 1.5, 5, 50].map((H) => growth(modesAt(rollAndGimbal(-0.5), H)));
    expectClose(found, expected, { rel: 1e-7 }); // measured 2e-8, printed to 9 digits
    const closed = [0.5, 1.5, 5, 50].map((H) =>
      growth(rootsOf(passiveGimbalPolynomial(I1, I2, k1, -0.5, H))),
    );
    expectClose(closed, expected, { rel: 1e-7 });
    expect(judgePassiveGimbal(I1, I2, k1, -0.5, 50)).toEqual({
      kind: 'falls',
      why: 'gimbal does not topple',
    });
  });

  it('damping destroys it, slowly', () => {
    const cases = [
      [0.05, 0.005],
      [0.05, 0],
      [0, 0.005],
    ] as const;
    const expected = [0.05202185, 0.00971611, 0.04232784];
    expectClose(
      cases.map(([d1, d2]) => growth(modesAt(rollAndGimbal(0.5, d1, d2), 1.5))),
      expected,
      { rel: 1e-6 },
    );
    const closed = cases.map(([d1, d2]) =>
      growth(rootsOf(passiveGimbalPolynomial(I1, I2, k1, 0.5, 1.5, d1, d2))),
    );
    expectClose(closed, expected, { rel: 1e-6 });
  });

  it('neutral gimbal: a double zero root, the body swings; a standing tilt makes the gimbal run away', () => {
    const modes = modesAt(rollAndGimbal(0), 1.5);
    expectClose(Math.max(...swings(modes)), 14.46979613, { rel: 1e-7 });
    expectClose(leastPassiveMomentum(I1, I2, k1, 0), 0.48989795, { rel: 1e-7 });
    expect(growth(modesAt(rollAndGimbal(0), 0.48))).toBeGreaterThan(0.5);
    // The gimbal's drift under a standing lean: at k1 lean / H about the mean, to first order.
    const lean = 1e-4;
    const motion = simulateFree(rollAndGimbal(0), { pose: [lean], wheelSpeed: [1.5 / Js] }, 20, 1e-3, 1000);
    const tilt = motion.tilt[0]!;
    const early = tilt[10]! - tilt[5]!;
    const late = tilt[20]! - tilt[15]!;
    expect(Math.abs(late)).toBeGreaterThan(1e-3);
    expectClose(late, early, { rel: 0.05 }); // measured 0.4 %: steady drift, no return
  });

  it('unit-mass form: held if and only if g > sqrt a + sqrt b', () => {
    expectClose(leastPassiveMomentum(1, 1, 1, 4), 3, { rel: 1e-14 });
    expectClose(growth(rootsOf(passiveGimbalPolynomial(1, 1, 1, 4, 2.99))), 0.1223723825, { rel: 1e-8 });
    expect(growth(rootsOf(passiveGimbalPolynomial(1, 1, 1, 4, 3.01)))).toBeLessThan(1e-8);
  });
});

describe('tilt loop closed over the star', () => {
  const h = 1.5;
  const body: StarDescription = {
    ...rollAndGimbal(0),
    gyros: [
      {
        ...rollAndGimbal(0).gyros[0]!,
        frame: { mass: 0.5, com: [0, 0, 0], inertia: [0.009, 0.009, 0.004, 0, 0, 0] },
        drive: { kind: 'servo', input: 'acceleration' },
        spin: 'held',
      },
    ],
  };

  it('PID from roll to tilt: P damps, I stiffens, D adds inertia', () => {
    const gains = { Kp: 3, Ki: 40, Kd: 0.2 };
    const [a, b, c] = tiltLoopPolynomial(I1, k1, h, gains);
    expect([a, b, c]).toEqual([I1 + h * 0.2, h * 3, h * 40 - k1]);
    // The star under tilt = Kp x + Ki int x + Kd x', so tilt'' = Kp x'' + Ki x' + Kd x''' by its exact loop:
    // state (x, x', tilt, tilt') with tilt' = Kp x' + Ki x + Kd x''; the torque is h tilt' on the body.
    const loop = rootsOf([a, b, c]);
    const model = compileStar(body);
    const law: EffortLaw = (_time, x, effort) => {
      // Servo made fast: tilt rate driven to its command in 0.1 ms. Roll is against the torque: h about -x.
      const roll = x[0]!;
      const rollRate = x[2]!;
      const T = 1e-4;
      const rate = x[3]!;
      // x'' from the loop itself, the servo's momentum change included: I x'' = k sin x - h rate.
      const rollRateRate = (k1 * Math.sin(roll) - h * rate) / I1;
      effort[0] = (gains.Kp * rollRate + gains.Ki * roll + gains.Kd * rollRateRate - rate) / T;
    };
    expect(model.footing.speeds).toBe(1);
    const motion = simulateFree(body, { pose: [1e-6], wheelSpeed: [h / Js] }, 1, 2e-5, 500, law);
    // Follow the closed form from the state just after the servo has caught up.
    const w = loop[0]!;
    expect(w.imaginary).toBeGreaterThan(0);
    const [roll, rate] = [motion.pose[0]!, motion.baseSpeeds[0]!];
    const [x0, v0] = [roll[10]!, rate[10]!];
    for (const k of [30, 60, 100]) {
      const t = motion.time[k]! - motion.time[10]!;
      const e = Math.exp(w.real * t);
      const sine = (v0 - w.real * x0) / w.imaginary;
      const closed = e * (x0 * Math.cos(w.imaginary * t) + sine * Math.sin(w.imaginary * t));
      expectClose(roll[k]!, closed, { abs: 1e-8 }); // of a start of 1e-6; measured 3e-10, the servo's lag
    }
  });

  it('a servo lag takes from the damping: critical where h Kp = k T plus what the stiffness asks', () => {
    const gains = { Kp: 3, Ki: 40, Kd: 0.2 };
    const slow = rootsOf(laggedTiltLoopPolynomial(I1, k1, h, gains, 0.2));
    const fast = rootsOf(laggedTiltLoopPolynomial(I1, k1, h, gains, 0.01));
    expect(growth(slow)).toBeGreaterThan(0);
    expect(growth(fast)).toBeLessThan(0);
    expectClose(laggedTiltLoopPolynomial(I1, k1, h, gains, 0), [0, 1.1, 4.5, 40], { abs: 1e-12 });
  });
});

describe('largest survivable shove', () => {
  it('tends to the momentum itself for a strong torque, and is the least impulse that topples the star', () => {
    expectClose(largestShove(2, 1e9, 5), 2, { rel: 1e-8 });
    expectClose(largestShove(2, 3, 0), 2, { rel: 1e-15 });
    // k = 20, I = 0.8, a = 5: torque M against the shove until momentum dH is used up, linear body.
    const [M, dH, a] = [3, 0.6, 5];
    const shove = largestShove(dH, M, a);
    const outcome = (impulse: number): number => {
      // Body alone, its fall in closed form: unstable part p = x a + v, p' = a p - M/I while the torque lasts.
      const used = dH / M;
      let p = impulse / I1;
      const steps = 100000;
      for (let k = 0; k < steps; k++) {
        const half = p + (used / steps / 2) * (a * p - M / I1);
        p += (used / steps) * (a * half - M / I1);
      }
      return p;
    };
    expect(outcome(shove * 1.0001)).toBeGreaterThan(0);
    expect(outcome(shove * 0.9999)).toBeLessThan(0);
  });
});
