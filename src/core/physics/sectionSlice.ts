import type { HullSection } from './hullSection';

/** What lies below a level of water, in axes heeled with the water: filled by `sliceBelow`. */
export interface SectionSlice {
  /** m^2. */
  area: number;
  /** m^3, first moments of that area: across the water (to the left) and up. */
  momentY: number;
  momentZ: number;
  /** m, of the water surface inside the section. */
  breadth: number;
  /** m^3, second moment of that surface about its own middle, per metre of hull. */
  breadthInertia: number;
  /** Where the surface meets the outlines. */
  readonly crossings: Float64Array;
}

export const createSlice = (section: HullSection): SectionSlice => ({
  area: 0,
  momentY: 0,
  momentZ: 0,
  breadth: 0,
  breadthInertia: 0,
  crossings: new Float64Array(section.outlines.reduce((sum, points) => sum + points.length / 2, 0)),
});

/**
 * Cuts the section at a level and takes area and moments of what lies below.
 *
 * @param section  outlines in body axes, m
 * @param heel     rad, roll: positive lifts the left side
 * @param level    m, of the water in heeled axes (origin at the keel line)
 * @param out      filled; in heeled axes
 *
 * Green's theorem edge by edge over the clipped outline; the surface itself closes it. O(points), allocates
 * nothing.
 */
export function sliceBelow(section: HullSection, heel: number, level: number, out: SectionSlice): void {
  const c = Math.cos(heel);
  const s = Math.sin(heel);
  let area = 0;
  let momentY = 0;
  let momentZ = 0;
  let count = 0;
  const crossings = out.crossings;
  for (let k = 0; k < section.outlines.length; k++) {
    const points = section.outlines[k]!;
    const n = points.length;
    const first = count;
    let y0 = points[n - 2]! * c - points[n - 1]! * s;
    let z0 = points[n - 2]! * s + points[n - 1]! * c;
    for (let i = 0; i < n; i += 2) {
      const y1 = points[i]! * c - points[i + 1]! * s;
      const z1 = points[i]! * s + points[i + 1]! * c;
      const under0 = z0 <= level;
      const under1 = z1 <= level;
      let ya = y0;
      let za = z0;
      let yb = y1;
      let zb = z1;
      if (under0 !== under1) {
        const y = y0 + ((level - z0) / (z1 - z0)) * (y1 - y0);
        insert(crossings, first, count, y);
        count++;
        if (under0) {
          yb = y;
          zb = level;
        } else {
          ya = y;
          za = level;
        }
      }
      if (under0 || under1) {
        const cross = ya * zb - yb * za;
        area += cross;
        momentY += (ya + yb) * cross;
        momentZ += (za + zb) * cross;
      }
      y0 = y1;
      z0 = z1;
    }
    for (let i = first; i + 1 < count; i += 2) {
      // The surface closes the outline from its left end (larger y) to its right end.
      const ya = crossings[i + 1]!;
      const yb = crossings[i]!;
      const cross = (ya - yb) * level;
      area += cross;
      momentY += (ya + yb) * cross;
      momentZ += 2 * level * cross;
    }
  }
  out.area = area / 2;
  out.momentY = momentY / 6;
  out.momentZ = momentZ / 6;
  measureSurface(crossings, count, out);
}

/** Insertion by size among the crossings of one outline. */
function insert(crossings: Float64Array, first: number, count: number, y: number): void {
  let i = count;
  while (i > first && crossings[i - 1]! > y) {
    crossings[i] = crossings[i - 1]!;
    i--;
  }
  crossings[i] = y;
}

function measureSurface(crossings: Float64Array, count: number, out: SectionSlice): void {
  let breadth = 0;
  let moment = 0;
  let second = 0;
  for (let i = 0; i + 1 < count; i += 2) {
    const a = crossings[i]!;
    const b = crossings[i + 1]!;
    breadth += b - a;
    moment += (b * b - a * a) / 2;
    second += (b * b * b - a * a * a) / 3;
  }
  out.breadth = breadth;
  out.breadthInertia = breadth > 0 ? second - (moment * moment) / breadth : 0;
}
