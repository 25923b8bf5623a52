import { wrap } from 'comlink';
import type { HandoverOutcome, Imprint } from '../core/handover';
import type { Rig } from '../core/rig';
import type { HandoverCalls } from './handoverWorker';

/** Whoever makes the files of a rig. Calls are answered in the order asked. */
export interface HandoverMaker {
  readonly make: (rig: Rig, imprint: Imprint) => Promise<HandoverOutcome>;
  readonly close: () => void;
}

/** Starts the worker. */
export function createHandoverMaker(): HandoverMaker {
  const worker = new Worker(new URL('./handoverWorker.ts', import.meta.url), { type: 'module' });
  const calls = wrap<HandoverCalls>(worker);
  return { make: (rig, imprint) => calls.make(rig, imprint), close: () => worker.terminate() };
}
