export { createEvaluator, type Evaluator } from './evaluator';
export { createSpinner, type Spinner } from './spinner';
export { createTrialPool, type ManyTask, type TrialPool } from './trialPool';
export type { GainMapView, SpeedView, TrialAnswer, TrialQuestion } from './trialWorker';
export { createYardHandle, type YardHandle } from './yardHandle';
export type { OpenedYard, OpenOutcome, SnapshotListener, Triple } from './yardWorker';
