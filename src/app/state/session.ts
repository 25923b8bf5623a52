/** The session: what is selected, open and switched on. Not part of the rig, not undoable; choices of taste are remembered. */
import { create } from 'zustand';
import type { Switches } from '../../core/trial';
import type { Dimension } from '../../core/units';

export const STATION_IDS = ['assemble', 'weigh', 'spin', 'plan', 'trial', 'bench', 'handover'] as const;
export type StationId = (typeof STATION_IDS)[number];

export interface Selection {
  readonly kind: 'none' | 'body' | 'foot' | 'hip' | 'gyro' | 'payload';
  /** Place in its list; 0 for things there is one of. */
  readonly index: number;
}

export type Theme = 'light' | 'dark' | 'system';
/** `low` spares a weak machine: one pixel per pixel, no shadows, no smoothing. */
export type Quality = 'high' | 'low';

/** Chosen unit of each dimension, by symbol; the usual one where none is chosen. */
export type ChosenUnits = Readonly<Partial<Record<Dimension, string>>>;

/** CSS pixels of the stage's own box that other things lie over; the middle of what is left is where the rig belongs. */
export interface StageInsets {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** What the lower band of the ribbon shows while no ledger line is opened. */
export const LOWER_CURVES = ['moment', 'momentum', 'pressure'] as const;
export type LowerCurves = (typeof LOWER_CURVES)[number];

export interface SessionState {
  readonly station: StationId;
  readonly selection: Selection;
  readonly switches: Switches;
  readonly units: ChosenUnits;
  readonly theme: Theme;
  readonly quality: Quality;
  /** Label of the opened ledger line: two lines may share a name, one for roll and one for pitch, but not a label. */
  readonly openedLine: string | undefined;
  /** Off: an edit of one gyro goes to all that are like it. */
  readonly isEachOnItsOwn: boolean;
  readonly stageInsets: StageInsets;
  readonly lowerCurves: LowerCurves;

  readonly goTo: (station: StationId) => void;
  readonly select: (selection: Selection) => void;
  readonly setSwitches: (change: Partial<Switches>) => void;
  readonly chooseUnit: (dimension: Dimension, symbol: string) => void;
  readonly setTheme: (theme: Theme) => void;
  readonly setQuality: (quality: Quality) => void;
  readonly openLine: (label: string | undefined) => void;
  readonly setEachOnItsOwn: (isEachOnItsOwn: boolean) => void;
  readonly setStageInsets: (insets: StageInsets) => void;
  readonly showCurves: (lowerCurves: LowerCurves) => void;
}

export const NOTHING_SELECTED: Selection = { kind: 'none', index: 0 };

export const useSession = create<SessionState>()((set) => ({
  station: 'assemble',
  selection: NOTHING_SELECTED,
  switches: { isArrayOn: true, isPlanOn: true, isFeedbackOn: true },
  units: {},
  theme: 'system',
  quality: 'high',
  openedLine: undefined,
  isEachOnItsOwn: false,
  stageInsets: { left: 0, right: 0, top: 0, bottom: 0 },
  lowerCurves: 'moment',

  goTo: (station) => set({ station }),
  select: (selection) =>
    set((state) =>
      state.selection.kind === selection.kind && state.selection.index === selection.index
        ? state
        : { selection },
    ),
  setSwitches: (change) => set((state) => ({ switches: { ...state.switches, ...change } })),
  chooseUnit: (dimension, symbol) => set((state) => ({ units: { ...state.units, [dimension]: symbol } })),
  setTheme: (theme) => set({ theme }),
  setQuality: (quality) => set({ quality }),
  openLine: (openedLine) => set({ openedLine }),
  setEachOnItsOwn: (isEachOnItsOwn) => set({ isEachOnItsOwn }),
  setStageInsets: (stageInsets) => set({ stageInsets }),
  showCurves: (lowerCurves) => set({ lowerCurves, openedLine: undefined }),
}));
