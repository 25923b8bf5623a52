export { createEvaluator, type Evaluator } from './evaluator';
export { createSpinner, type Spinner } from './spinner';
