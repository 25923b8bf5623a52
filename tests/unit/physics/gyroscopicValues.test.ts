/** Published gyroscopic values, and the star made to come to them. */
import { describe, expect, it } from 'vitest';
import { arrayTorque, compileArray } from '../../../src/core/physics/arrayLaw';
import {
  fastPrecession,
  gimbalHoldingTorque,
  gyroscopicCouple,
  leastTopSpin,
  nutationRate,
  steadyPrecession,
  tiltForImpulse,
} from '../../../src/core/physics/closedForms';
import { simulateExactly } from '../../../src/core/physics/freeMotion';
import { inverseDynamics } from '../../../src/core/physics/inverseDynamics';
import { linearise } from '../../../src/core/physics/linearisation';
import { rotate3, rotationOf } from '../../../src/core/physics/spatial';
import { liveMatrix, modesOf, starModes } from '../../../src/core/physics/stability';
import {
  compileStar,
  restState,
  type StarDescription,
  type StarGyro,
} from '../../../src/core/physics/starModel';
import { createStarWork } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';

const degree = Math.PI / 180;
const noMass = { mass: 0, com: [0, 0, 0], inertia: [0, 0, 0, 0, 0, 0] } as const;

const axle = 1e-6;

/** A heavy top: one wheel of given inertia about the pivot, its axle along z, locked to a base of no mass. */
function top(m: number, l: number, I3: number, I1: number, g: number): StarDescription {
  const gyro: StarGyro = {
    position: [0, 0, 0],
    gimbalAxis: [1, 0, 0],
    spinAxis: [0, 0, 1],
    frame: noMass,
    wheel: { mass: m, axialInertia: I3, transverseInertia: I1 - m * l * l, centre: [0, 0, l] },
    drive: { kind: 'locked' },
    spin: 'coasting',
  };
  // The axle itself: a hair of inertia about its own axis, or the pivot could not say how fast it turns.
  const base = { mass: 0, com: [0, 0, 0], inertia: [0, 0, axle, 0, 0, 0] } as const;
  return { base, gyros: [gyro], footing: { kind: 'point', point: [0, 0, 0] }, gravity: [0, 0, -g] };
}

describe('fast precession', () => {
  it('a disc on an axle (OpenStax University Physics vol. 1, sec. 11.4)', () => {
    const spin = 20 * 2 * Math.PI;
    const rate = fastPrecession(0.3 * 9.8 * 0.05, ((0.3 * 0.05 ** 2) / 2) * spin);
    expectClose(rate, 3.11943688, { rel: 1e-6 });
    expectClose((2 * Math.PI) / rate, 2.01420498, { rel: 1e-6 });
  });

  it('a demonstration wheel (Giancoli, Physics for Scientists and Engineers, ch. 11)', () => {
    const period = (k: number): number => {
      const I = (0.17 * (k * 0.055) ** 2) / 2;
      return (2 * Math.PI) / fastPrecession(0.17 * 9.8 * k * 0.105, I * 45 * 2 * Math.PI);
    };
    expectClose(period(1), 2.61127288, { rel: 1e-6 });
    expectClose(period(2), 5.22254577, { rel: 1e-6 });
  });
});

