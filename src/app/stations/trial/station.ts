import { lazySheet } from '../lazySheet';
import type { Station } from '../station';
import { useTrial } from './trialStore';

export const TRIAL: Station = {
  id: 'trial',
  word: 'Trial',
  question: 'Does it hold with the real servo lag, backlash, sensor noise and loop rate?',
  mark: (_shown, rig) => {
    const { shown } = useTrial.getState();
    if (!shown || shown.rig !== rig) return 'notYet';
    return shown.run.figures.hasFallen ? 'fails' : 'holds';
  },
  Sheet: lazySheet(async () => (await import('./TrialSheet')).TrialSheet),
};
