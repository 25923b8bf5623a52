export {
  type Bencher,
  type BenchGivens,
  type CurveView,
  createBencher,
  type GainList,
  type LogMapping,
  type LogOpening,
} from './bencher';
export { reduceCurve } from './curveView';
export { createEvaluator, type Evaluator } from './evaluator';
export { createHandoverMaker, type HandoverMaker } from './handoverMaker';
export { createPlanPool, type PlanPool, type PlanTask } from './planPool';
export { createSpinner, type Spinner } from './spinner';
export { createTrialPool, type ManyTask, type TrialPool } from './trialPool';
export type { GainMapView, SpeedView, TrialAnswer, TrialQuestion } from './trialWorker';
export { createYardHandle, type YardHandle } from './yardHandle';
export type { OpenedYard, OpenOutcome, SnapshotListener, Triple } from './yardWorker';
