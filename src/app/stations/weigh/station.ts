import type { Station } from '../station';
import { WeighSheet } from './WeighSheet';

export const WEIGH: Station = {
  id: 'weigh',
  word: 'Weigh',
  question: 'What does it weigh, where is its centre, how does it fall?',
  mark: (shown) => (shown ? 'holds' : 'notYet'),
  Sheet: WeighSheet,
};
