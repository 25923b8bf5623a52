import { type Remote, wrap } from 'comlink';
import type { Rig } from '../core/rig';
import { type ManyRequest, type ManySummary, type RunRow, summariseMany } from '../core/trial';
import type { TrialCalls } from './trialWorker';

/** Many runs under way. Ending them terminates their workers at once; the promise then never settles. */
export interface ManyTask {
  readonly done: Promise<ManySummary>;
  readonly end: () => void;
}

export interface TrialPool {
  /** One worker for what the screen asks, one question after another. */
  readonly ask: Remote<TrialCalls>;
  /** Terminates that worker and starts another: what it was doing never settles. */
  readonly stopAsking: () => void;
  /** Runs handed out in small lots to all cores; `onDone` hears how many are in. */
  readonly many: (rig: Rig, request: ManyRequest, onDone: (runs: number) => void) => ManyTask;
}

interface Hand {
  readonly worker: Worker;
  readonly calls: Remote<TrialCalls>;
}

const hire = (): Hand => {
  const worker = new Worker(new URL('./trialWorker.ts', import.meta.url), { type: 'module' });
  return { worker, calls: wrap<TrialCalls>(worker) };
};

/** Runs handed out at a time: few enough that progress is seen and no core waits long for the last. */
const LOT = 8;

/**
 * Workers for trials. Which worker makes a run, and how many there are, changes no number: a run's noise is named by
 * its place, and rows are summed up in that order.
 */
export function createTrialPool(cores: number): TrialPool {
  let own: Hand | undefined;
  const askOwn = (): Hand => {
    own ??= hire();
    return own;
  };
  return {
    get ask() {
      return askOwn().calls;
    },
    stopAsking: () => {
      own?.worker.terminate();
      own = undefined;
    },
    many: (rig, request, onDone) => {
      const hands = Array.from({ length: Math.max(1, cores) }, hire);
      const rows: RunRow[] = [];
      let next = 0;
      let isEnded = false;
      const end = (): void => {
        isEnded = true;
        for (const { worker } of hands) worker.terminate();
      };
      const workThrough = async ({ calls }: Hand): Promise<void> => {
        while (next < request.runs) {
          const from = next;
          next = Math.min(request.runs, from + LOT);
          const made = await calls.many(rig, request, from, Math.min(request.runs, from + LOT));
          if (isEnded) return;
          rows.push(...made);
          onDone(rows.length);
        }
      };
      const done = Promise.all(hands.map(workThrough))
        .then(() => summariseMany(rows))
        .finally(end);
      return { done, end };
    },
  };
}
