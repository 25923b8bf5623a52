/** From a rig to everything a trial needs: compiled, planned, its gains computed. */
import type { Controller } from '../control';
import { compileRig } from '../physics';
import {
  type AxisSchedule,
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  type PlanSetting,
  setUpPlan,
} from '../planning';
import type { Refusal, Rig } from '../rig';
import { computeGains, controllerOf, type GainOutcome } from './gains';

export interface TrialSetup {
  readonly setting: PlanSetting;
  /** Empty when there is no plan: the trial then runs on feedback alone. */
  readonly schedules: readonly AxisSchedule[];
  readonly gains: GainOutcome;
  /** What the rig names or what was computed; undefined where nothing holds it or nothing is asked to. */
  readonly controller: Controller | undefined;
}

export type TrialSetupOutcome =
  | { readonly kind: 'ready'; readonly setup: TrialSetup }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/** Compiles, plans and computes gains. About 0.2 s. */
export function setUpTrial(rig: Rig): TrialSetupOutcome {
  const compiled = compileRig(rig);
  if (compiled.kind === 'refused') return compiled;
  const set = setUpPlan(compiled.compiled);
  if (set.kind === 'refused') return set;
  const plan = attemptRigPlan(set.setting, defaultPlanOptions, createPlanWork());
  const isPlanned = plan.kind === 'planned';
  const setting = isPlanned ? plan.setting : set.setting;
  const gains = computeGains(setting);
  return {
    kind: 'ready',
    setup: {
      setting,
      schedules: isPlanned ? plan.schedules : [],
      gains,
      controller: gains.kind === 'report' ? controllerOf(gains.report) : undefined,
    },
  };
}
