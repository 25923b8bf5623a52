/** Off the main thread: rows of a trade map, sizes, and wave work, each a call that may be ended with its worker. */
import { expose } from 'comlink';
import { compileRig } from '../core/physics';
import {
  createPlanWork,
  type SeakeepingOutcome,
  type SizeAsk,
  type SizeOutcome,
  seakeepingOf,
  sizeRig,
  type TradeAsk,
  type TradeCell,
  tradeRow,
  type Waves,
} from '../core/planning';
import type { Rig } from '../core/rig';

const work = createPlanWork();

const calls = {
  tradeRow: (rig: Rig, ask: TradeAsk, row: number): readonly TradeCell[] => tradeRow(rig, ask, row, work),
  size: (rig: Rig, ask: SizeAsk): SizeOutcome => sizeRig(rig, ask),
  seakeeping(rig: Rig, waves: Waves): SeakeepingOutcome {
    const compiled = compileRig(rig);
    if (compiled.kind === 'refused') {
      return { kind: 'none', sentence: compiled.refusals.map(({ sentence }) => sentence).join(' ') };
    }
    return seakeepingOf(compiled.compiled, waves);
  },
};

export type PlanCalls = typeof calls;

expose(calls);
