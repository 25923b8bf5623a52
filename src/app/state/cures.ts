/** Cures of the impossible plan on screen: looked for only once the rig has come to rest. */
import { create } from 'zustand';
import type { Rig } from '../../core/rig';
import type { Cure } from '../../core/trial';

export type CuresState =
  | { readonly kind: 'none' }
  | { readonly kind: 'searching' }
  | { readonly kind: 'found'; readonly rig: Rig; readonly cures: readonly Cure[] };

export const useCures = create<{ readonly state: CuresState }>()(() => ({ state: { kind: 'none' } }));

export const setCures = (state: CuresState): void => useCures.setState({ state });
