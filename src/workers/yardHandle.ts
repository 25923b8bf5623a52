import { proxy, type Remote, wrap } from 'comlink';
import type { Rig } from '../core/rig';
import type { Switches } from '../core/trial';
import type { GroundChoice, YardBox } from '../yard';
import type { OpenOutcome, SnapshotListener, Triple, YardCalls } from './yardWorker';

/** A yard that runs elsewhere: what the hand does goes in, snapshots come out. */
export interface YardHandle {
  readonly open: (
    rig: Rig,
    ground: GroundChoice,
    switches: Switches,
    listen: SnapshotListener,
  ) => Promise<OpenOutcome>;
  readonly touch: (point: Triple, target: Triple) => void;
  readonly release: () => void;
  readonly kick: (impulse: Triple, point: Triple) => void;
  readonly drop: (box: YardBox) => Promise<readonly YardBox[]>;
  /** Ends the worker. */
  readonly close: () => void;
}

/** Starts a worker with an empty yard. */
export function createYardHandle(): YardHandle {
  const worker = new Worker(new URL('./yardWorker.ts', import.meta.url), { type: 'module' });
  const calls: Remote<YardCalls> = wrap<YardCalls>(worker);
  return {
    open: (rig, ground, switches, listen) => calls.open(rig, ground, switches, proxy(listen)),
    touch: (point, target) => void calls.touch(point, target),
    release: () => void calls.release(),
    kick: (impulse, point) => void calls.kick(impulse, point),
    drop: (box) => calls.drop(box),
    close: () => worker.terminate(),
  };
}
