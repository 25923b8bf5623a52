import type { FormulaNotes } from './formula';

/**
 * Closed forms for spinning discs and rings of even thickness, in plane stress: good while a part is thin
 * against its radius. Stresses Pa, tension positive; lengths m; density kg/m^3; speed rad/s.
 */
export interface PlaneStress {
  readonly radial: number;
  readonly hoop: number;
}

export const DISC_STRESS_FORMULAS: FormulaNotes<
  | 'thinRing'
  | 'solidDisc'
  | 'boredDisc'
  | 'pressedRing'
  | 'boreGrowth'
  | 'equivalent'
  | 'holeEdge'
  | 'shapeFactor'
  | 'meanHoop'
  | 'ballContact'
> = {
  thinRing: { formula: 'σ = ρ v²', source: "Timoshenko & Goodier, Theory of Elasticity; Roark's Formulas" },
  solidDisc: {
    formula: 'σ_r = (3+ν)/8 ρ ω² (R² − r²), σ_θ = ρ ω²/8 ((3+ν) R² − (1+3ν) r²)',
    source: 'Timoshenko & Goodier, Theory of Elasticity, rotating disks',
  },
  boredDisc: {
    formula:
      'σ_r = (3+ν)/8 ρ ω² (a² + b² − a²b²/r² − r²), σ_θ = (3+ν)/8 ρ ω² (a² + b² + a²b²/r² − (1+3ν)/(3+ν) r²)',
    source: 'Timoshenko & Goodier, Theory of Elasticity, rotating disks',
  },
  pressedRing: {
    formula: 'σ_r = p a²/(b² − a²) (1 − b²/r²), σ_θ = p a²/(b² − a²) (1 + b²/r²)',
    source: 'Lamé; Timoshenko & Goodier',
  },
  boreGrowth: {
    formula: 'u(a) = a/E ρ ω²/4 ((3+ν) b² + (1−ν) a²)',
    source: 'Timoshenko & Goodier, Theory of Elasticity, rotating disks',
  },
  equivalent: { formula: 'σ_e = √(σ_r² − σ_r σ_θ + σ_θ²)', source: 'von Mises, plane stress' },
  holeEdge: { formula: 'σ_max = 3 σ_1 − σ_2', source: 'Kirsch; Timoshenko & Goodier' },
  shapeFactor: { formula: 'E/m = K σ/ρ', source: 'Genta, Kinetic Energy Storage (1985)' },
  meanHoop: {
    formula: 'σ_m = ∫ ρ ω² r² t dr / ∫ t dr; bursts near σ_m = σ_ultimate',
    source: 'Robinson, Trans. ASME 66 (1944); from memory',
  },
  ballContact: {
    formula: 'p_0 = (6 F E*² / (π³ R²))^(1/3), R = √(R_1 R_2), 1/R_1 = 2/d − 1/r_g, R_2 = d/2',
    source: 'Hertz; Johnson, Contact Mechanics (1985), ch. 4, mildly elliptical contact',
  },
};

/** Hoop stress of a thin ring at rim speed, Pa. Source: Timoshenko & Goodier; Roark. */
export const thinRingStress = (density: number, rimSpeed: number): number => density * rimSpeed * rimSpeed;

/**
 * Stress in a solid disc at radius r.
 *
 * @param outer   m
 * @param radius  m, 0 to outer
 *
 * O(1). Source: Timoshenko & Goodier, Theory of Elasticity, rotating disks.
 */
export function solidDiscStress(
  density: number,
  poisson: number,
  speed: number,
  outer: number,
  radius: number,
): PlaneStress {
  const load = (density * speed * speed) / 8;
  const rr = radius * radius;
  return {
    radial: load * (3 + poisson) * (outer * outer - rr),
    hoop: load * ((3 + poisson) * outer * outer - (1 + 3 * poisson) * rr),
  };
}

/**
 * Stress at radius r in a disc with a central hole, or a thick rim that nothing holds.
 *
 * @param inner   m, more than 0
 * @param outer   m
 * @param radius  m, inner to outer
 *
 * O(1). The greatest is the hoop stress at the bore. Source: as `solidDiscStress`.
 */
export function boredDiscStress(
  density: number,
  poisson: number,
  speed: number,
  inner: number,
  outer: number,
  radius: number,
): PlaneStress {
  const load = ((3 + poisson) * density * speed * speed) / 8;
  const aa = inner * inner;
  const bb = outer * outer;
  const rr = radius * radius;
  const cross = (aa * bb) / rr;
  return {
    radial: load * (aa + bb - cross - rr),
    hoop: load * (aa + bb + cross - ((1 + 3 * poisson) / (3 + poisson)) * rr),
  };
}

/** Stress at radius r in a ring pressed outward by a pressure at its bore, Pa. Source: Lamé. */
export function pressedRingStress(
  pressure: number,
  inner: number,
  outer: number,
  radius: number,
): PlaneStress {
  const base = (pressure * inner * inner) / ((outer - inner) * (outer + inner));
  const ratio = (outer * outer) / (radius * radius);
  return { radial: base * (1 - ratio), hoop: base * (1 + ratio) };
}

