export { createEvaluator, type Evaluator } from './evaluator';
