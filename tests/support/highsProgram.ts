import type { StageProblem } from '../../src/core/planning/solver';

/** The part of the general solver's result that is read here. */
interface GeneralResult {
  readonly Status: string;
  readonly ObjectiveValue: number;
  readonly Columns: Record<string, { readonly Primal: number }>;
}

export interface GeneralSolver {
  solve(text: string): GeneralResult;
}

/** Starts HiGHS (WebAssembly): a general solver of linear and convex quadratic programs. */
export async function startGeneralSolver(): Promise<GeneralSolver> {
  const load = (await import('highs')).default as unknown as () => Promise<GeneralSolver>;
  return load();
}

/** Facets that stand for each three-dimensional cone |(a, b)| <= t: a cos + b sin <= t at these angles. */
export type Faceting = readonly (readonly number[])[];

const term = (coefficient: number, name: string): string =>
  `${coefficient < 0 ? '-' : '+'} ${Math.abs(coefficient)} ${name}`;

const stateName = (problem: StageProblem, k: number, a: number): string =>
  `${a < problem.sizes.controls ? 'u' : 'x'}${k}_${a}`;

/** Linear combination of a row of the problem, or of a mix of its rows. */
function rowTerms(problem: StageProblem, k: number, mix: readonly (readonly [number, number])[]): string {
  const { width, shared, controls, stages } = problem.sizes;
  const parts: string[] = [];
  for (let a = k === stages ? controls : 0; a < width; a++) {
    let sum = 0;
    for (const [r, by] of mix) sum += by * problem.rows[r * width + a];
    if (sum !== 0) parts.push(term(sum, stateName(problem, k, a)));
  }
  for (let j = 0; j < shared; j++) {
    let sum = 0;
    for (const [r, by] of mix) sum += by * problem.rowsShared[r * shared + j];
    if (sum !== 0) parts.push(term(sum, `w${j}`));
  }
  return parts.join(' ');
}

function dynamicsLines(problem: StageProblem): string[] {
  const { stages, states, controls, width } = problem.sizes;
  const lines: string[] = [];
  for (let k = 0; k < stages; k++) {
    for (let i = 0; i < states; i++) {
      const parts = [term(-1, stateName(problem, k + 1, controls + i))];
      for (let a = 0; a < width; a++) {
        const f = problem.dynamics[(k * states + i) * width + a];
        if (f !== 0) parts.push(term(f, stateName(problem, k, a)));
      }
      lines.push(`d${k}_${i}: ${parts.join(' ')} = ${-problem.drift[k * states + i]}`);
    }
  }
  for (let b = 0; b < problem.sizes.boundaryRows; b++) {
    const parts: string[] = [];
    for (let i = 0; i < states; i++) {
      const start = problem.boundaryStart[b * states + i];
      const end = problem.boundaryEnd[b * states + i];
      if (start !== 0) parts.push(term(start, stateName(problem, 0, controls + i)));
      if (end !== 0) parts.push(term(end, stateName(problem, stages, controls + i)));
    }
    lines.push(`b${b}: ${parts.join(' ')} = ${problem.boundaryValue[b]}`);
  }
  return lines;
}

function limitLines(problem: StageProblem, facets: Faceting | null): string[] {
  const { stages, rowStart, linearRows, coneStart, coneRow, coneDim } = problem.sizes;
  const lines: string[] = [];
  for (let k = 0; k <= stages; k++) {
    for (let r = rowStart[k]; r < rowStart[k] + linearRows[k]; r++) {
      const terms = rowTerms(problem, k, [[r, 1]]);
      if (terms !== '') lines.push(`l${r}: ${terms} <= ${problem.bound[r]}`);
    }
    for (let c = coneStart[k]; c < coneStart[k + 1]; c++) {
      if (!facets) continue;
      if (coneDim[c] !== 3) throw new Error('only cones of dimension 3 are faceted');
      const r = coneRow[c];
      facets[c].forEach((angle, f) => {
        // slack (t, a, b) with cos a + sin b <= t
        const mix = [
          [r, 1],
          [r + 1, -Math.cos(angle)],
          [r + 2, -Math.sin(angle)],
        ] as const;
        const bound = mix.reduce((sum, [row, by]) => sum + by * problem.bound[row], 0);
        const terms = rowTerms(problem, k, mix);
        if (terms !== '') lines.push(`c${r}_${f}: ${terms} <= ${bound}`);
      });
    }
  }
  return lines;
}

