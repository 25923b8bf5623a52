/** Cures of the impossible plan on screen: looked for only once the rig has come to rest. */
import { create } from 'zustand';
import type { Rig } from '../../core/rig';
import type { Cure, Explained, PlanView } from '../../core/trial';

export type CuresState =
  | { readonly kind: 'none' }
  | { readonly kind: 'searching'; readonly explained: Explained | undefined }
  | {
      readonly kind: 'found';
      readonly rig: Rig;
      readonly explained: Explained | undefined;
      readonly cures: readonly Cure[];
    };

export const useCures = create<{ readonly state: CuresState }>()(() => ({ state: { kind: 'none' } }));

export const setCures = (state: CuresState): void => useCures.setState({ state });

/** What a plan that is not there is shown with: by how much it falls short, as soon as that is known. */
export function useSentence(plan: Exclude<PlanView, { kind: 'planned' }>): string {
  const explained = useCures(({ state }) => (state.kind === 'none' ? undefined : state.explained));
  return (plan.kind === 'impossible' && explained?.sentence) || plan.sentence;
}
