import { describe, expect, it } from 'vitest';
import {
  compileRighting,
  rightingArea,
  rightingArm,
  rightingSlope,
} from '../../../src/core/physics/footingFloat';
import { simulateFree } from '../../../src/core/physics/freeMotion';
import { gimbalFrictionTorque, wheelDragTorque } from '../../../src/core/physics/losses';
import type { StarDescription } from '../../../src/core/physics/starModel';
import { expectClose } from '../../support/closeTo';

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
