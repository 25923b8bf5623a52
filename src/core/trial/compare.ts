/** The same trial with parts of the rig switched off, side by side. */
import type { Switches } from './evaluation';
import { runTrial, type TrialRequest, type TrialRun } from './trialRun';
import type { TrialSetup } from './trialSetup';

export const COMPARED = ['off', 'locked', 'plan', 'feedback', 'both'] as const;
export type Compared = (typeof COMPARED)[number];

const SWITCHES: Readonly<Record<Compared, Switches>> = {
  off: { isArrayOn: false, isPlanOn: false, isFeedbackOn: false },
  locked: { isArrayOn: false, isPlanOn: false, isFeedbackOn: false },
  plan: { isArrayOn: true, isPlanOn: true, isFeedbackOn: false },
  feedback: { isArrayOn: true, isPlanOn: false, isFeedbackOn: true },
  both: { isArrayOn: true, isPlanOn: true, isFeedbackOn: true },
};

export interface Comparison {
  readonly name: Compared;
  readonly run: TrialRun;
}

/**
 * Runs all five: wheels at rest, wheels turning in locked gimbals, plan only, feedback only, both.
 *
 * @param names  which; all when left out
 */
export function compareTrials(
  setup: TrialSetup,
  request: TrialRequest,
  names: readonly Compared[] = COMPARED,
): readonly Comparison[] {
  return names.map((name) => ({
    name,
    run: runTrial(setup.setting, setup.schedules, {
      ...request,
      controller: setup.controller,
      switches: SWITCHES[name],
      build: name === 'off' ? { ...request.build, wheelSpeed: 0 } : request.build,
    }),
  }));
}
