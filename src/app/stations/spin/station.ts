import { lazySheet } from '../lazySheet';
import type { Station } from '../station';
import { useSpinChoices } from './spinChoices';
import { spinMark } from './spinMark';

export const SPIN: Station = {
  id: 'spin',
  word: 'Spin up',
  question: 'Can the wheel be spun, safely, on this motor and battery?',
  mark: (_, rig) => spinMark(rig),
  onMark: (listener) => useSpinChoices.subscribe(listener),
  Sheet: lazySheet(async () => (await import('./SpinSheet')).SpinSheet),
};
