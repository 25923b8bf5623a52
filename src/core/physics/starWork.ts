/** Scratch of the star's kernels, and the inputs that vary in time besides the effort. */
import { type BasePlace, createBasePlace } from './footingMotion';
import type { StarModel } from './starModel';

/** One per caller; everything a kernel writes to besides its `out`. */
export interface StarWork {
  readonly place: BasePlace;
  /**
   * 28, the base about O as its legs stand now, body components: mass, first moment 3, inertia 6, relative linear
   * momentum 3 (the rate of the first moment), relative angular momentum 3, then the rates of the inertia 6, of
   * the linear momentum 3 and of the angular momentum 3. Set by setMovingBase.
   */
  readonly base: Float64Array;
  /** Wrench on the base: effort plus footing; moment about O, then force. */
  readonly wrench: Float64Array;
  /** 6, rate of the base velocity's components, gravity taken off. */
  readonly drive: Float64Array;
  readonly spin: Float64Array;
  /** 6n: gimbal inertia times hinge motion. */
  readonly hingeForce: Float64Array;
  /** n: what is left to accelerate the hinge; later the tilt accelerations. */
  readonly hingeRest: Float64Array;
  /** n: rate of each wheel's momentum along its spin axis, N*m; for held wheels filled after the solve. By starAcceleration only. */
  readonly momentumRate: Float64Array;
  /** 36 and 6: system left for the base, and its right side. */
  readonly matrix: Float64Array;
  readonly right: Float64Array;
  readonly articulated: Float64Array;
  readonly acceleration: Float64Array;
  /** Whether the base or the planted point has been set to move by prescription. */
  isMoving: boolean;
}

/** The only place that allocates. One work space per caller. */
export function createStarWork(model: StarModel): StarWork {
  const n = model.gimbals;
  const work: StarWork = {
    place: createBasePlace(model),
    base: new Float64Array(28),
    wrench: new Float64Array(6),
    drive: new Float64Array(6),
    spin: new Float64Array(3 * n),
    hingeForce: new Float64Array(6 * n),
    hingeRest: new Float64Array(n),
    momentumRate: new Float64Array(n),
    matrix: new Float64Array(36),
    right: new Float64Array(6),
    articulated: new Float64Array(36),
    acceleration: new Float64Array(model.accelerationSize),
    isMoving: false,
  };
  setBase(model, work, model.base);
  return work;
}

function setBase(model: StarModel, work: StarWork, about: ArrayLike<number>): void {
  const added = model.footing.floats?.addedInertia ?? 0;
  const a = model.footing.axis;
  for (let k = 0; k < 10; k++) work.base[k] = about[k]!;
  work.base[4] = work.base[4]! + added * a[0]! * a[0]!;
  work.base[5] = work.base[5]! + added * a[1]! * a[1]!;
  work.base[6] = work.base[6]! + added * a[2]! * a[2]!;
  work.base[7] = work.base[7]! + added * a[0]! * a[1]!;
  work.base[8] = work.base[8]! + added * a[0]! * a[2]!;
  work.base[9] = work.base[9]! + added * a[1]! * a[2]!;
}

/**
 * Sets the base's mass properties where legs move by prescription.
 *
 * @param moving  28, see StarWork.base: about O, body components, SI. Mass must be constant.
 */
export function setMovingBase(model: StarModel, work: StarWork, moving: ArrayLike<number>): void {
  work.isMoving = true;
  setBase(model, work, moving);
  for (let k = 10; k < 28; k++) work.base[k] = moving[k]!;
}

/**
 * Sets where the planted point is in the body frame, how fast it moves and how that changes: 9 numbers. The
 * motion of a body over planted feet enters here, the line of an edge footing moves with it.
 */
export function setPlanted(work: StarWork, planted: ArrayLike<number>): void {
  work.isMoving = true;
  for (let k = 0; k < 9; k++) work.place.planted[k] = planted[k]!;
}
