import { describe, expect, it } from 'vitest';
import { startState } from '../../../src/core/physics/freeMotion';
import { starAcceleration, starDerivative } from '../../../src/core/physics/starDynamics';
import { compileStar } from '../../../src/core/physics/starModel';
import { createStarWork, setPlanted } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';
import { between, createRandom, pick, randomStar, randomStart } from './randomStar';

describe('the quick route for a fixed line', () => {
  it('gives the accelerations of the general kernel, to rounding (seeds 1 to 200)', () => {
    for (let seed = 1; seed <= 200; seed++) {
      const random = createRandom(seed);
      const drawn = randomStar(random, {
        gyros: 1 + Math.floor(random() * 4),
        footing: pick(random, ['edge', 'float'] as const),
        drives: ['servo', 'free', 'locked'],
        spins: ['held', 'coasting', 'driven'],
      });
      const righting = { kind: 'curve', angle: [0, 0.3, 0.7, 1.1], arm: [0, 0.04, 0.05, -0.02] } as const;
      const description = {
        ...drawn,
        footing:
          drawn.footing.kind === 'float' && seed % 2 === 0 ? { ...drawn.footing, righting } : drawn.footing,
        gyros: drawn.gyros.map((g, i) => ({
          ...g,
          drive: i === 1 ? ({ kind: 'servo', input: 'acceleration' } as const) : g.drive,
          friction: { coulomb: 0.01, stiction: 0.02, viscous: 0.003, stribeckRate: 0.5, creepRate: 0.1 },
          drag: { constant: 1e-3, viscous: 1e-5, quadratic: 1e-8 },
        })),
      };
      const model = compileStar(description);
      expect(model.line).not.toBeNull();
      const work = createStarWork(model);
      const state = startState(model, randomStart(random, description, 'angle', 4));
      const effort = Float64Array.from({ length: model.effortSize }, () => between(random, -1, 1));
      const general = new Float64Array(model.accelerationSize);
      starAcceleration(model, work, state, effort, general);
      const quick = new Float64Array(model.stateSize).fill(Number.NaN);
      starDerivative(model, work, state, effort, quick);
      expectClose(quick.slice(0, model.tiltAt), state.slice(model.baseSpeedAt, model.rateAt), { abs: 1e-16 });
      expectClose(
        quick.slice(model.tiltAt, model.baseSpeedAt),
        state.slice(model.rateAt, model.wheelSpeedAt),
        {
          abs: 1e-16,
        },
      );
      const size = general.reduce((most, a) => Math.max(most, Math.abs(a)), 1);
      expectClose(quick.slice(model.baseSpeedAt), general, { abs: 1e-12 * size }, `seed ${seed}`); // measured 6e-14
    }
  });

  it('is left for the general kernel once the line is set to move', () => {
    const random = createRandom(4);
    const description = randomStar(random, {
      gyros: 2,
      footing: 'edge',
      drives: ['free'],
      spins: ['coasting'],
    });
    const model = compileStar(description);
    const work = createStarWork(model);
    const state = startState(model, randomStart(random, description, 'angle'));
    const effort = new Float64Array(model.effortSize);
    setPlanted(work, [0.1, 0.2, 0, 0.3, 0, 0, 0, 2, 0]);
    const general = new Float64Array(model.accelerationSize);
    starAcceleration(model, work, state, effort, general);
    const rate = new Float64Array(model.stateSize);
    starDerivative(model, work, state, effort, rate);
    expect(rate.slice(model.baseSpeedAt)).toEqual(general);
  });
});
