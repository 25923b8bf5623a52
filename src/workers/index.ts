export { createEvaluator, type Evaluator } from './evaluator';
export { createSpinner, type Spinner } from './spinner';
export { createYardHandle, type YardHandle } from './yardHandle';
export type { OpenedYard, OpenOutcome, SnapshotListener, Triple } from './yardWorker';