// Kibble and Berkshire, Classical Mechanics, 5th ed., ch. 12; Goldstein, ch. 5.
describe('heavy top, exactly', () => {
  const [m, l, I3, I1, g, w3, theta] = [1, 0.1, 0.002, 0.012, 9.81, 200, 60 * degree];

  it('has the two published rates of steady precession, the quick formulae some per cent off', () => {
    const [slow, fast] = steadyPrecession(I1, I3, w3, m * g * l, theta);
    expectClose(slow, 2.5500406064, { rel: 1e-9 });
    expectClose(fast, 64.1166260603, { rel: 1e-9 });
    expectClose(fastPrecession(m * g * l, I3 * w3), 2.4525, { rel: 1e-12 });
    expectClose(1 - 2.4525 / slow, 0.038, { abs: 0.001 });
    expectClose((I3 * w3) / (I1 * Math.cos(theta)) / fast - 1, 0.04, { abs: 0.001 });
  });

  it.each([0, 1])('the star precesses steadily at root %i, round in the sense of its spin', (which) => {
    const description = top(m, l, I3, I1, g);
    const precession = steadyPrecession(I1, I3, w3, m * g * l, theta)[which]!;
    // Body leant by theta about x and turning with the precession about the vertical.
    const up = [0, Math.sin(theta), Math.cos(theta)];
    const w = up.map((u) => precession * u);
    const start = {
      pose: [Math.cos(theta / 2), Math.sin(theta / 2), 0, 0],
      baseSpeeds: w,
      // The axle's hair of inertia carries its share of the momentum along itself.
      wheelSpeed: [w3 - w[2]! * (1 + axle / I3)],
    };
    const motion = simulateExactly(description, start, 2, 200, 1e-13);
    let turned = 0;
    let before = 0;
    motion.time.forEach((_t, k) => {
      const q = motion.pose.map((column) => column[k]!);
      const axle = rotate3(rotationOf(q), [0, 0, 1]);
      expectClose(Math.acos(axle[2]), theta, { abs: 1e-10 }); // measured 5e-15
      const azimuth = Math.atan2(axle[1], axle[0]);
      if (k > 0) turned += ((azimuth - before + 3 * Math.PI) % (2 * Math.PI)) - Math.PI;
      before = azimuth;
    });
    expect(turned).toBeGreaterThan(0); // the spin is positive too
    expectClose(turned, 2 * precession, { rel: 1e-10 }); // measured 3e-14
  });

  it('has the published least spins', () => {
    expectClose(leastTopSpin(I1, I3, m * g * l, theta), 76.7202711153, { rel: 1e-9 });
    expectClose(leastTopSpin(I1, I3, m * g * l, 0), 108.49884792, { rel: 1e-7 });
    expectClose((leastTopSpin(I1, I3, m * g * l, 0) * 30) / Math.PI, 1036.0876, { rel: 1e-7 });
    expectClose(leastTopSpin(0.0009375, 0.000375, 0.3 * 9.81 * 0.05, 0), 62.6418390535, { rel: 1e-8 });
    expectClose((leastTopSpin(0.0009375, 0.000375, 0.3 * 9.81 * 0.05, 0) * 30) / Math.PI, 598.1855, {
      rel: 1e-6,
    });
  });

  it.each([
    [1, 0.1, 0.002, 0.012, 108.49884792],
    [0.3, 0.05, 0.000375, 0.0009375, 62.6418390535],
  ])(
    'the star sleeps just above the critical spin and not below (m = %f)',
    (mass, arm, axial, across, critical) => {
      const model = compileStar(top(mass, arm, axial, across, 9.81));
      const work = createStarWork(model);
      const growth = (spin: number): number => {
        const state = restState(model);
        state[model.wheelSpeedAt] = spin;
        return starModes(model, work, state, new Float64Array(model.effortSize))[0]!.real;
      };
      expect(growth(critical * 0.9999)).toBeGreaterThan(0.05);
      expect(growth(critical * 1.0001)).toBeLessThan(1e-6);
    },
  );
});

