/** What the bench has found so far: results of the fits and of balancing. Kept apart from the work, for the station's mark. */
import { create } from 'zustand';
import type { Identification, IdentifyKind } from '../../../core/bench';

export interface FitResult {
  readonly kind: IdentifyKind;
  /** Where it came from, in words. */
  readonly from: string;
  readonly outcome: Identification;
}

interface Findings {
  /** The newest of each kind. */
  readonly fits: Readonly<Partial<Record<IdentifyKind, FitResult>>>;
}

export const useFindings = create<Findings>()(() => ({ fits: {} }));

export const keepFit = (fit: FitResult): void =>
  useFindings.setState(({ fits }) => ({ fits: { ...fits, [fit.kind]: fit } }));
