import { checkCertificate } from './certificateCheck';
import { runInteriorPoint } from './interiorPoint';
import type { SolverOptions } from './solverOptions';
import type { Certificate } from './solverOutcome';
import { createSolverWork, type SolverWork } from './solverWork';
import { createStageProblem, type StageProblem } from './stageProblem';
import { createStageSizes } from './stageSizes';

/**
 * The problem with every limit let out by one more shared scalar t, and t alone to be made small. It always
 * has an interior, and its multipliers at a positive least t are a proof that the limits contradict.
 */
function createElastic(problem: StageProblem): StageProblem {
  const { sizes } = problem;
  const { stages, shared } = sizes;
  const elastic = createStageProblem(
    createStageSizes({
      stages,
      states: sizes.states,
      controls: sizes.controls,
      boundaryRows: sizes.boundaryRows,
      shared: shared + 1,
      linearRows: sizes.linearRows,
      cones: Array.from({ length: stages + 1 }, (_, k) =>
        Array.from(sizes.coneDim.subarray(sizes.coneStart[k], sizes.coneStart[k + 1])),
      ),
    }),
  );
  for (let k = 0; k <= stages; k++) {
    for (let r = sizes.rowStart[k]; r < sizes.rowStart[k] + sizes.linearRows[k]; r++) {
      elastic.rowsShared[r * (shared + 1) + shared] = -1;
    }
  }
  for (let c = 0; c < sizes.coneRow.length; c++) {
    elastic.rowsShared[sizes.coneRow[c] * (shared + 1) + shared] = -1;
  }
  elastic.sharedGradient[shared] = 1;
  return elastic;
}

function fillElastic(problem: StageProblem, elastic: StageProblem): void {
  const { rows, shared } = problem.sizes;
  elastic.dynamics.set(problem.dynamics);
  elastic.drift.set(problem.drift);
  elastic.rows.set(problem.rows);
  elastic.bound.set(problem.bound);
  elastic.boundaryStart.set(problem.boundaryStart);
  elastic.boundaryEnd.set(problem.boundaryEnd);
  elastic.boundaryValue.set(problem.boundaryValue);
  for (let r = 0; r < rows; r++) {
    for (let j = 0; j < shared; j++) {
      elastic.rowsShared[r * (shared + 1) + j] = problem.rowsShared[r * shared + j];
    }
  }
}

/**
 * Looks for a proof that a stage program has no feasible point by solving its elastic version.
 *
 * Returns a checked certificate, or null when the least elastic t is not positive or nothing was proven.
 */
export function seekCertificate(
  problem: StageProblem,
  options: SolverOptions,
  work: SolverWork,
): { readonly certificate: Certificate | null; readonly iterations: number } {
  if (!work.elastic) {
    const elastic = createElastic(problem);
    work.elastic = { problem: elastic, work: createSolverWork(elastic.sizes) };
  }
  const { problem: elastic, work: elasticWork } = work.elastic;
  fillElastic(problem, elastic);
  const run = runInteriorPoint(elastic, { ...options, warm: false, regularise: 1e-8 }, elasticWork);
  const { point } = elasticWork;
  const dual = point.dual.slice();
  const dynamicsDual = point.dynamicsDual.slice();
  const boundaryDual = point.border.slice(0, problem.sizes.boundaryRows);
  const finding = checkCertificate(problem, dynamicsDual, boundaryDual, dual, options.radius);
  const certificate = finding.holds
    ? { dynamicsDual, boundaryDual, dual, contradiction: finding.contradiction }
    : null;
  return { certificate, iterations: run.iterations };
}
