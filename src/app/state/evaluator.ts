import type { Rig } from '../../core/rig';
import type { Evaluation, Switches } from '../../core/trial';

/** Whoever answers what a rig comes to: the worker in the app, a plain call in a test. */
export interface Evaluator {
  readonly evaluate: (rig: Rig, switches: Switches) => Promise<Evaluation>;
}
