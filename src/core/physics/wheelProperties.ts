import { MATERIALS, type WheelPart } from '../rig';
import { formatQuantity } from '../units';
import type { FormulaNotes } from './formula';

/** kg/m^3; bolts are given by mass, their volume is that of steel. */
const BOLT_DENSITY = 7850;

export interface PartProperties {
  readonly volume: number;
  readonly mass: number;
  /** kg*m^2 about the spin axis. */
  readonly spinInertia: number;
  /** kg*m^2 about a diameter through the part's own centre; of two balls or bolts, the mean of two diameters. */
  readonly transverseInertia: number;
  /** kg*m^2, greatest less least inertia about a diameter: not 0 only for two balls or two bolts. */
  readonly transverseSpread: number;
  readonly offset: number;
}

export interface WheelProperties {
  readonly mass: number;
  readonly volume: number;
  /** kg*m^2, J_s. */
  readonly spinInertia: number;
  /** kg*m^2, J_t about a diameter through the wheel's centre of mass. */
  readonly transverseInertia: number;
  /** kg*m^2, greatest less least inertia about a diameter; the dynamics takes it as 0. */
  readonly transverseSpread: number;
  /** m, axial place of the centre of mass from the datum. */
  readonly centre: number;
  /** m, furthest material from the spin axis. */
  readonly outerRadius: number;
  readonly parts: readonly PartProperties[];
}

/** Why a stack cannot be a wheel: the field, what it holds, and what it may hold. */
export interface WheelFault {
  readonly field: string;
  /** A number is a length in m; anything else stands as words. */
  readonly value: number | string;
  readonly allowed: string;
}

export type WheelPropertiesOutcome =
  | { readonly kind: 'wheel'; readonly wheel: WheelProperties }
  | { readonly kind: 'refused'; readonly faults: readonly WheelFault[] };

export const WHEEL_PROPERTY_FORMULAS: FormulaNotes<
  'annulusMass' | 'annulusSpin' | 'annulusTransverse' | 'ringOfBalls' | 'ringOfBolts' | 'stack'
> = {
  annulusMass: { formula: 'm = ρ π (R² − r²) t', source: 'definition' },
  annulusSpin: { formula: 'J_s = m (R² + r²) / 2', source: 'standard tables of moments of inertia' },
  annulusTransverse: {
    formula: 'J_t = m (3 (R² + r²) + t²) / 12',
    source: 'standard tables of moments of inertia',
  },
  ringOfBalls: {
    formula:
      'J_s = N m (p² + d²/10), J_t = N m (p²/2 + d²/10), m = ρ π d³/6, N ≥ 3 (N = 2: mean of two diameters)',
    source: 'parallel-axis theorem; sphere 2/5 m r^2',
  },
  ringOfBolts: {
    formula: 'J_s = N m p², J_t = N m p²/2, N ≥ 3 (N = 2: mean of two diameters)',
    source: 'parallel-axis theorem',
  },
  stack: {
    formula: 'J_s = Σ J_s,i; z = Σ m z / Σ m; J_t = Σ (J_t,i + m_i (z_i − z)²)',
    source: 'parallel-axis theorem',
  },
};

/** Furthest radius of a part's material, m. */
export const outerRadiusOf = (part: WheelPart): number => {
  switch (part.kind) {
    case 'disc':
    case 'hub':
      return part.radius;
    case 'rim':
      return part.outerRadius;
    case 'balls':
      return part.pitchRadius + part.diameter / 2;
    case 'bolts':
      return part.pitchRadius;
  }
};

function annulus(
  outer: number,
  inner: number,
  thickness: number,
  density: number,
  offset: number,
): PartProperties {
  const squares = outer * outer + inner * inner;
  const volume = Math.PI * (outer - inner) * (outer + inner) * thickness;
  const mass = density * volume;
  return {
    volume,
    mass,
    spinInertia: (mass * squares) / 2,
    transverseInertia: (mass * (3 * squares + thickness * thickness)) / 12,
    transverseSpread: 0,
    offset,
  };
}

/** `own` is the inertia of one body about its own centre, alike about every axis. */
function ringOf(
  count: number,
  mass: number,
  volume: number,
  pitch: number,
  own: number,
  offset: number,
): PartProperties {
  return {
    volume: count * volume,
    mass: count * mass,
    spinInertia: count * (mass * pitch * pitch + own),
    transverseInertia: count * ((mass * pitch * pitch) / 2 + own),
    transverseSpread: count === 2 ? 2 * mass * pitch * pitch : 0,
    offset,
  };
}

const densityOf = (part: WheelPart): number =>
  part.kind === 'bolts' ? BOLT_DENSITY : MATERIALS[part.material].density;

