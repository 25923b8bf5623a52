/** How far a gait is from needing a step: its capture point against the edges of its support, array aside. */
import { STANDARD_GRAVITY } from '../physics';
import type { Demand, Trunk } from './demand';
import type { GaitCourse } from './gait';
import type { LegMassCourse } from './legMass';
import { capturePoint, fallRate } from './lipm';
import { extentOf } from './supportPolygon';

export interface CaptureCourse {
  /** nodes, m: capture point across the body, walking frame. */
  readonly across: Float64Array;
  /** nodes, m: to the nearer edge of the support across; negative where only a step or the array can hold it. */
  readonly margin: Float64Array;
}

/**
 * Capture point of a gait across the body and its margin of stability.
 *
 * @param course, trunk, legs  as the demand was made from
 * @param demand  gives centre of mass and support
 *
 * O(nodes). Source: Hof, Gazendam and Sinke, J. Biomechanics 38 (2005).
 */
export function captureCourse(
  course: GaitCourse,
  trunk: Trunk,
  legs: LegMassCourse,
  demand: Demand,
): CaptureCourse {
  const { nodes } = course;
  const across = new Float64Array(nodes);
  const margin = new Float64Array(nodes);
  const mass = trunk.mass + legs.mass;
  for (let k = 0; k < nodes; k++) {
    const at = 3 * k + 1;
    const speed = (trunk.mass * course.bodyVelocity[at] + legs.momentum[at]) / mass;
    const rate = fallRate(demand.centreOfMass[at + 1], STANDARD_GRAVITY);
    across[k] = capturePoint(demand.centreOfMass[at], speed, rate);
    const edges = extentOf(demand.support[k], 1);
    margin[k] = edges ? Math.min(across[k] - edges[0], edges[1] - across[k]) : Number.NEGATIVE_INFINITY;
  }
  return { across, margin };
}
