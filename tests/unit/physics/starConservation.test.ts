import { describe, expect, it } from 'vitest';
import { conservedQuantities } from '../../../src/core/physics/conserved';
import type { StarFooting } from '../../../src/core/physics/footing';
import { compileFooting } from '../../../src/core/physics/footing';
import { simulateExactly } from '../../../src/core/physics/freeMotion';
import type { StarDescription } from '../../../src/core/physics/starModel';
import { createStarWork } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';
import { createRandom, randomStar, randomStart } from './randomStar';

/** The star without anything that takes energy. */
function withoutLosses(description: StarDescription): StarDescription {
  const footing: StarFooting =
    description.footing.kind === 'float'
      ? {
          ...description.footing,
          linearDamping: 0,
          quadraticDamping: 0,
          heave: { stiffness: 500, damping: 0 },
          pitch: { metacentricHeight: 0.3, damping: 0 },
        }
      : description.footing;
  return {
    ...description,
    footing,
    gyros: description.gyros.map((gyro) =>
      gyro.drive.kind === 'free' ? { ...gyro, drive: { ...gyro.drive, damping: 0 } } : gyro,
    ),
  };
}

const cases: readonly [StarFooting['kind'], boolean][] = [
  ['edge', false],
  ['point', false],
  ['rocker', false],
  ['rocker', true],
  ['float', false],
  ['float', true],
  ['free', false],
  ['firm', false],
];

describe('a star without losses', () => {
  it.each(cases)('keeps its energy on footing %s (spatial: %s)', (footing, isSpatial) => {
    for (let seed = 1; seed <= 3; seed++) {
      const random = createRandom(seed);
      const description = withoutLosses(
        randomStar(random, {
          gyros: 2,
          footing,
          isSpatial,
          drives: ['free', 'servo', 'locked'],
          spins: ['coasting'],
        }),
      );
      const start = randomStart(random, description, compileFooting(description.footing).pose, 0.4);
      const upright =
        footing === 'float' && isSpatial ? { ...start, pose: [1, 0.1, 0.05, 0.02, 0, 0, 0.01] } : start;
      const motion = simulateExactly(description, upright, 1, 1, 1e-12);
      const work = createStarWork(motion.model);
      const first = conservedQuantities(
        motion.model,
        work,
        Float64Array.from(motion.columns, (c) => c[0]!),
      );
      const last = conservedQuantities(motion.model, work, motion.last);
      // Measured: at most 4e-13 of the kinetic energy.
      expectClose(
        last.kinetic + last.potential,
        first.kinetic + first.potential,
        {
          abs: 1e-11 * first.kinetic,
        },
        `seed ${seed}`,
      );
    }
  });

  it('keeps its angular momentum in every direction when free in space without gravity', () => {
    for (let seed = 1; seed <= 5; seed++) {
      const random = createRandom(seed);
      const description = {
        ...randomStar(random, {
          gyros: 3,
          footing: 'free',
          drives: ['free', 'servo'],
          spins: ['coasting', 'held'],
        }),
        gravity: [0, 0, 0] as const,
      };
      const start = randomStart(random, description, 'free');
      const motion = simulateExactly(description, start, 1, 1, 1e-12);
      const work = createStarWork(motion.model);
      const first = conservedQuantities(
        motion.model,
        work,
        Float64Array.from(motion.columns, (c) => c[0]!),
      );
      const last = conservedQuantities(motion.model, work, motion.last);
      expectClose(last.angularMomentum, first.angularMomentum, { abs: 1e-12 }); // measured 5e-14
      expectClose(last.linearMomentum, first.linearMomentum, { abs: 5e-12 }); // measured 2.9e-13
      expect(last.mass).toBe(first.mass);
    }
  });
});
