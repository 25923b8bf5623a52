/** Off the main thread: rows of a trade map, sizes, and wave work, each a call that may be ended with its worker. */
import { expose } from 'comlink';
import { compileRig } from '../core/physics';
import {
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  type Holding,
  type HoldingAsk,
  holdingOf,
  type SeakeepingOutcome,
  type SizeAsk,
  type SizeOutcome,
  seakeepingOf,
  setUpPlan,
  sizeRig,
  type TradeAsk,
  type TradeCell,
  tradeRow,
  type Waves,
} from '../core/planning';
import type { Rig } from '../core/rig';

const work = createPlanWork();

const wordsOf = (refusals: readonly { readonly sentence: string }[]): string =>
  refusals.map(({ sentence }) => sentence).join(' ');

const calls = {
  tradeRow: (rig: Rig, ask: TradeAsk, row: number): readonly TradeCell[] => tradeRow(rig, ask, row, work),
  size: (rig: Rig, ask: SizeAsk): SizeOutcome => sizeRig(rig, ask),
  holding(rig: Rig, ask: HoldingAsk): Holding | { readonly sentence: string } {
    const compiled = compileRig(rig);
    if (compiled.kind === 'refused') return { sentence: wordsOf(compiled.refusals) };
    const set = setUpPlan(compiled.compiled);
    if (set.kind === 'refused') return { sentence: wordsOf(set.refusals) };
    const plan = attemptRigPlan(set.setting, defaultPlanOptions, work);
    const found =
      plan.kind === 'planned'
        ? holdingOf(plan.setting, plan.schedules, ask)
        : holdingOf(set.setting, [], ask);
    return found ?? { sentence: set.setting.unplanned ?? 'Nothing here works in roll.' };
  },
  seakeeping(rig: Rig, waves: Waves): SeakeepingOutcome {
    const compiled = compileRig(rig);
    if (compiled.kind === 'refused') {
      return { kind: 'none', sentence: wordsOf(compiled.refusals) };
    }
    return seakeepingOf(compiled.compiled, waves);
  },
};

export type PlanCalls = typeof calls;

expose(calls);
