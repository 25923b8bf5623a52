import { seekCertificate } from './elasticPhase';
import { runInteriorPoint } from './interiorPoint';
import { checkOptimality, isOptimal } from './optimalityCheck';
import type { SolverOptions } from './solverOptions';
import type { SolverOutcome } from './solverOutcome';
import type { SolverWork } from './solverWork';
import type { StageProblem } from './stageProblem';
import { evaluateObjective } from './stageProducts';

/** Solved when the optimality conditions, recomputed from the problem alone, hold at the last point. */
function claimSolved(
  problem: StageProblem,
  options: SolverOptions,
  work: SolverWork,
  iterations: number,
): SolverOutcome {
  const objective = evaluateObjective(problem, work.point.z, work.point.border);
  const residuals = checkOptimality(problem, work.point, objective);
  if (isOptimal(residuals, options.tolerance, options.gapTolerance)) {
    return { kind: 'solved', point: work.point, objective, residuals, iterations };
  }
  return { kind: 'gave-up', residuals, iterations };
}

/**
 * Solves a stage-structured convex program.
 *
 * @param problem program; never changed
 * @param options tolerances and the most iterations
 * @param work    scratch made for the same sizes; holds the point that is returned
 * @returns 'solved' after an independent check of the optimality conditions, 'impossible' with a checked
 *          certificate, or 'gave-up' with the residuals it stopped at. Always ends: at most three runs of
 *          options.maxIterations steps each.
 *
 * O(N width^3) a step. Throws when the work space was made for other sizes.
 */
export function solveStageProblem(
  problem: StageProblem,
  options: SolverOptions,
  work: SolverWork,
): SolverOutcome {
  if (problem.sizes !== work.sizes) throw new Error('the work space was made for other sizes');
  let run = runInteriorPoint(problem, options, work);
  let iterations = run.iterations;
  if (run.certificate) return { kind: 'impossible', certificate: run.certificate, iterations };
  let outcome = claimSolved(problem, options, work, iterations);
  if (outcome.kind === 'solved') return outcome;
  // a kept point can be a poor start after a large change, and rounding can spoil the last steps
  run = runInteriorPoint(problem, { ...options, warm: false, careful: true }, work);
  iterations += run.iterations;
  if (run.certificate) return { kind: 'impossible', certificate: run.certificate, iterations };
  outcome = claimSolved(problem, options, work, iterations);
  if (outcome.kind === 'solved') return outcome;
  work.hasKept = false;
  const phase = seekCertificate(problem, options, work);
  iterations += phase.iterations;
  if (phase.certificate) return { kind: 'impossible', certificate: phase.certificate, iterations };
  return { ...outcome, iterations };
}