describe('nutation', () => {
  it('of a gimballed rotor: H / sqrt(Ia Ib) (Arnold and Maunder, Gyrodynamics, 1961)', () => {
    expectClose(nutationRate(1.5, 0.8, 0.012), 15.3093108924, { rel: 1e-9 });
    expectClose(nutationRate(1.5, 0.8, 0.012) / (2 * Math.PI), 2.4365525039, { rel: 1e-9 });
    const model = compileStar({
      base: { mass: 1, com: [0, 0, 0], inertia: [0.788, 0.3, 0.3, 0, 0, 0] },
      gyros: [
        {
          position: [0, 0, 0],
          gimbalAxis: [0, 1, 0],
          spinAxis: [0, 0, 1],
          frame: { mass: 0.2, com: [0, 0, 0], inertia: [0.009, 0.009, 0.01, 0, 0, 0] },
          wheel: { mass: 0.5, axialInertia: 0.005, transverseInertia: 0.003, centre: [0, 0, 0] },
          drive: { kind: 'free', stiffness: 0, restTilt: 0, damping: 0 },
          spin: 'coasting',
        },
      ],
      footing: { kind: 'edge', point: [0, 0, 0], axis: [1, 0, 0] },
      gravity: [0, 0, 0],
    });
    const state = restState(model);
    state[model.wheelSpeedAt] = 300;
    const modes = starModes(model, createStarWork(model), state, new Float64Array(model.effortSize));
    const fastest = Math.max(...modes.map((mode) => mode.imaginary));
    expectClose(fastest, 15.3093108924, { rel: 1e-9 }); // measured 3e-13
  });

  it('of a free rotor: J_s Omega / J_t (as above)', () => {
    const model = compileStar({
      ...top(1, 0, 0.00045, 0.00024, 0),
      footing: { kind: 'free' },
      base: { mass: 0.1, com: [0, 0, 0], inertia: [0, 0, 1e-6, 0, 0, 0] },
    });
    const state = restState(model);
    state[model.wheelSpeedAt] = (8000 * Math.PI) / 30;
    expectClose(0.00045 * state[model.wheelSpeedAt]!, 0.37699111843, { rel: 1e-10 });
    const modes = starModes(model, createStarWork(model), state, new Float64Array(model.effortSize));
    expectClose(Math.max(...modes.map((mode) => mode.imaginary)), 1570.79632679, { rel: 1e-10 });
  });
});

/** A bare rigid body free in space. */
const rigid = (I: readonly [number, number, number]): StarDescription => ({
  base: { mass: 1, com: [0, 0, 0], inertia: [...I, 0, 0, 0] },
  gyros: [],
  footing: { kind: 'free' },
  gravity: [0, 0, 0],
});

describe('free rigid body', () => {
  it('a thin disc wobbles twice for each turn of its spin at small angles (the plate problem)', () => {
    const ratio = (angle: number): number => {
      // Spin about the body axis 1 rad/s; the axle goes round the momentum at L/I1.
      const across = 2 * Math.tan(angle);
      const motion = simulateExactly(rigid([1, 1, 2]), { baseSpeeds: [across, 0, 1, 0, 0, 0] }, 1, 1, 1e-13);
      const momentum = [across, 0, 2];
      const size = Math.hypot(...momentum);
      const L = momentum.map((x) => x / size);
      const side = [L[2]!, 0, -L[0]!];
      const third = [0, 1, 0];
      const phase = (q: number[]): number => {
        const axle = rotate3(rotationOf(q), [0, 0, 1]);
        const dot = (v: number[]): number => v[0]! * axle[0] + v[1]! * axle[1] + v[2]! * axle[2];
        return Math.atan2(dot(third), dot(side));
      };
      const turn = phase(motion.pose.map((c) => c[1]!)) - phase(motion.pose.map((c) => c[0]!));
      return (((turn % (2 * Math.PI)) + 2 * Math.PI) % (2 * Math.PI)) / 1;
    };
    expectClose(ratio(1e-4), 2, { rel: 1e-7 }); // measured 5e-9, the square of the angle
    expectClose(ratio(8 * degree), 2, { rel: 0.01 }); // measured 0.0098
  });

  it('nods freely in the Euler period (Euler, 1765; ellipticity from memory)', () => {
    const day = 2 * Math.PI;
    const model = compileStar(rigid([1, 1, 1.0032737]));
    const state = restState(model);
    state[model.baseSpeedAt + 2] = day;
    const linear = linearise(model, createStarWork(model), state, new Float64Array(model.effortSize));
    const speeds = linear.names.map((name, k) => (name.endsWith('rate') ? k : -1)).filter((k) => k >= 0);
    const rates = modesOf(linear.A.selection(speeds.slice(0, 3), speeds.slice(0, 3)));
    const slow = Math.max(...rates.map((mode) => mode.imaginary));
    expectClose(day / slow, 305.46, { abs: 0.1 }); // measured 305.465
    expect(liveMatrix(linear).rows).toBe(12);
  });

  it('follows the closed form of an asymmetric body (Landau and Lifshitz, Mechanics, sec. 37)', () => {
    const motion = simulateExactly(rigid([1, 2, 3]), { baseSpeeds: [1, 0, 1, 0, 0, 0] }, 5, 5, 1e-13);
    const at = (k: number): number[] => motion.baseSpeeds.slice(0, 3).map((column) => column[k]!);
    expectClose(at(1), [0.577802472, 0.816176637, 0.882015816], { abs: 1e-8 }); // printed to 9 digits
    expectClose(at(2), [-0.216378369, 0.976309583, 0.825998305], { abs: 1e-8 });
    expectClose(at(5), [-0.16435043, -0.986402016, 0.8219917], { abs: 1e-8 });
    const period = simulateExactly(
      rigid([1, 2, 3]),
      { baseSpeeds: [1, 0, 1, 0, 0, 0] },
      6.935667541032,
      1,
      1e-13,
    );
    expectClose(
      period.baseSpeeds.slice(0, 3).map((c) => c[1]!),
      [1, 0, 1],
      { abs: 1e-10 },
    ); // measured 3e-13
  });
});

