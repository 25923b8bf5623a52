import { lazySheet } from '../lazySheet';
import type { Station } from '../station';

export const WEIGH: Station = {
  id: 'weigh',
  word: 'Weigh',
  question: 'What does it weigh, where is its centre, how does it fall?',
  mark: (shown) => (shown ? 'holds' : 'notYet'),
  Sheet: lazySheet(async () => (await import('./WeighSheet')).WeighSheet),
};
