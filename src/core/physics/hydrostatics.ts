import type { FormulaNotes } from './formula';
import type { HullSection } from './hullSection';
import { createSlice, type SectionSlice, sliceBelow } from './sectionSlice';

export const STANDARD_GRAVITY = 9.806_65;

/** What floats: all of the rig's weight, with its centre in body axes. */
export interface Loading {
  /** kg. */
  readonly mass: number;
  /** m, height of the centre of mass above the keel line, KG. */
  readonly centreHeight: number;
  /** m, centre of mass to the left of the middle line. */
  readonly centreOffset: number;
  /** kg/m^3, of the water. */
  readonly waterDensity: number;
}

export interface Flotation {
  /** m, waterline above the keel line, upright. */
  readonly waterline: number;
  /** m, waterline above the lowest point of hull or fin. */
  readonly draught: number;
  /** m, deck above the waterline. */
  readonly freeboard: number;
  /** m^3. */
  readonly volume: number;
  /** N, equal to the weight. */
  readonly buoyancy: number;
  /** m, breadth of the waterplane. */
  readonly waterlineBeam: number;
  /** m, centre of buoyancy above the keel line. */
  readonly KB: number;
  /** m, metacentre above the centre of buoyancy. */
  readonly BM: number;
  /** m, metacentric height; negative means it will not stay upright. */
  readonly GM: number;
}

export interface RightingArms {
  /** rad, rising from 0. */
  readonly angle: Float64Array;
  /** m, GZ, positive when it rights a heel to that side; both sides alike when the load is central. */
  readonly arm: Float64Array;
  readonly greatestArm: number;
  readonly greatestArmAngle: number;
  /** rad, first angle past the greatest arm at which the arm is gone; undefined when beyond the curve. */
  readonly vanishingAngle: number | undefined;
  /** rad, at which the deck edge goes under; undefined when beyond the curve. */
  readonly deckImmersionAngle: number | undefined;
  /** rad, angle at which a rig of negative GM comes to rest; undefined when upright or never. */
  readonly lollAngle: number | undefined;
  /** m*rad, area below the curve up to each angle: work per weight. */
  readonly area: Float64Array;
}

export type FlotationOutcome =
  | { readonly kind: 'floats'; readonly flotation: Flotation }
  /** Heavier than the water the closed hull can displace. */
  | { readonly kind: 'sinks'; readonly mass: number; readonly mostMass: number };

export type RightingOutcome =
  | { readonly kind: 'floats'; readonly arms: RightingArms }
  | { readonly kind: 'sinks'; readonly mass: number; readonly mostMass: number };

export const HYDROSTATIC_FORMULAS: FormulaNotes<
  'waterline' | 'buoyancy' | 'KB' | 'BM' | 'GM' | 'GZ' | 'wallSided' | 'loll'
> = {
  waterline: {
    formula: 'ρ L A(z) = m, A from the section polygon cut at z',
    source: 'Archimedes; Derrett & Barrass, Ship Stability for Masters and Mates',
  },
  buoyancy: { formula: 'ρ g V = m g', source: 'Archimedes' },
  KB: { formula: 'KB = ∫ z dA / A below the waterline', source: 'centroid of the cut polygon' },
  BM: { formula: 'BM = I_waterplane / V = b³ / (12 A)', source: 'Derrett & Barrass' },
  GM: { formula: 'GM = KB + BM − KG', source: 'Derrett & Barrass' },
  GZ: {
    formula: 'GZ = y_G − y_B across the heeled waterline, section cut at constant area',
    source: 'statics; section integration',
  },
  wallSided: { formula: 'GZ = sin φ (GM + ½ BM tan² φ)', source: 'Derrett & Barrass' },
  loll: { formula: 'tan φ = √(−2 GM / BM)', source: 'Derrett & Barrass' },
};

/** Closed area of all outlines, m^2. */
export const sectionArea = (section: HullSection): number => {
  const slice = createSlice(section);
  sliceBelow(section, 0, Number.MAX_VALUE, slice);
  return slice.area;
};

const largestRadius = (section: HullSection): number =>
  Math.sqrt(section.halfBeam ** 2 + Math.max(section.deckHeight, section.keelDepth) ** 2);

/**
 * Level of the water in heeled axes that leaves a given area below it: Newton on the area, whose slope is the
 * breadth, held inside a shrinking bracket. The slice of that level is left in `slice`.
 */
function findLevel(
  section: HullSection,
  heel: number,
  area: number,
  slice: SectionSlice,
  start: number,
): number {
  let low = -largestRadius(section);
  let high = -low;
  let level = start;
  for (let i = 0; i < 80; i++) {
    sliceBelow(section, heel, level, slice);
    const excess = slice.area - area;
    if (Math.abs(excess) <= 2e-15 * area) break;
    if (excess > 0) high = level;
    else low = level;
    const step = slice.breadth > 0 ? level - excess / slice.breadth : Number.NaN;
    const next = step > low && step < high ? step : (low + high) / 2;
    if (Math.abs(next - level) <= 4e-16 * Math.abs(level)) break;
    level = next;
  }
  return level;
}

const displacedArea = (section: HullSection, load: Loading): number =>
  load.mass / (load.waterDensity * section.length);

const sinking = (section: HullSection, load: Loading) => ({
  kind: 'sinks' as const,
  mass: load.mass,
  mostMass: load.waterDensity * section.length * sectionArea(section),
});

const canFloat = (section: HullSection, load: Loading): boolean =>
  load.mass > 0 && displacedArea(section, load) < sectionArea(section);

