/** What the Trial station has found for the rig as it stands. Nothing here is part of the rig. */
import { create } from 'zustand';
import type { Rig } from '../../../core/rig';
import {
  type Comparison,
  type GainOutcome,
  type LargestShove,
  type ManySummary,
  type Surprise,
  type Tolerances,
  type TrialRun,
  USUAL_TOLERANCES,
} from '../../../core/trial';

export interface TrialRunState {
  readonly run: TrialRun;
  readonly gains: GainOutcome;
  readonly isPlanned: boolean;
  /** The rig it was made with. */
  readonly rig: Rig;
}

/** A longer piece of work: not asked, under way, done or stopped with a sentence. */
export type Task<T> =
  | { readonly kind: 'idle' }
  | { readonly kind: 'busy'; readonly done: number; readonly of: number }
  | { readonly kind: 'done'; readonly result: T; readonly seconds: number; readonly rig: Rig }
  | { readonly kind: 'fault'; readonly sentence: string };

export const IDLE = { kind: 'idle' } as const;

export interface ManyChoice {
  readonly runs: number;
  readonly seconds: number;
  /** N*s, 0 for no shoves. */
  readonly shoveMost: number;
  readonly shoveHeight: number;
  readonly tolerances: Tolerances;
}

export interface TrialState {
  readonly shown: TrialRunState | undefined;
  readonly isRunning: boolean;
  readonly fault: string | undefined;
  readonly seed: number;
  readonly isAsDrawn: boolean;
  readonly surprises: readonly Surprise[];
  /** N*s and m of the next shove. */
  readonly impulse: number;
  readonly height: number;
  readonly comparison: Task<readonly Comparison[]>;
  readonly largest: Task<Readonly<Record<'left' | 'right', LargestShove>>>;
  readonly many: Task<ManySummary>;
  readonly choice: ManyChoice;
  readonly set: (change: Partial<Omit<TrialState, 'set'>>) => void;
}

export const useTrial = create<TrialState>()((set) => ({
  shown: undefined,
  isRunning: false,
  fault: undefined,
  seed: 1,
  isAsDrawn: false,
  surprises: [],
  impulse: 0.5,
  height: 0.4,
  comparison: IDLE,
  largest: IDLE,
  many: IDLE,
  choice: { runs: 1000, seconds: 5, shoveMost: 2, shoveHeight: 0.4, tolerances: USUAL_TOLERANCES },
  set: (change) => set(change),
}));
