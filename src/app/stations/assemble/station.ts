import type { Station } from '../station';
import { AssembleSheet } from './AssembleSheet';

export const ASSEMBLE: Station = {
  id: 'assemble',
  word: 'Assemble',
  question: 'What am I building?',
  mark: (shown, rig) => (!shown || rig.array.gyros.length === 0 ? 'notYet' : 'holds'),
  Sheet: AssembleSheet,
};
