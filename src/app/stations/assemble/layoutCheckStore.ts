/** What the layout check shows on the stage and at which tilts it looks. */
import { create } from 'zustand';
import type { LayoutLeftover } from '../../../core/physics';

interface LayoutCheckState {
  /** Momentum envelope on the stage. */
  readonly isEnvelopeShown: boolean;
  readonly areInnerShown: boolean;
  /** Tilts are read at the playhead, or set by hand. */
  readonly isAtPlayhead: boolean;
  /** rad, of each gimbal, when set by hand. */
  readonly tilts: readonly number[];
  /** The fault whose leak stands on the stage. */
  readonly leak: LayoutLeftover['id'] | undefined;
  readonly change: (to: Partial<Omit<LayoutCheckState, 'change'>>) => void;
}

export const useLayoutCheck = create<LayoutCheckState>()((set) => ({
  isEnvelopeShown: false,
  areInnerShown: false,
  isAtPlayhead: true,
  tilts: [],
  leak: undefined,
  change: (to) => set(to),
}));

interface LeakOnStage {
  /** N*m, body; undefined: none is shown. */
  readonly torque: readonly [number, number, number] | undefined;
  /** N*m*s, body, at the tilts set by hand; undefined: as the motion has it. */
  readonly momentum: readonly [number, number, number] | undefined;
}

/** What the open check hands to the stage; empty while it is folded away. */
export const useLayoutOnStage = create<LeakOnStage>()(() => ({ torque: undefined, momentum: undefined }));
