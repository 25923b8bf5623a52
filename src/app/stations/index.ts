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

export const findStation = (id: StationId): Station | undefined =>
  STATIONS.find((station) => station.id === id);
export type { Station, StationMark } from './station';
