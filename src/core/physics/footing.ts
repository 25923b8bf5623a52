/**
 * How the base meets the world: which freedoms it keeps, and how its pose is written down.
 *
 * | footing            | pose numbers                           | base speeds                     |
 * |--------------------|----------------------------------------|---------------------------------|
 * | firm               | none                                   | none                            |
 * | edge, float (roll) | angle about the axis                   | its rate                        |
 * | rocker (cylinder)  | angle about the axis                   | its rate                        |
 * | point              | quaternion                             | body rate, body components      |
 * | rocker (ball)      | quaternion, x and y of the ball centre | body rate, body components      |
 * | float (all), free  | quaternion, place of the body's origin | body rate, velocity of origin,  |
 * |                    |                                        | both in body components         |
 */
import { compileRighting, type Righting, type RightingModel } from './footingFloat';
import { unit3, type Vec3 } from './spatial';

/** Feet flat on the ground: no freedoms while the centre of pressure stays inside the support polygon. */
export interface FirmFooting {
  readonly kind: 'firm';
  /** Corners of the support polygon, anticlockwise seen from above, body frame x and y, m. */
  readonly support: readonly (readonly [number, number])[];
  /** Height of the sole in the body frame, m. */
  readonly soleHeight: number;
}

/** Pivots about a line fixed in world and body. */
export interface EdgeFooting {
  readonly kind: 'edge';
  readonly point: Vec3;
  readonly axis: Vec3;
}

/** Pivots about a point fixed in world and body. */
export interface PointFooting {
  readonly kind: 'point';
  readonly point: Vec3;
}

/** Rolls without slipping on a round bottom: a cylinder about a level axis, or a ball. The ground is z = const. */
export interface RockerFooting {
  readonly kind: 'rocker';
  readonly shape: 'cylinder' | 'ball';
  /** A point on the cylinder's axis, or the ball's centre, body frame, m. */
  readonly centre: Vec3;
  readonly radius: number;
  /** Direction of the cylinder's axis, body frame; level. Not used for a ball. */
  readonly axis: Vec3;
}

/** Floats, rolling about a line, or with all six freedoms and simple heave and pitch. */
export interface FloatFooting {
  readonly kind: 'float';
  readonly freedoms: 'roll' | 'all';
  /** A point on the roll line, body frame, m; also where heave is measured. */
  readonly point: Vec3;
  /** Righting of the whole rig with its gimbals at rest: the weight is already in it. */
  readonly righting: Righting;
  /** Added inertia in roll, kg*m^2. */
  readonly addedInertia: number;
  /** N*m per rad/s. */
  readonly linearDamping: number;
  /** N*m per (rad/s)^2. */
  readonly quadraticDamping: number;
  /** Only for freedoms 'all'. */
  readonly heave?: { readonly stiffness: number; readonly damping: number };
  /** Only for freedoms 'all'. Metacentric height in pitch, m, and damping, N*m per rad/s. */
  readonly pitch?: { readonly metacentricHeight: number; readonly damping: number };
}

export interface FreeFooting {
  readonly kind: 'free';
}

export type StarFooting =
  | FirmFooting
  | EdgeFooting
  | PointFooting
  | RockerFooting
  | FloatFooting
  | FreeFooting;

export type BasePose = 'none' | 'angle' | 'attitude' | 'rolling-ball' | 'free';

export interface FootingModel {
  readonly kind: StarFooting['kind'];
  readonly pose: BasePose;
  readonly poseSize: number;
  readonly speeds: number;
  /** Point of the line, pivot or centre, body frame. */
  readonly point: Float64Array;
  /** Unit direction of the line, body frame. */
  readonly axis: Float64Array;
  /** Rolling radius; 0 unless a rocker. */
  readonly radius: number;
  readonly floats: FloatModel | null;
}

export interface FloatModel {
  readonly righting: RightingModel;
  readonly addedInertia: number;
  readonly linearDamping: number;
  readonly quadraticDamping: number;
  readonly heaveStiffness: number;
  readonly heaveDamping: number;
  readonly pitchHeight: number;
  readonly pitchDamping: number;
}

const poseOf = (footing: StarFooting): BasePose => {
  switch (footing.kind) {
    case 'firm':
      return 'none';
    case 'edge':
      return 'angle';
    case 'point':
      return 'attitude';
    case 'rocker':
      return footing.shape === 'ball' ? 'rolling-ball' : 'angle';
    case 'float':
      return footing.freedoms === 'all' ? 'free' : 'angle';
    case 'free':
      return 'free';
  }
};

const sizes: Record<BasePose, readonly [pose: number, speeds: number]> = {
  none: [0, 0],
  angle: [1, 1],
  attitude: [4, 3],
  'rolling-ball': [6, 3],
  free: [7, 6],
};

const forward: Vec3 = [1, 0, 0];

/** Compiles a footing. Throws RangeError on an axis of no length or a rolling axis that is not level. */
export function compileFooting(footing: StarFooting): FootingModel {
  const pose = poseOf(footing);
  const [poseSize, speeds] = sizes[pose];
  const point = new Float64Array(3);
  const axis = new Float64Array(forward);
  let radius = 0;
  let floats: FloatModel | null = null;
  if (footing.kind === 'edge' || footing.kind === 'point' || footing.kind === 'float')
    point.set(footing.point);
  if (footing.kind === 'edge') axis.set(unit3(footing.axis));
  if (footing.kind === 'rocker') {
    point.set(footing.centre);
    radius = footing.radius;
    if (footing.shape === 'cylinder') {
      axis.set(unit3(footing.axis));
      if (Math.abs(axis[2]!) > 1e-12) throw new RangeError('the axis of a rolling cylinder must be level');
    }
  }
  if (footing.kind === 'float') {
    floats = {
      righting: compileRighting(footing.righting),
      addedInertia: footing.addedInertia,
      linearDamping: footing.linearDamping,
      quadraticDamping: footing.quadraticDamping,
      heaveStiffness: footing.heave?.stiffness ?? 0,
      heaveDamping: footing.heave?.damping ?? 0,
      pitchHeight: footing.pitch?.metacentricHeight ?? 0,
      pitchDamping: footing.pitch?.damping ?? 0,
    };
  }
  return { kind: footing.kind, pose, poseSize, speeds, point, axis, radius, floats };
}

/**
 * The footing a firm rig has once its centre of pressure reaches a side of the support polygon: it tips about
 * that side. Side i runs from corner i to corner i + 1.
 */
export function tippingEdge(footing: FirmFooting, side: number): EdgeFooting {
  const from = footing.support[side]!;
  const to = footing.support[(side + 1) % footing.support.length]!;
  return {
    kind: 'edge',
    point: [from[0], from[1], footing.soleHeight],
    axis: unit3([to[0] - from[0], to[1] - from[1], 0]),
  };
}
