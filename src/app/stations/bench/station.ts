import { lazySheet } from '../lazySheet';
import type { Station } from '../station';
import { useFindings } from './benchFindings';
import { benchMark } from './benchMark';

export const BENCH: Station = {
  id: 'bench',
  word: 'Bench',
  question: 'What did the real thing do, and what does that say of my numbers?',
  mark: (_, rig) => benchMark(rig),
  onMark: (listener) => useFindings.subscribe(listener),
  Sheet: lazySheet(async () => (await import('./BenchSheet')).BenchSheet),
};
