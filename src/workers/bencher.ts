import { proxy, type Remote, wrap } from 'comlink';
import type { LogProgress } from '../core/bench';
import type { BenchCalls, LogOpening } from './benchWorker';

export type { BenchGivens, GainList } from './benchGivens';
export type { BenchCalls, LogMapping, LogOpening } from './benchWorker';
export type { CurveView } from './curveView';

/** A worker for bench work. `close` breaks off whatever it does: calls under way never settle. */
export interface Bencher {
  readonly calls: Remote<BenchCalls>;
  readonly open: (file: Blob, tell: (progress: LogProgress) => void) => Promise<LogOpening>;
  readonly close: () => void;
}

/** Starts a worker with no log. */
export function createBencher(): Bencher {
  const worker = new Worker(new URL('./benchWorker.ts', import.meta.url), { type: 'module' });
  const calls = wrap<BenchCalls>(worker);
  return {
    calls,
    open: (file, tell) => calls.open(file, proxy(tell)),
    close: () => worker.terminate(),
  };
}
