import type { MomentumPlanProblem } from './momentumPlanProblem';

/** Mean moment of a cyclic plan that no support can trim, N m (signed), and the shift that cures it, m. */
export interface MeanMoment {
  readonly axis: number;
  readonly excess: number;
  readonly shift: number;
}

/**
 * The mean moment over a cycle must be borne by the support or by a mean lean: momentum comes back to
 * where it was, so the array's mean torque is zero.
 *
 * @returns what is left over on the worst axis, or null when every mean can be trimmed or the ends are given
 */
export function findMeanMoment(problem: MomentumPlanProblem): MeanMoment | null {
  if (problem.ends.kind !== 'cyclic') return null;
  const n = problem.intervals;
  let worst: MeanMoment | null = null;
  problem.axes.forEach(({ support }, axis) => {
    let found: MeanMoment | null = null;
    if (support.kind === 'firm') {
      let least = 0;
      let most = 0;
      let force = 0;
      for (let k = 0; k < n; k++) {
        const next = (k + 1) % n;
        const moment = (node: number, pressure: number) =>
          support.verticalForce[node] * pressure - support.ask[node];
        least += Math.max(moment(k, support.pressureMin[k]), moment(next, support.pressureMin[k])) / n;
        most += Math.min(moment(k, support.pressureMax[k]), moment(next, support.pressureMax[k])) / n;
        force += support.verticalForce[k] / n;
      }
      // ask grows with the centre of mass: too little ask is cured by a positive shift
      if (least > 0) found = { axis, excess: -least, shift: least / force };
      else if (most < 0) found = { axis, excess: -most, shift: most / force };
    } else {
      const mean = support.demand.reduce((sum, v) => sum + v, 0) / n;
      const ends = [-support.stiffness * support.leanMin, -support.stiffness * support.leanMax];
      const excess =
        mean > Math.max(...ends) ? mean - Math.max(...ends) : Math.min(0, mean - Math.min(...ends));
      if (excess !== 0) found = { axis, excess, shift: -excess / support.weight };
    }
    if (found && (!worst || Math.abs(found.excess) > Math.abs(worst.excess))) worst = found;
  });
  return worst;
}
