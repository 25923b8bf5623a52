import type { ComponentType } from 'react';
import type { Rig } from '../../core/rig';
import type { StationId } from '../state/session';
import type { Evaluated } from '../state/stream';

/** Where the job stands at a station. */
export type StationMark = 'notYet' | 'holds' | 'fails';

/** One station: its word along the top, its mark, and the sheet at the left. */
export interface Station {
  readonly id: StationId;
  readonly word: string;
  /** The question it answers. */
  readonly question: string;
  readonly mark: (shown: Evaluated | undefined, rig: Rig) => StationMark;
  /** Calls when the mark may have changed though rig and evaluation have not; returns the way out. */
  readonly onMark?: (listener: () => void) => () => void;
  readonly Sheet: ComponentType;
}
