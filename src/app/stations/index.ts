/** The stations that are built, in job order. A new one is one more entry here. */
import type { StationId } from '../state/session';
import { ASSEMBLE } from './assemble/station';
import { BENCH } from './bench/station';
import { HANDOVER } from './handover/station';
import { PLAN } from './plan/station';
import { SPIN } from './spin/station';
import type { Station } from './station';
import { TRIAL } from './trial/station';
import { WEIGH } from './weigh/station';

export const STATIONS: readonly Station[] = [ASSEMBLE, WEIGH, SPIN, PLAN, TRIAL, BENCH, HANDOVER];

/** All seven words in job order; those without a station are not there yet and say so. */
export const STATION_WORDS: readonly { readonly id: StationId; readonly word: string }[] = [
  { id: 'assemble', word: 'Assemble' },
  { id: 'weigh', word: 'Weigh' },
  { id: 'spin', word: 'Spin up' },
  { id: 'plan', word: 'Plan' },
  { id: 'trial', word: 'Trial' },
  { id: 'bench', word: 'Bench' },
  { id: 'handover', word: 'Hand over' },
];

export const findStation = (id: StationId): Station | undefined =>
  STATIONS.find((station) => station.id === id);
export type { Station, StationMark } from './station';
