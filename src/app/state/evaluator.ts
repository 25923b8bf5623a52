import type { Evaluator as WorkerEvaluator } from '../../workers';

/** Whoever answers what a rig comes to: the workers in the app, plain calls in a test. */
export type Evaluator = Pick<WorkerEvaluator, 'evaluate' | 'diagnose' | 'findCures' | 'stopCures'>;
