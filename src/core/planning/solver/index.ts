export { type CertificateFinding, checkCertificate } from './certificateCheck';
export { checkOptimality, isOptimal } from './optimalityCheck';
export { defaultSolverOptions, type SolverOptions } from './solverOptions';
export type { Certificate, Residuals, SolverOutcome } from './solverOutcome';
export { createSolverWork, type SolverWork } from './solverWork';
export { createStageProblem, type StagePoint, type StageProblem } from './stageProblem';
export { createStageSizes, type StageShape, type StageSizes } from './stageSizes';
export { solveStageProblem } from './stageSolver';
