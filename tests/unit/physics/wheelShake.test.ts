import { describe, expect, it } from 'vitest';
import { unbalanceVibration } from '../../../src/core/physics/balanceGrade';
import { sensorShake } from '../../../src/core/physics/sensorShake';
import { spinRig } from '../../../src/core/physics/spin';
import { shakeFigures } from '../../../src/core/physics/spinDriveFigures';
import { STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const body = { mass: 6, com: [0, 0, 0.3], inertia: [0.2, 0.15, 0.05, 0.01, -0.02, 0.005] } as const;

describe('shake of the sensor', () => {
  it('is the plane formula where force, arm and sensor lie in one plane', () => {
    // Body with principal axes; wheel spinning about z above the centre, sensor above it too.
    const plain = { ...body, inertia: [0.2, 0.2, 0.05, 0, 0, 0] } as const;
    const shake = sensorShake(plain, [0, 0, 0.55], [0, 0, 3], [0, 0, 0.4], 1e-6, 800, 500);
    const plane = unbalanceVibration({
      unbalance: 1e-6,
      speed: 800,
      bodyMass: 6,
      bodyInertia: 0.2,
      wheelLever: 0.25,
      sensorLever: 0.1,
    });
    expectClose(
      [shake.acceleration, shake.rate, shake.force],
      [plane.acceleration, plane.rate, plane.force],
      {
        rel: 1e-12, // measured 2.2e-16
      },
    );
  });

  it('is the greatest found by turning the force round, for any body and axis', () => {
    const [wheelAt, axis, sensorAt] = [
      [0.1, -0.05, 0.5],
      [0.3, -0.5, 0.8],
      [0.02, 0.03, 0.38],
    ] as const;
    const shake = sensorShake(body, wheelAt, axis, sensorAt, 2e-6, 900, 500);
    const n = Math.sqrt(0.3 ** 2 + 0.5 ** 2 + 0.8 ** 2);
    const [a, b, c] = axis.map((x) => x / n) as [number, number, number];
    const [xx, yy, zz, xy, xz, yz] = body.inertia;
    const inertia = [
      [xx, xy, xz],
      [xy, yy, yz],
      [xz, yz, zz],
    ];
    /** Gauss elimination, written apart from the code under test. */
    const solve = (b3: readonly number[]): number[] => {
      const m = inertia.map((row, i) => [...row, b3[i]!]);
      for (let i = 0; i < 3; i++)
        for (let j = 0; j < 3; j++)
          if (j !== i) {
            const k = m[j]![i]! / m[i]![i]!;
            for (let l = 0; l < 4; l++) m[j]![l] = m[j]![l]! - k * m[i]![l]!;
          }
      return m.map((row, i) => row[3]! / row[i]!);
    };
    const cross = (p: readonly number[], q: readonly number[]): number[] => [
      p[1]! * q[2]! - p[2]! * q[1]!,
      p[2]! * q[0]! - p[0]! * q[2]!,
      p[0]! * q[1]! - p[1]! * q[0]!,
    ];
    const size = (p: readonly number[]) => Math.sqrt(p[0]! ** 2 + p[1]! ** 2 + p[2]! ** 2);
    const first = cross([a, b, c], [0, 0, 1]).map((x) => x / Math.sqrt(a * a + b * b));
    const second = cross([a, b, c], first);
    const force = 2e-6 * 900 ** 2;
    let acceleration = 0;
    let rate = 0;
    for (let i = 0; i < 3600; i++) {
      const t = (2 * Math.PI * i) / 3600;
      const f = first.map((x, k) => force * (x * Math.cos(t) + second[k]! * Math.sin(t)));
      const turning = solve(cross([0.1, -0.05, 0.2], f));
      const moved = cross(turning, [0.02, 0.03, 0.08]).map((x, k) => x + f[k]! / 6);
      acceleration = Math.max(acceleration, size(moved));
      rate = Math.max(rate, size(turning) / 900);
    }
    expectClose([shake.acceleration, shake.rate], [acceleration, rate], { rel: 1e-5 }); // measured 4.3e-9
  });

  it('comes with the spin report of a rig, and falls with a finer balance grade', () => {
    const spin = spinRig(STRIDER);
    expect(spin.shakes).toHaveLength(2);
    const finer = spinRig({
      ...STRIDER,
      array: {
        gyros: STRIDER.array.gyros.map((gyro) => ({ ...gyro, wheel: { ...gyro.wheel, balanceGrade: 0.4 } })),
      },
    });
    expectClose(finer.shakes[0]!.acceleration / spin.shakes[0]!.acceleration, 0.4 / 2.5, { rel: 1e-12 }); // measured 3.6e-16
    const outcome = spin.gyros[0]!;
    if (outcome.kind !== 'spun') throw new Error('refused');
    for (const f of shakeFigures(spin.shakes[0]!, outcome.report, 500))
      expect(Number.isFinite(f.value)).toBe(true);
  });
});
