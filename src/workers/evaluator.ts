import { type Remote, wrap } from 'comlink';
import type { Rig } from '../core/rig';
import type { Cure, Evaluation, Explained, Switches } from '../core/trial';
import type { EvaluationCalls } from './evaluationWorker';

/** Whoever answers what a rig comes to. Calls are answered in the order asked; the caller keeps the newest. */
export interface Evaluator {
  readonly evaluate: (rig: Rig, switches: Switches) => Promise<Evaluation>;
  /** By how much a rig with no plan falls short; on the worker of the cures. */
  readonly diagnose: (rig: Rig) => Promise<Explained | undefined>;
  /** Cures of a rig with no plan; on a worker of its own, so that the next evaluation need not wait. */
  readonly findCures: (rig: Rig) => Promise<readonly Cure[]>;
  /** Ends a search for cures that nobody waits for any longer: its promise never settles. */
  readonly stopCures: () => void;
  readonly close: () => void;
}

const startWorker = (): { readonly worker: Worker; readonly calls: Remote<EvaluationCalls> } => {
  const worker = new Worker(new URL('./evaluationWorker.ts', import.meta.url), { type: 'module' });
  return { worker, calls: wrap<EvaluationCalls>(worker) };
};

/** Starts the worker that evaluates; the one for cures starts when it is first asked. */
export function createEvaluator(): Evaluator {
  const main = startWorker();
  let side: ReturnType<typeof startWorker> | undefined;
  const stopCures = (): void => {
    side?.worker.terminate();
    side = undefined;
  };
  return {
    evaluate: (rig, switches) => main.calls.evaluate(rig, switches),
    diagnose: (rig) => {
      side ??= startWorker();
      return side.calls.diagnose(rig);
    },
    findCures: (rig) => {
      side ??= startWorker();
      return side.calls.findCures(rig);
    },
    stopCures,
    close: () => {
      main.worker.terminate();
      stopCures();
    },
  };
}
