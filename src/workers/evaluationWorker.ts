/** Off the main thread: what a rig comes to, and what would cure one that cannot be planned. */
import { expose, transfer } from 'comlink';
import type { Rig } from '../core/rig';
import {
  type Cure,
  createEvaluationWork,
  diagnose,
  type Evaluation,
  type Explained,
  evaluate,
  findCures,
  type Switches,
} from '../core/trial';
import { buffersOf } from './buffers';

const work = createEvaluationWork(() => performance.now() / 1000, true);

const calls = {
  evaluate(rig: Rig, switches: Switches): Evaluation {
    const evaluation = evaluate(rig, switches, work);
    return transfer(evaluation, buffersOf(evaluation));
  },
  diagnose: (rig: Rig): Explained | undefined => diagnose(rig),
  findCures: (rig: Rig): readonly Cure[] => findCures(rig),
};

export type EvaluationCalls = typeof calls;

expose(calls);
