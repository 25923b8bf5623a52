import type { HullBody, Section } from '../rig';
import { formatQuantity } from '../units';

/**
 * A cross-section of a hull as closed polygons in body axes: y to the left, z up, z = 0 at the keel line of the
 * hull proper. Points run anticlockwise as y, z, y, z, ... The deck is taken as closed and watertight.
 */
export interface HullSection {
  /** The hull first, then the fin if there is one; they do not overlap. */
  readonly outlines: readonly Float64Array[];
  /** m, hull length over which the section is taken as constant. */
  readonly length: number;
  /** m, lowest point below the keel line (0 without a fin). */
  readonly keelDepth: number;
  /** m, height of the deck above the keel line. */
  readonly deckHeight: number;
  /** m, half the beam at the deck. */
  readonly halfBeam: number;
}

export interface SectionFault {
  /** Within the body, such as `section.deadrise`. */
  readonly field: string;
  /** SI. */
  readonly value: number;
  readonly dimension: 'length' | 'angle';
  readonly allowed: string;
}

export type HullSectionOutcome =
  | { readonly kind: 'section'; readonly section: HullSection }
  | { readonly kind: 'refused'; readonly faults: readonly SectionFault[] };

/** Chords per quarter turn of the bilge: the section's area falls short by less than 2e-5 of the bilge's. */
const BILGE_CHORDS = 128;

type Point = readonly [y: number, z: number];

/** Straight V bottom and upright sides: the left half from the keel up. */
const deadriseWall = (half: number, depth: number, deadrise: number): readonly Point[] =>
  deadrise > 0
    ? [
        [0, 0],
        [half, half * Math.tan(deadrise)],
        [half, depth],
      ]
    : [
        [half, 0],
        [half, depth],
      ];

/** Flat bottom, a quarter circle, upright sides: the left half from the keel up. */
function bilgeWall(half: number, depth: number, radius: number): readonly Point[] {
  if (!(radius > 0)) {
    return [
      [half, 0],
      [half, depth],
    ];
  }
  const wall: Point[] = [];
  for (let i = 0; i <= BILGE_CHORDS; i++) {
    const angle = (Math.PI / 2) * (i / BILGE_CHORDS);
    wall.push([half - radius + radius * Math.sin(angle), radius - radius * Math.cos(angle)]);
  }
  if (radius < depth) wall.push([half, depth]);
  return wall;
}

/**
 * Shell line of a section, y to the left and z up, m: from the right-hand deck edge round the bottom to the
 * left-hand one (anticlockwise). The deck is the line that would close it. O(chords).
 */
export function sectionOutline(section: Section): readonly Point[] {
  const half = section.beam / 2;
  const left =
    section.kind === 'deadrise'
      ? deadriseWall(half, section.depth, section.deadrise)
      : bilgeWall(half, section.depth, section.bilgeRadius);
  const right = left.filter(([y]) => y > 0).map(([y, z]): Point => [-y, z]);
  return [...right.reverse(), ...left];
}

/**
 * The section of a hull, keel fin spread over the hull's length so that its volume is kept.
 *
 * @param hull  lengths m, deadrise rad
 * @returns     the section, or the fields that cannot stand together
 *
 * O(chords).
 */
export function hullSection(hull: HullBody): HullSectionOutcome {
  const faults = sectionFaults(hull);
  if (faults.length > 0) return { kind: 'refused', faults };
  const { section, keel, length } = hull;
  const outlines = [Float64Array.from(sectionOutline(section).flat())];
  if (keel.kind === 'fin') {
    const half = (keel.thickness * keel.length) / length / 2;
    outlines.push(Float64Array.of(-half, -keel.depth, half, -keel.depth, half, 0, -half, 0));
  }
  return {
    kind: 'section',
    section: {
      outlines,
      length,
      keelDepth: keel.kind === 'fin' ? keel.depth : 0,
      deckHeight: section.depth,
      halfBeam: section.beam / 2,
    },
  };
}

function sectionFaults(hull: HullBody): SectionFault[] {
  const { section, keel, length } = hull;
  const faults: SectionFault[] = [];
  if (section.kind === 'deadrise') {
    const { deadrise: value } = section;
    const steepest = Math.atan(section.depth / (section.beam / 2));
    if (!(value < steepest)) {
      const allowed = `less than ${formatQuantity(steepest, 'angle')}, or the chine stands above the deck`;
      faults.push({ field: 'section.deadrise', value, dimension: 'angle', allowed });
    }
  } else {
    const { bilgeRadius: value } = section;
    const largest = Math.min(section.beam / 2, section.depth);
    if (!(value <= largest)) {
      const allowed = `at most ${formatQuantity(largest, 'length')}, the smaller of half the beam and the depth`;
      faults.push({ field: 'section.bilgeRadius', value, dimension: 'length', allowed });
    }
  }
  if (keel.kind === 'fin' && !(keel.length <= length)) {
    const allowed = `at most the hull's ${formatQuantity(length, 'length')}`;
    faults.push({ field: 'keel.length', value: keel.length, dimension: 'length', allowed });
  }
  return faults;
}
