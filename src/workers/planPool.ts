import { type Remote, wrap } from 'comlink';
import type {
  Holding,
  HoldingAsk,
  SeakeepingOutcome,
  SizeAsk,
  SizeOutcome,
  TradeAsk,
  TradeCell,
  Waves,
} from '../core/planning';
import type { Rig } from '../core/rig';
import type { PlanCalls } from './planWorker';

/** A piece of planning under way. Ending it terminates its workers at once; its promise then never settles. */
export interface PlanTask<T> {
  readonly done: Promise<T>;
  readonly end: () => void;
}

export interface PlanPool {
  /** A whole map, its rows given to `onRow` as they come. */
  readonly drawMap: (
    rig: Rig,
    ask: TradeAsk,
    onRow: (row: number, cells: readonly TradeCell[]) => void,
  ) => PlanTask<void>;
  readonly size: (rig: Rig, ask: SizeAsk) => PlanTask<SizeOutcome>;
  /** Shove limits and holding times; in words when there are none. */
  readonly holding: (rig: Rig, ask: HoldingAsk) => PlanTask<Holding | { readonly sentence: string }>;
  readonly seakeeping: (rig: Rig, waves: Waves) => PlanTask<SeakeepingOutcome>;
}

interface Hand {
  readonly worker: Worker;
  readonly calls: Remote<PlanCalls>;
}

const hire = (): Hand => {
  const worker = new Worker(new URL('./planWorker.ts', import.meta.url), { type: 'module' });
  return { worker, calls: wrap<PlanCalls>(worker) };
};

/** Rows in the order in which they tell most: every fourth, then those between. */
export function rowOrder(rows: number): readonly number[] {
  const order: number[] = [];
  for (const stride of [4, 2, 1]) {
    for (let row = 0; row < rows; row += stride) if (!order.includes(row)) order.push(row);
  }
  return order;
}

/**
 * Workers for planning beside the screen: as many as there are cores, four at most, hired for a task and let go
 * after it, so that a task that is ended leaves nothing running.
 */
export function createPlanPool(cores: number): PlanPool {
  const count = Math.max(1, Math.min(4, cores));
  const single = <T>(call: (calls: Remote<PlanCalls>) => Promise<T>): PlanTask<T> => {
    const hand = hire();
    const end = (): void => hand.worker.terminate();
    return { done: call(hand.calls).finally(end), end };
  };
  return {
    drawMap: (rig, ask, onRow) => {
      const hands = Array.from({ length: Math.min(count, ask.rows) }, hire);
      const left = [...rowOrder(ask.rows)];
      let isEnded = false;
      const end = (): void => {
        isEnded = true;
        for (const { worker } of hands) worker.terminate();
      };
      const workThrough = async ({ calls }: Hand): Promise<void> => {
        for (let row = left.shift(); row !== undefined; row = left.shift()) {
          const cells = await calls.tradeRow(rig, ask, row);
          if (isEnded) return;
          onRow(row, cells);
        }
      };
      return { done: Promise.all(hands.map(workThrough)).then(end), end };
    },
    size: (rig, ask) => single(async (calls): Promise<SizeOutcome> => await calls.size(rig, ask)),
    holding: (rig, ask) =>
      single(
        async (calls): Promise<Holding | { readonly sentence: string }> => await calls.holding(rig, ask),
      ),
    seakeeping: (rig, waves) =>
      single(async (calls): Promise<SeakeepingOutcome> => await calls.seakeeping(rig, waves)),
  };
}