/**
 * Mass properties of one part about its own centre.
 *
 * @param part  lengths m, mass kg
 *
 * A ring of balls or bolts counts as axisymmetric, which is exact from three up; of two, the spread is told.
 * O(1). Source: standard tables of moments of inertia, parallel-axis theorem.
 */
export function partProperties(part: WheelPart): PartProperties {
  const density = densityOf(part);
  switch (part.kind) {
    case 'disc':
      return annulus(part.radius, part.bore, part.thickness, density, part.offset);
    case 'hub':
      return annulus(part.radius, part.bore, part.length, density, part.offset);
    case 'rim':
      return annulus(part.outerRadius, part.innerRadius, part.width, density, part.offset);
    case 'balls': {
      const volume = (Math.PI * part.diameter ** 3) / 6;
      const mass = density * volume;
      const own = (mass * part.diameter ** 2) / 10;
      return ringOf(part.count, mass, volume, part.pitchRadius, own, part.offset);
    }
    case 'bolts':
      return ringOf(part.count, part.mass, part.mass / density, part.pitchRadius, 0, part.offset);
  }
}

const isRing = (count: number): boolean => Number.isInteger(count) && count >= 2;
const isPositive = (x: number): boolean => Number.isFinite(x) && x > 0;

function faultsOfPart(part: WheelPart, index: number): WheelFault[] {
  const faults: WheelFault[] = [];
  const require = (good: boolean, field: string, value: number | string, allowed: string): void => {
    if (!good) faults.push({ field: `parts[${index}].${field}`, value, allowed });
  };
  require(Number.isFinite(part.offset), 'offset', part.offset, 'a length');
  const ring = (inner: number, outer: number, innerName: string, outerName: string): void => {
    require(isPositive(outer), outerName, outer, 'more than 0');
    require(inner >= 0 &&
      inner < outer, innerName, inner, `from 0 to less than ${formatQuantity(outer, 'length')}`);
  };
  switch (part.kind) {
    case 'disc':
    case 'hub':
      ring(part.bore, part.radius, 'bore', 'radius');
      if (part.kind === 'disc')
        require(isPositive(part.thickness), 'thickness', part.thickness, 'more than 0');
      else require(isPositive(part.length), 'length', part.length, 'more than 0');
      break;
    case 'rim':
      ring(part.innerRadius, part.outerRadius, 'innerRadius', 'outerRadius');
      require(isPositive(part.width), 'width', part.width, 'more than 0');
      break;
    case 'balls': {
      require(isRing(part.count), 'count', String(part.count), 'a whole number, at least 2');
      require(isPositive(part.pitchRadius), 'pitchRadius', part.pitchRadius, 'more than 0');
      const room = 2 * part.pitchRadius * Math.sin(Math.PI / Math.max(part.count, 2));
      const fits = isPositive(part.diameter) && part.diameter <= room * (1 + 1e-12);
      require(fits, 'diameter', part.diameter, `more than 0, at most ${formatQuantity(room, 'length')}, or the balls overlap`);
      break;
    }
    case 'bolts':
      require(isRing(part.count), 'count', String(part.count), 'a whole number, at least 2');
      require(isPositive(part.pitchRadius), 'pitchRadius', part.pitchRadius, 'more than 0');
      require(isPositive(part.mass), 'mass', formatQuantity(part.mass, 'mass'), 'more than 0');
      break;
  }
  return faults;
}

/**
 * Mass, J_s, J_t and centre of a wheel from its stack.
 *
 * @param parts  coaxial parts; where they overlap in space both are counted
 * @returns      the wheel, or every field that cannot stand, with what it may hold
 *
 * A groove or bolt hole is not cut out of the part that carries it: give the part less width, or the bolt
 * its mass net of the hole. O(parts). Source: parallel-axis theorem.
 */
export function wheelProperties(parts: readonly WheelPart[]): WheelPropertiesOutcome {
  const faults = parts.flatMap(faultsOfPart);
  if (parts.length === 0) faults.push({ field: 'parts', value: 'none', allowed: 'at least one part' });
  if (faults.length > 0) return { kind: 'refused', faults };
  const properties = parts.map((part) => partProperties(part));
  let mass = 0;
  let volume = 0;
  let moment = 0;
  let spinInertia = 0;
  let transverseSpread = 0;
  for (const p of properties) {
    mass += p.mass;
    volume += p.volume;
    moment += p.mass * p.offset;
    spinInertia += p.spinInertia;
    transverseSpread += p.transverseSpread;
  }
  const centre = moment / mass;
  let transverseInertia = 0;
  for (const p of properties) transverseInertia += p.transverseInertia + p.mass * (p.offset - centre) ** 2;
  const outerRadius = Math.max(...parts.map(outerRadiusOf));
  return {
    kind: 'wheel',
    wheel: {
      mass,
      volume,
      spinInertia,
      transverseInertia,
      transverseSpread,
      centre,
      outerRadius,
      parts: properties,
    },
  };
}
