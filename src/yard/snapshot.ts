/** What the yard hands out: numbers of one instant in one array, SI, world frame unless said. */

/** Most loose objects a yard holds. */
export const MOST_OBJECTS = 24;

export interface SnapshotLayout {
  readonly gyros: number;
  readonly legs: number;
  /** Where each field begins. */
  readonly time: number;
  /** s at which the rig went over; NaN while it has not. */
  readonly toppledAt: number;
  /** rad: roll. */
  readonly lean: number;
  /** 7: body origin (m), attitude w first. */
  readonly pose: number;
  readonly tilt: number;
  readonly tiltRate: number;
  /** 3 x legs: middle of each sole, m; and 1 where it presses on something. */
  readonly feet: number;
  readonly isFootDown: number;
  readonly centreOfMass: number;
  /** 2: NaN while nothing is pressed on. */
  readonly centreOfPressure: number;
  /** 3 each, body axes: momentum the array holds (N*m*s), its torque on the body (N*m). */
  readonly momentum: number;
  readonly torque: number;
  /** 6: where the finger pushes and where it is, m; NaN without one. Then its force, N. */
  readonly finger: number;
  readonly fingerForce: number;
  /** Count, then 7 for each of MOST_OBJECTS: centre (m), attitude w first. */
  readonly objects: number;
  readonly size: number;
}

/** Layout of the snapshots of a rig with so many gyros and legs. */
export function snapshotLayout(gyros: number, legs: number): SnapshotLayout {
  let size = 0;
  const take = (count: number): number => {
    const at = size;
    size += count;
    return at;
  };
  const layout = {
    gyros,
    legs,
    time: take(1),
    toppledAt: take(1),
    lean: take(1),
    pose: take(7),
    tilt: take(gyros),
    tiltRate: take(gyros),
    feet: take(3 * legs),
    isFootDown: take(legs),
    centreOfMass: take(3),
    centreOfPressure: take(2),
    momentum: take(3),
    torque: take(3),
    finger: take(6),
    fingerForce: take(1),
    objects: take(1 + 7 * MOST_OBJECTS),
  };
  return { ...layout, size };
}
