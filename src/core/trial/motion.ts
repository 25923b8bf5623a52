/**
 * What happened, or is planned to happen, over time: the one form in which stage, ribbon, exports and tests
 * receive motion. Columns are packed sample after sample; `n` is the number of gyros, `legs` of feet.
 */
export interface Motion {
  readonly samples: number;
  readonly gyros: number;
  readonly legs: number;
  /** True when the last sample leads back to the first, so that it can be looped without a jump. */
  readonly isCyclic: boolean;
  /** samples, s, evenly spaced from 0. */
  readonly time: Float64Array;
  /** samples x 7: body origin x y z in the world (m), then attitude as quaternion w x y z (body to world). */
  readonly pose: Float64Array;
  /** samples x n, rad. */
  readonly tilt: Float64Array;
  /** samples x n, rad/s. */
  readonly tiltRate: Float64Array;
  /** samples x n, rad: what the plan asked for; NaN where there is no plan. */
  readonly plannedTilt: Float64Array;
  /** samples x legs x 3, m, world: middle of each sole. */
  readonly feet: Float64Array;
  /** samples x legs, 1 while the foot carries load. */
  readonly isFootDown: Uint8Array;
  /** samples x 3, m, world. */
  readonly centreOfMass: Float64Array;
  /** samples x 2, m, world ground plane; NaN where nothing presses on the ground. */
  readonly centreOfPressure: Float64Array;
  /** samples x 3, N*m*s, body frame: momentum the array holds. */
  readonly momentum: Float64Array;
  /** samples x 3, N*m, body frame: torque of the array on the body. */
  readonly torque: Float64Array;
  /** samples, N*m: roll moment asked of the array. */
  readonly demand: Float64Array;
  /** samples, m: water surface at the body's middle, world z; empty on land. */
  readonly water: Float64Array;
  /** samples, rad: slope of the water surface across the body; empty on land. */
  readonly waterSlope: Float64Array;
}
