import type { PlaneStress } from './discStress';

/**
 * Rings of even thickness joined one round the other (hub, web, rim), each to the ring inside it: a tree, as a
 * web may carry a rim at either face. Everything is worked out at 1 rad/s; stress and growth rise with speed
 * squared.
 */
export interface Ring {
  readonly inner: number;
  readonly outer: number;
  readonly thickness: number;
  /** kg/m^3. */
  readonly density: number;
  /** Pa. */
  readonly youngsModulus: number;
  readonly poissonRatio: number;
  /** Index of the ring it is carried by, which must come earlier in the list; -1 when nothing carries it. */
  readonly carrier: number;
  /** kg/rad: outward pull at its outer edge of what it carries (bolts, balls), mass times radius per metre of circumference. */
  readonly edgePull: number;
  /** The same at its inner edge, such as balls lying against its bore. */
  readonly borePull: number;
}

/**
 * Lame constants of one ring at 1 rad/s:
 * sigma_r = A - B/r^2 - (3+nu)/8 rho r^2, sigma_theta = A + B/r^2 - (1+3 nu)/8 rho r^2.
 */
export interface RingField {
  readonly A: number;
  readonly B: number;
}

export const ringStress = (ring: Ring, field: RingField, radius: number): PlaneStress => {
  const rr = radius * radius;
  const { density, poissonRatio } = ring;
  const far = rr > 0 ? field.B / rr : 0;
  return {
    radial: field.A - far - ((3 + poissonRatio) / 8) * density * rr,
    hoop: field.A + far - ((1 + 3 * poissonRatio) / 8) * density * rr,
  };
};

/** Growth of a radius at 1 rad/s, m. */
export const ringGrowth = (ring: Ring, field: RingField, radius: number): number => {
  const s = ringStress(ring, field, radius);
  return (radius / ring.youngsModulus) * (s.hoop - ring.poissonRatio * s.radial);
};

/** What an edge asks of the ring inside it: force per metre = fixed + slope * growth. */
interface EdgeLaw {
  readonly fixed: number;
  readonly slope: number;
}

/** The linear map from (A, B) to edge force and growth at a radius: value = a A + b B + c. */
interface EdgeMap {
  readonly a: number;
  readonly b: number;
  readonly c: number;
}

function forceMap(ring: Ring, radius: number): EdgeMap {
  const rr = radius * radius;
  return {
    a: ring.thickness,
    b: -ring.thickness / rr,
    c: (-ring.thickness * (3 + ring.poissonRatio) * ring.density * rr) / 8,
  };
}

function growthMap(ring: Ring, radius: number): EdgeMap {
  const { poissonRatio: nu, youngsModulus, density } = ring;
  return {
    a: ((1 - nu) * radius) / youngsModulus,
    b: (1 + nu) / (youngsModulus * radius),
    c: (-(1 - nu * nu) * density * radius ** 3) / (8 * youngsModulus),
  };
}

/** The row of (A, B) that says: the edge force equals what is asked of it there. */
function edgeRow(ring: Ring, radius: number, law: EdgeLaw): EdgeMap {
  const force = forceMap(ring, radius);
  const growth = growthMap(ring, radius);
  return {
    a: force.a - law.slope * growth.a,
    b: force.b - law.slope * growth.b,
    c: force.c - law.slope * growth.c - law.fixed,
  };
}

/** Solves two rows for zero; columns scaled by the caller's choice of radius keep it well conditioned. */
function solveRows(first: EdgeMap, second: EdgeMap): RingField {
  const determinant = first.a * second.b - first.b * second.a;
  return {
    A: (first.b * second.c - first.c * second.b) / determinant,
    B: (first.c * second.a - first.a * second.c) / determinant,
  };
}

const shifted = (map: EdgeMap, by: number): EdgeMap => ({ a: map.a, b: map.b, c: map.c - by });

const mapped = (map: EdgeMap, field: RingField): number => map.a * field.A + map.b * field.B + map.c;

/** How the bore edge of a ring answers growth, once its outer edge is known to obey `outer`. */
function boreLaw(ring: Ring, outer: EdgeLaw): EdgeLaw {
  const row = edgeRow(ring, ring.outer, outer);
  const growth = growthMap(ring, ring.inner);
  const force = forceMap(ring, ring.inner);
  // The growth that a free bore would have sets the scale, so that the slope is not a difference of near-equals.
  const unit = ring.inner;
  const fixed = mapped(force, solveRows(row, growth));
  const slope = (mapped(force, solveRows(row, shifted(growth, unit))) - fixed) / unit;
  return { fixed: fixed + ring.borePull, slope };
}

/**
 * Stresses of rings joined without slip, at 1 rad/s.
 *
 * @param rings  each after the ring that carries it; a ring with a carrier has an inner radius above 0
 * @returns      constants of each ring, in order; multiply stresses and growths by speed squared
 *
 * Inward over the tree each edge becomes one linear law, outward the laws are filled in. O(rings). Source:
 * Timoshenko & Goodier, Theory of Elasticity, rotating disks, with continuity of growth and force at each
 * joint (thickness steps spread at once, as in Grammel's step method).
 */
export function joinedDiscs(rings: readonly Ring[]): RingField[] {
  const outer: EdgeLaw[] = rings.map((ring) => ({ fixed: ring.edgePull, slope: 0 }));
  for (let i = rings.length - 1; i >= 0; i--) {
    const ring = rings[i]!;
    if (ring.carrier < 0) continue;
    if (!(ring.carrier < i && ring.inner > 0))
      throw new RangeError('a carried ring follows its carrier and is bored');
    const law = boreLaw(ring, outer[i]!);
    const held = outer[ring.carrier]!;
    // Forces are per metre of circumference at radii that agree to the width of the joint.
    outer[ring.carrier] = { fixed: held.fixed + law.fixed, slope: held.slope + law.slope };
  }
  const fields: RingField[] = [];
  rings.forEach((ring, i) => {
    const row = edgeRow(ring, ring.outer, outer[i]!);
    if (ring.carrier >= 0) {
      const carrier = rings[ring.carrier]!;
      const growth = ringGrowth(carrier, fields[ring.carrier]!, carrier.outer);
      fields.push(solveRows(row, shifted(growthMap(ring, ring.inner), growth)));
    } else if (ring.inner > 0) {
      fields.push(solveRows(row, shifted(forceMap(ring, ring.inner), -ring.borePull)));
    } else {
      fields.push({ A: -row.c / row.a, B: 0 });
    }
  });
  return fields;
}

/** Tension the joint to its carrier must hold, Pa on the ring's own inner edge, at 1 rad/s; negative: it presses. */
export const jointTension = (ring: Ring, field: RingField): number =>
  ringStress(ring, field, ring.inner).radial + ring.borePull / ring.thickness;