/**
 * Upright flotation of a hull of constant section: waterline, buoyancy, KB, BM and GM.
 *
 * @param section  polygon section, m
 * @param load     whole mass kg, its centre m above the keel line, water kg/m^3
 * @returns        flotation, or `sinks` with the most the closed hull carries
 *
 * Cost: a few cuts of the polygon. Source: Derrett & Barrass, Ship Stability for Masters and Mates.
 */
export function flotation(section: HullSection, load: Loading): FlotationOutcome {
  if (!canFloat(section, load)) return sinking(section, load);
  const area = displacedArea(section, load);
  const slice = createSlice(section);
  const waterline = findLevel(section, 0, area, slice, 0);
  const KB = slice.momentZ / slice.area;
  const BM = slice.breadthInertia / slice.area;
  return {
    kind: 'floats',
    flotation: {
      waterline,
      draught: waterline + section.keelDepth,
      freeboard: section.deckHeight - waterline,
      volume: area * section.length,
      buoyancy: load.mass * STANDARD_GRAVITY,
      waterlineBeam: slice.breadth,
      KB,
      BM,
      GM: KB + BM - load.centreHeight,
    },
  };
}

/**
 * Righting-arm curve GZ by integrating the section at each heel, displacement held.
 *
 * @param section  polygon section, m; deck closed and watertight, so past deck immersion the curve holds for
 *                 a decked hull only
 * @param load     as for `flotation`
 * @param greatest rad, end of the curve, below pi
 * @param points   number of equal intervals
 * @returns        arms for heel to the right-hand side down (positive roll), or `sinks`
 *
 * Cost: about eight cuts of the polygon a point. Source: statics; checked against the wall-sided formula.
 */
export function rightingArms(
  section: HullSection,
  load: Loading,
  greatest: number = Math.PI / 3,
  points: number = 60,
): RightingOutcome {
  if (!canFloat(section, load)) return sinking(section, load);
  const area = displacedArea(section, load);
  const slice = createSlice(section);
  let level = 0;
  const armAt = (heel: number): number => {
    level = findLevel(section, heel, area, slice, level);
    return gravityOffset(load, heel) - slice.momentY / slice.area;
  };
  const deckEdge = (heel: number): number =>
    section.deckHeight * Math.cos(heel) - section.halfBeam * Math.sin(heel);
  const deckAbove = (heel: number): number => {
    level = findLevel(section, heel, area, slice, level);
    return deckEdge(heel) - level;
  };
  const angle = new Float64Array(points + 1);
  const arm = new Float64Array(points + 1);
  const deck = new Float64Array(points + 1);
  const areaBelow = new Float64Array(points + 1);
  for (let i = 0; i <= points; i++) {
    angle[i] = (greatest * i) / points;
    const middle = i > 0 ? armAt((angle[i]! + angle[i - 1]!) / 2) : 0;
    arm[i] = armAt(angle[i]!);
    deck[i] = deckEdge(angle[i]!) - level;
    if (i > 0) {
      areaBelow[i] = areaBelow[i - 1]! + ((arm[i - 1]! + 4 * middle + arm[i]!) * greatest) / points / 6;
    }
  }
  let top = 0;
  for (let i = 1; i <= points; i++) if (arm[i]! > arm[top]!) top = i;
  const stands = load.centreOffset === 0 && initialSlope(section, load) < 0;
  return {
    kind: 'floats',
    arms: {
      angle,
      arm,
      greatestArm: arm[top]!,
      greatestArmAngle: angle[top]!,
      vanishingAngle: arm[top]! > 0 ? crossing(angle, arm, armAt, top, -1) : undefined,
      deckImmersionAngle: crossing(angle, deck, deckAbove, 0, -1),
      lollAngle: stands ? crossing(angle, arm, armAt, 1, 1) : undefined,
      area: areaBelow,
    },
  };
}

const initialSlope = (section: HullSection, load: Loading): number => {
  const upright = flotation(section, load);
  return upright.kind === 'floats' ? upright.flotation.GM : Number.NaN;
};

/** Across the water, m to the left, of the centre of mass at a heel. */
const gravityOffset = (load: Loading, heel: number): number =>
  load.centreOffset * Math.cos(heel) - load.centreHeight * Math.sin(heel);

/** First angle at or after index `from` where f passes zero rising (+1) or falling (-1); by halving. */
function crossing(
  angle: Float64Array,
  sampled: Float64Array,
  f: (heel: number) => number,
  from: number,
  sense: 1 | -1,
): number | undefined {
  for (let i = from; i + 1 < angle.length; i++) {
    if (!(sense * sampled[i]! <= 0 && sense * sampled[i + 1]! > 0)) continue;
    let low = angle[i]!;
    let high = angle[i + 1]!;
    for (let k = 0; k < 60 && high - low > 1e-13; k++) {
      const middle = (low + high) / 2;
      if (sense * f(middle) > 0) high = middle;
      else low = middle;
    }
    return (low + high) / 2;
  }
  return undefined;
}

/** Righting arm of a wall-sided hull, m; GM and BM m, heel rad. Source: Derrett & Barrass. */
export const wallSidedArm = (GM: number, BM: number, heel: number): number =>
  Math.sin(heel) * (GM + 0.5 * BM * Math.tan(heel) ** 2);

/** Angle of loll of a wall-sided hull, rad; 0 when GM is not negative. Source: Derrett & Barrass. */
export const wallSidedLoll = (GM: number, BM: number): number =>
  GM < 0 ? Math.atan(Math.sqrt((-2 * GM) / BM)) : 0;

/** Draught of a box at which KM is least, and that KM, m: B / sqrt(6). Source: Derrett & Barrass ch. 12. */
export const leastBoxMetacentre = (beam: number): number => beam / Math.sqrt(6);
