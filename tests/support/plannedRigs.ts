/** Rigs planned for tests: laid out anew, given something to live through, and planned with every limit checked. */
import { expect } from 'vitest';
import { type CompiledRig, compileRig } from '../../src/core/physics';
import {
  createPlanWork,
  defaultPlanOptions,
  planRig,
  type RigPlan,
  setUpPlan,
} from '../../src/core/planning';
import { checkPlanLimits, isWithinLimits } from '../../src/core/planning/momentumPlanCheck';
import { type Disturbance, type Layout, layOut, type Rig } from '../../src/core/rig';

export type Planned = Extract<RigPlan, { kind: 'planned' }>;

export function compiledOf(rig: Rig): CompiledRig {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') throw new Error(JSON.stringify(outcome.refusals));
  return outcome.compiled;
}

export function planOf(rig: Rig) {
  const set = setUpPlan(compiledOf(rig));
  if (set.kind === 'refused') throw new Error(JSON.stringify(set.refusals));
  return planRig(set.setting, defaultPlanOptions, createPlanWork());
}

/** The plan of a rig that has one, every limit of it checked on a grid five times finer. */
export function heldPlanOf(rig: Rig): Planned {
  const outcome = planOf(rig);
  if (outcome.kind !== 'planned') throw new Error(`${rig.name} has no plan: ${outcome.kind}`);
  const { problem } = outcome.setting;
  const limits = checkPlanLimits(problem, outcome.schedules, 5);
  expect(isWithinLimits(problem, limits, 1e-7), JSON.stringify(limits)).toBe(true);
  return outcome;
}

/** The rig with its first wheel in another layout; a pyramid at the skew whose momentum is nearly a sphere. */
export function withLayout(rig: Rig, layout: Layout, spacing = 0.13): Rig {
  const pattern = rig.array.gyros[0];
  if (!pattern) throw new Error('the rig has a wheel to lay out');
  const skew = (54.74 * Math.PI) / 180;
  return {
    ...rig,
    array: { gyros: [...layOut(layout, pattern, { centre: pattern.position, spacing, skew })] },
  };
}

export const withSequence = (rig: Rig, sequence: readonly Disturbance[]): Rig => ({
  ...rig,
  jobs: { ...rig.jobs, sequence: [...sequence] },
});

export const standing = (rig: Rig): Rig => ({ ...rig, jobs: { ...rig.jobs, gait: { kind: 'stand' } } });
