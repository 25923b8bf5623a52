/** Off the main thread: everything that is handed over of a rig. */
import { expose } from 'comlink';
import { type HandoverOutcome, type Imprint, makeHandover } from '../core/handover';
import type { Rig } from '../core/rig';

const calls = {
  make: (rig: Rig, imprint: Imprint): HandoverOutcome =>
    makeHandover(rig, imprint, () => performance.now() / 1000),
};

export type HandoverCalls = typeof calls;

expose(calls);