/** How much the bore radius of a spinning disc grows, m. Source: as `solidDiscStress`. */
export const boreGrowth = (
  density: number,
  poisson: number,
  youngsModulus: number,
  speed: number,
  inner: number,
  outer: number,
): number =>
  ((inner * density * speed * speed) / (4 * youngsModulus)) *
  ((3 + poisson) * outer * outer + (1 - poisson) * inner * inner);

/**
 * Stress in a ring that a row of balls presses outward: its own spin plus the balls' pull spread evenly.
 *
 * @param wall       m, radius of the groove wall the balls lie against
 * @param outer      m, outer radius of the ring
 * @param width      m, axial width of the ring
 * @param ballMass   kg, of all balls
 * @param pitch      m, radius of the ball centres
 * @param radius     m, wall to outer
 *
 * O(1). The wall stands alone: the web below the groove is not counted on. Source: Lamé; Timoshenko & Goodier.
 */
export function ballRingStress(
  density: number,
  poisson: number,
  speed: number,
  wall: number,
  outer: number,
  width: number,
  ballMass: number,
  pitch: number,
  radius: number,
): PlaneStress {
  const pressure = (ballMass * speed * speed * pitch) / (2 * Math.PI * wall * width);
  const pressed = pressedRingStress(pressure, wall, outer, radius);
  const own = boredDiscStress(density, poisson, speed, wall, outer, radius);
  return { radial: pressed.radial + own.radial, hoop: pressed.hoop + own.hoop };
}

/** Von Mises stress in plane stress, Pa. */
export const equivalentStress = (s: PlaneStress): number =>
  Math.sqrt(s.radial * s.radial - s.radial * s.hoop + s.hoop * s.hoop);

/** Peak stress at the edge of a small round hole in a plane field, Pa. Source: Kirsch. */
export const holeEdgeStress = (s: PlaneStress): number =>
  Math.max(3 * s.hoop - s.radial, 3 * s.radial - s.hoop);

/** Greatest Hertz pressure of one ball on its groove wall, Pa, and half the width of the dent, m. */
export interface BallContact {
  readonly pressure: number;
  readonly halfWidth: number;
}

/**
 * Contact of a ball with a cylindrical groove wall.
 *
 * @param force       N, of one ball
 * @param diameter    m, of the ball
 * @param wall        m, radius of the groove wall, more than half the diameter
 * @param modulus     Pa, contact modulus: 1/E* = (1-nu1^2)/E1 + (1-nu2^2)/E2
 *
 * O(1). The contact is taken as round with the mean radius. A wall starts to yield below the surface near a
 * pressure of 1.6 times its yield stress. Source: Hertz; Johnson, Contact Mechanics, ch. 4 and 6.
 */
export function ballContact(force: number, diameter: number, wall: number, modulus: number): BallContact {
  const around = 1 / (2 / diameter - 1 / wall);
  const radius = Math.sqrt(around * (diameter / 2));
  const pressure = Math.cbrt((6 * force * modulus * modulus) / (Math.PI ** 3 * radius * radius));
  return { pressure, halfWidth: Math.cbrt((3 * force * radius) / (4 * modulus)) };
}

/** Energy per mass over strength per density, K, of the common shapes. Source: Genta (1985). */
export const THIN_RING_SHAPE_FACTOR = 0.5;

export const solidDiscShapeFactor = (poisson: number): number => 2 / (3 + poisson);

/** Flat disc with a hole; `boreRatio` inner over outer radius, tending to 1/(3+nu) for a pinhole. */
export const boredDiscShapeFactor = (poisson: number, boreRatio: number): number => {
  const aa = boreRatio * boreRatio;
  return (1 + aa) / (3 + poisson + (1 - poisson) * aa);
};

/** Constant-stress disc cut off at its rim; `fullness` B = rho omega^2 R^2 / (2 sigma). */
export const constantStressShapeFactor = (fullness: number): number =>
  fullness === 0 ? 0 : 1 - fullness / Math.expm1(fullness);

/** Mean hoop stress across a flat ring or disc, Pa: what sets the burst of a ductile wheel. Source: Robinson. */
export const meanHoopStress = (density: number, speed: number, inner: number, outer: number): number =>
  (density * speed * speed * (outer * outer + outer * inner + inner * inner)) / 3;

/** Tip speed at which a thin ring reaches a stress, m/s. */
export const thinRingLimitSpeed = (stress: number, density: number): number => Math.sqrt(stress / density);

/** Tip speed at which a solid disc reaches a stress at its centre, m/s. */
export const solidDiscLimitSpeed = (stress: number, density: number, poisson: number): number =>
  Math.sqrt((8 * stress) / ((3 + poisson) * density));
