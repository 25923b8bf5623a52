import type { FormulaNotes } from './formula';
import type { HullSection } from './hullSection';
import { createSlice, sliceBelow } from './sectionSlice';

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
    formula: 'rho L A(z) = m, A from the section polygon cut at z',
    source: 'Archimedes; Derrett & Barrass, Ship Stability for Masters and Mates',
  },
  buoyancy: { formula: 'rho g V = m g', source: 'Archimedes' },
  KB: { formula: 'KB = int z dA / A below the waterline', source: 'centroid of the cut polygon' },
  BM: { formula: 'BM = I_waterplane / V = b^3 / (12 A)', source: 'Derrett & Barrass' },
  GM: { formula: 'GM = KB + BM - KG', source: 'Derrett & Barrass' },
  GZ: {
    formula: 'GZ = y_G - y_B across the heeled waterline, section cut at constant area',
    source: 'statics; section integration',
  },
  wallSided: { formula: 'GZ = sin(th) (GM + BM tan^2(th) / 2)', source: 'Derrett & Barrass' },
  loll: { formula: 'tan(th) = sqrt(-2 GM / BM)', source: 'Derrett & Barrass' },
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
  slice: ReturnType<typeof createSlice>,
): number {
  let low = -largestRadius(section);
  let high = -low;
  let level = 0;
  for (let i = 0; i < 100; i++) {
    sliceBelow(section, heel, level, slice);
    const excess = slice.area - area;
    if (Math.abs(excess) <= 4e-16 * area) break;
    if (excess > 0) high = level;
    else low = level;
    const step = slice.breadth > 0 ? level - excess / slice.breadth : Number.NaN;
    const next = step > low && step < high ? step : (low + high) / 2;
    if (next === level || high - low <= 1e-16 * high) break;
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
  const waterline = findLevel(section, 0, area, slice);
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
  const armAt = (heel: number): number => {
    findLevel(section, heel, area, slice);
    return gravityOffset(load, heel) - slice.momentY / slice.area;
  };
  const deckAbove = (heel: number): number => {
    const level = findLevel(section, heel, area, slice);
    return section.deckHeight * Math.cos(heel) - section.halfBeam * Math.sin(heel) - level;
  };
  const angle = new Float64Array(points + 1);
  const arm = new Float64Array(points + 1);
  const areaBelow = new Float64Array(points + 1);
  for (let i = 0; i <= points; i++) {
    angle[i] = (greatest * i) / points;
    arm[i] = armAt(angle[i]!);
    if (i > 0) {
      const middle = armAt((angle[i]! + angle[i - 1]!) / 2);
      areaBelow[i] = areaBelow[i - 1]! + ((arm[i - 1]! + 4 * middle + arm[i]!) * greatest) / points / 6;
    }
  }
  let top = 0;
  for (let i = 1; i <= points; i++) if (arm[i]! > arm[top]!) top = i;
  const fall = arm[top]! > 0 ? crossing(angle, armAt, top, -1) : undefined;
  const stands = load.centreOffset === 0 && initialSlope(section, load) < 0;
  return {
    kind: 'floats',
    arms: {
      angle,
      arm,
      greatestArm: arm[top]!,
      greatestArmAngle: angle[top]!,
      vanishingAngle: fall,
      deckImmersionAngle: crossing(angle, deckAbove, 0, -1),
      lollAngle: stands ? crossing(angle, armAt, 1, 1) : undefined,
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
  f: (heel: number) => number,
  from: number,
  sense: 1 | -1,
): number | undefined {
  for (let i = from; i + 1 < angle.length; i++) {
    let low = angle[i]!;
    let high = angle[i + 1]!;
    if (!(sense * f(low) <= 0 && sense * f(high) > 0)) continue;
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
