import { lazySheet } from '../lazySheet';
import type { Station } from '../station';

export const PLAN: Station = {
  id: 'plan',
  word: 'Plan',
  question: 'How must the gimbals tilt through this gait, or this run of knocks and waves?',
  mark: (shown) => {
    if (!shown || shown.plan.kind === 'unplanned') return 'notYet';
    if (shown.plan.kind === 'impossible') return 'fails';
    return shown.ledger.lines.some((line) => line.spare < 0) ? 'fails' : 'holds';
  },
  Sheet: lazySheet(async () => (await import('./PlanSheet')).PlanSheet),
};
