import type { StageProblem } from './stageProblem';

/** What adding the constraints up with given multipliers comes to. */
export interface CertificateFinding {
  /** whether no point within the radius can meet the constraints */
  readonly holds: boolean;
  /** constant part of the sum: must be positive */
  readonly contradiction: number;
  /** sum of |coefficient| left on the variables: must be small against contradiction / radius */
  readonly remainder: number;
  /** how far outside the dual cone the multipliers are: must be zero */
  readonly dualCone: number;
}

/**
 * Checks a proof that a stage program has no feasible point (Farkas' lemma for cones).
 *
 * Every feasible point has dual' (rows z + rowsShared w - bound) <= 0 and zero for every equation. Adding
 * them with the given multipliers leaves remainder' (z, w) + contradiction <= 0, which no point with
 * |entries| <= radius meets when contradiction > radius * sum |remainder|. Half of the contradiction is
 * kept back for rounding.
 *
 * @param dynamicsDual N x states
 * @param boundaryDual boundaryRows
 * @param dual         rows; anything outside the dual cone voids the proof
 * @param radius       in the units of the scaled variables
 *
 * O(N width^2). Allocates. Source: Boyd and Vandenberghe, Convex Optimization, section 5.9.4.
 */
export function checkCertificate(
  problem: StageProblem,
  dynamicsDual: Float64Array,
  boundaryDual: Float64Array,
  dual: Float64Array,
  radius: number,
): CertificateFinding {
  const { sizes } = problem;
  const { stages, states, controls, width, shared, boundaryRows } = sizes;
  let contradiction = 0;
  let dualCone = 0;
  const left = new Float64Array((stages + 1) * width);
  const leftShared = new Float64Array(shared);
  for (let k = 0; k <= stages; k++) {
    for (let r = sizes.rowStart[k]; r < sizes.rowStart[k + 1]; r++) {
      contradiction -= problem.bound[r] * dual[r];
      for (let a = 0; a < width; a++) left[k * width + a] += problem.rows[r * width + a] * dual[r];
      for (let j = 0; j < shared; j++) leftShared[j] += problem.rowsShared[r * shared + j] * dual[r];
      if (r < sizes.rowStart[k] + sizes.linearRows[k]) dualCone = Math.max(dualCone, -dual[r]);
    }
    for (let c = sizes.coneStart[k]; c < sizes.coneStart[k + 1]; c++) {
      const l = dual.subarray(sizes.coneRow[c], sizes.coneRow[c] + sizes.coneDim[c]);
      dualCone = Math.max(dualCone, Math.hypot(...l.subarray(1)) - l[0]);
    }
    if (k === stages) continue;
    for (let i = 0; i < states; i++) {
      const y = dynamicsDual[k * states + i];
      contradiction += problem.drift[k * states + i] * y;
      left[(k + 1) * width + controls + i] -= y;
      for (let a = 0; a < width; a++) {
        left[k * width + a] += problem.dynamics[(k * states + i) * width + a] * y;
      }
    }
  }
  for (let b = 0; b < boundaryRows; b++) {
    contradiction -= problem.boundaryValue[b] * boundaryDual[b];
    for (let i = 0; i < states; i++) {
      left[controls + i] += problem.boundaryStart[b * states + i] * boundaryDual[b];
      left[stages * width + controls + i] += problem.boundaryEnd[b * states + i] * boundaryDual[b];
    }
  }
  let remainder = 0;
  for (let i = 0; i < left.length; i++) {
    // the last stage has no controls
    if (i < stages * width || i >= stages * width + controls) remainder += Math.abs(left[i]);
  }
  for (const value of leftShared) remainder += Math.abs(value);
  const holds = dualCone <= 0 && contradiction > 0 && radius * remainder <= contradiction / 2;
  return { holds, contradiction, remainder, dualCone };
}
