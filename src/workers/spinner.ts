import { wrap } from 'comlink';
import type { SpinChoices, SpinSheetOutcome } from '../core/physics';
import type { Rig } from '../core/rig';
import type { SpinCalls } from './spinWorker';

/** Whoever answers what spinning a rig's wheels comes to. Calls are answered in the order asked. */
export interface Spinner {
  readonly spinSheet: (
    rig: Rig,
    gimbalPower: number,
    choices: Partial<SpinChoices>,
  ) => Promise<SpinSheetOutcome>;
  readonly close: () => void;
}

/** Starts the worker. */
export function createSpinner(): Spinner {
  const worker = new Worker(new URL('./spinWorker.ts', import.meta.url), { type: 'module' });
  const calls = wrap<SpinCalls>(worker);
  return {
    spinSheet: (rig, gimbalPower, choices) => calls.spinSheet(rig, gimbalPower, choices),
    close: () => worker.terminate(),
  };
}