describe('couples and reactions', () => {
  it("a ship's rotor in a turn and in pitch (Khurmi and Gupta, Theory of Machines, ch. 14)", () => {
    const I = 3500 * 0.45 ** 2;
    const spin = 3000 * (Math.PI / 30);
    expectClose(I, 708.75, { rel: 1e-12 });
    expectClose(gyroscopicCouple(I, spin, 10 / 100), 22266.038, { rel: 1e-6 });
    expectClose(gyroscopicCouple(I, spin, (6 * degree * 2 * Math.PI) / 40), 3662.616, { rel: 1e-6 });
  });

  it('an impulse of half the momentum asks for 30 degrees of tilt (momentum theorem)', () => {
    expectClose(tiltForImpulse(1, 0.5) / degree, 30, { rel: 1e-12 });
    expect(tiltForImpulse(1, 1.5)).toBeNaN();
  });

  it('output torque and gimbal reaction (Wie, Space Vehicle Dynamics and Control, ch. 7), and the star agrees', () => {
    const tilt = 60 * degree;
    expectClose(gimbalHoldingTorque(2, tilt, 0.4), 0.4, { rel: 1e-12 });
    const array = compileArray([{ gimbalAxis: [0, 1, 0], spinAxis: [0, 0, 1], axialInertia: 0.01 }]);
    const out = new Float64Array(3);
    arrayTorque(array, [tilt], [1.5], [2], [0, 0, 0], out);
    expectClose(Math.abs(out[0]!), 1.5, { rel: 1e-12 });
    const description: StarDescription = {
      base: { mass: 1, com: [0, 0, 0], inertia: [1, 1, 1, 0, 0, 0] },
      gyros: [
        {
          position: [0, 0, 0],
          gimbalAxis: [0, 1, 0],
          spinAxis: [0, 0, 1],
          frame: noMass,
          wheel: { mass: 0.1, axialInertia: 0.01, transverseInertia: 0.01, centre: [0, 0, 0] },
          drive: { kind: 'locked' },
          spin: 'coasting',
        },
      ],
      footing: { kind: 'edge', point: [0, 0, 0], axis: [1, 0, 0] },
      gravity: [0, 0, 0],
    };
    const model = compileStar(description);
    const state = Float64Array.from([0, tilt, 0.4, 0, 200 - 0.4 * Math.sin(tilt)]);
    const asked = new Float64Array(model.accelerationSize);
    // Body held at 0.4 rad/s of roll: what the lock of the gimbal holds is H w cos(tilt), less what the wheel's own
    // transverse inertia of 0.01 adds, which the formula leaves out.
    const own = 0.01 * 0.4 ** 2 * Math.sin(tilt) * Math.cos(tilt);
    inverseDynamics(model, createStarWork(model), state, [0, 0, 0], new Float64Array(6), asked);
    expectClose(Math.abs(asked[1]!), 0.4 - own, { rel: 1e-12 });
  });
});
