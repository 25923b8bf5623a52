/** What people who build these things see at the bench. Common practice, no source. */
import { describe, expect, it } from 'vitest';
import { type EffortLaw, simulateFree } from '../../../src/core/physics/freeMotion';
import { fallFacts, starModes } from '../../../src/core/physics/stability';
import {
  compileStar,
  restState,
  type StarDescription,
  type StarGyro,
} from '../../../src/core/physics/starModel';
import { createStarWork } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';

/** A body of 3 kg on an edge along x, its centre 0.2 m up, one upright wheel in a gimbal across. */
function onEdge(gyro: Partial<StarGyro>, wheelMass = 0.5, gimbalHeight = 0.2): StarDescription {
  const Js = wheelMass * 0.06 ** 2 * 0.8;
  return {
    base: { mass: 3, com: [0, 0, 0.2], inertia: [0.02, 0.02, 0.015, 0, 0, 0] },
    gyros: [
      {
        position: [0, 0, gimbalHeight],
        gimbalAxis: [0, 1, 0],
        spinAxis: [0, 0, 1],
        frame: { mass: 0.1, com: [0, 0, 0], inertia: [1e-4, 1e-4, 1e-4, 0, 0, 0] },
        wheel: { mass: wheelMass, axialInertia: Js, transverseInertia: 0.55 * Js, centre: [0, 0, 0] },
        drive: { kind: 'free', stiffness: 0, restTilt: 0, damping: 0 },
        spin: 'coasting',
        ...gyro,
      },
    ],
    footing: { kind: 'edge', point: [0, 0, 0], axis: [1, 0, 0] },
  };
}

const weighted = (height: number): Partial<StarGyro> => ({
  frame: { mass: 0.3, com: [0, 0, height], inertia: [1e-4, 1e-4, 1e-4, 0, 0, 0] },
});

function growth(description: StarDescription, speed: number): number {
  const model = compileStar(description);
  const state = restState(model);
  state[model.wheelSpeedAt] = speed;
  return starModes(model, createStarWork(model), state, new Float64Array(model.effortSize))[0]!.real;
}

describe('observations of the trade', () => {
  it('a locked wheel does nothing for static stability, at any speed', () => {
    const locked = onEdge({ drive: { kind: 'locked' } });
    const still = growth(locked, 0);
    const facts = fallFacts(locked);
    expect(facts.kind).toBe('topples');
    if (facts.kind === 'topples') expectClose(facts.rate, still, { rel: 1e-12 });
    for (const speed of [100, 1000, 10000]) expectClose(growth(locked, speed), still, { rel: 1e-12 });
    // sqrt(m g l / I) about the edge.
    const Js = 0.5 * 0.06 ** 2 * 0.8;
    const I = 0.02 + 3 * 0.04 + 1e-4 + 0.1 * 0.04 + 0.55 * Js + 0.5 * 0.04;
    expectClose(still, Math.sqrt((3.6 * 9.80665 * 0.2) / I), { rel: 1e-12 });
  });

  it('weight at the bottom of a free gimbal makes it worse than a balanced gimbal, at any speed', () => {
    for (const speed of [500, 1000, 3000, 10000]) {
      expect(growth(onEdge(weighted(-0.02)), speed)).toBeGreaterThan(0.01);
      expect(growth(onEdge({}), speed)).toBeLessThan(2e-3); // a double zero root, seen to rounding
    }
  });

  it('a top-heavy gimbal holds it, until friction makes it drift away', () => {
    const start = { pose: [0.005], wheelSpeed: [500] };
    const worstRoll = (gyro: Partial<StarGyro>, seconds: number): number => {
      const motion = simulateFree(onEdge({ ...weighted(0.02), ...gyro }), start, seconds, 1e-3, 10);
      return motion.pose[0]!.reduce((worst, x) => Math.max(worst, Math.abs(x)), 0);
    };
    expect(growth(onEdge(weighted(0.02)), 500)).toBeLessThan(1e-6);
    expect(worstRoll({}, 30)).toBeLessThan(0.006); // measured 0.0051 of a start of 0.005
    // Too slow a wheel does not hold it at all.
    expect(growth(onEdge(weighted(0.02)), 100)).toBeGreaterThan(0.5);
    const friction = { coulomb: 2e-3, stiction: 4e-3, viscous: 0.01, stribeckRate: 0.05, creepRate: 0.001 };
    expect(worstRoll({ friction }, 5)).toBeLessThan(0.05); // measured 0.018
    expect(worstRoll({ friction }, 20)).toBeGreaterThan(0.3); // passes 0.3 rad at 18 s
  });

  it('twice the wheel mass at the same speed halves the tilt a shove asks for', () => {
    const tiltAfterShove = (wheelMass: number): number => {
      const single = onEdge({ drive: { kind: 'servo', input: 'acceleration' }, spin: 'held' }, wheelMass, 0)
        .gyros[0]!;
      const opposite: StarGyro = { ...single, gimbalAxis: [0, -1, 0], spinAxis: [0, 0, -1] };
      const pair: StarDescription = {
        ...onEdge({}, wheelMass, 0),
        gyros: [single, opposite],
        gravity: [0, 0, 0],
      };
      // A shove of 0.05 N*m*s over 0.1 s; the gimbals are driven to stop the roll.
      const law: EffortLaw = (time, x, effort) => {
        effort[4] = time < 0.1 ? 0.5 : 0;
        for (const i of [0, 1]) effort[i] = 200 * (40 * x[3]! - x[4 + i]!);
      };
      const motion = simulateFree(pair, { wheelSpeed: [1500, 1500] }, 4, 5e-4, 8000, law);
      expect(Math.abs(motion.baseSpeeds[0]!.at(-1)!)).toBeLessThan(1e-9);
      return Math.sin(motion.tilt[0]!.at(-1)!);
    };
    const light = tiltAfterShove(0.3);
    const heavy = tiltAfterShove(0.6);
    expect(Math.abs(light)).toBeGreaterThan(0.01);
    // The momentum theorem: 2 h sin(tilt) takes the shove up.
    expectClose(light, 0.05 / (2 * 0.3 * 0.06 ** 2 * 0.8 * 1500), { rel: 1e-3 });
    expectClose(light / heavy, 2, { rel: 1e-6 });
  });
});
