import { lazySheet } from '../lazySheet';
import type { Station } from '../station';

export const HANDOVER: Station = {
  id: 'handover',
  word: 'Hand over',
  question: 'What do I give to the firmware, the CAD model, the reviewer?',
  mark: (shown) => {
    if (!shown || shown.plan.kind === 'unplanned') return 'notYet';
    const isGood = shown.plan.kind === 'planned' && shown.outcome.kind === 'holds';
    return isGood && shown.ledger.lines.every(({ spare }) => spare >= 0) ? 'holds' : 'fails';
  },
  Sheet: lazySheet(async () => (await import('./HandoverSheet')).HandoverSheet),
};