/**
 * Writes a stage program in CPLEX LP format, every number in full.
 *
 * @param facets how the cones are faceted; null leaves them out
 */
export function writeProgram(problem: StageProblem, facets: Faceting | null): string {
  const { stages, controls, width, shared } = problem.sizes;
  const linear: string[] = [];
  const quadratic: string[] = [];
  const names: string[] = [];
  for (let k = 0; k <= stages; k++) {
    for (let a = k === stages ? controls : 0; a < width; a++) {
      const name = stateName(problem, k, a);
      names.push(name);
      const q = problem.gradient[k * width + a];
      if (q !== 0) linear.push(term(q, name));
      for (let b = a; b < width; b++) {
        const h = problem.hessian[(k * width + a) * width + b];
        if (h === 0) continue;
        quadratic.push(
          a === b ? term(h, `${name} ^ 2`) : term(2 * h, `${name} * ${stateName(problem, k, b)}`),
        );
      }
    }
  }
  for (let j = 0; j < shared; j++) {
    names.push(`w${j}`);
    if (problem.sharedGradient[j] !== 0) linear.push(term(problem.sharedGradient[j], `w${j}`));
    if (problem.sharedHessian[j] !== 0) quadratic.push(term(problem.sharedHessian[j], `w${j} ^ 2`));
  }
  const cost = [...linear, ...(quadratic.length > 0 ? [`+ [ ${quadratic.join(' ')} ] / 2`] : [])];
  return [
    'Minimize',
    `obj: ${cost.join('\n ')}`,
    'Subject To',
    ...dynamicsLines(problem),
    ...limitLines(problem, facets),
    'Bounds',
    ...names.map((name) => `${name} free`),
    'End',
    '',
  ].join('\n');
}

/**
 * Solves a stage program with its cones faceted ever more finely where the general solver's own answer
 * bulges out of them, until no cone is passed by more than `bulge`.
 *
 * Facets lie outside the cone, so every answer is a lower bound. Source: Kelley, J. SIAM 8 (1960).
 */
export function solveFaceted(
  general: GeneralSolver,
  problem: StageProblem,
  bulge: number,
): { readonly objective: number; readonly rounds: number } {
  const { stages, width, shared, coneStart, coneRow, controls } = problem.sizes;
  const facets: number[][] = Array.from(coneRow, () =>
    Array.from({ length: 16 }, (_, f) => (2 * Math.PI * f) / 16),
  );
  for (let round = 1; round <= 40; round++) {
    const result = general.solve(writeProgram(problem, facets));
    if (result.Status !== 'Optimal') throw new Error(`the general solver says ${result.Status}`);
    const slack = (k: number, r: number): number => {
      let sum = problem.bound[r];
      for (let a = k === stages ? controls : 0; a < width; a++) {
        sum -= problem.rows[r * width + a] * result.Columns[stateName(problem, k, a)].Primal;
      }
      for (let j = 0; j < shared; j++) {
        sum -= problem.rowsShared[r * shared + j] * result.Columns[`w${j}`].Primal;
      }
      return sum;
    };
    let worst = 0;
    for (let k = 0; k <= stages; k++) {
      for (let c = coneStart[k]; c < coneStart[k + 1]; c++) {
        const [t, a, b] = [0, 1, 2].map((i) => slack(k, coneRow[c] + i));
        const out = Math.sqrt(a * a + b * b) - t;
        worst = Math.max(worst, out);
        if (out > bulge) facets[c].push(Math.atan2(b, a));
      }
    }
    if (worst <= bulge) return { objective: result.ObjectiveValue, rounds: round };
  }
  throw new Error('forty rounds of facets did not settle');
}
