/** A momentum surface as triangles and lines, in units of the largest momentum it reaches. */
import { compileArray, type MomentumSurface, momentumEnvelope } from '../../core/physics';
import type { Rig } from '../../core/rig';

/** Rings and points to a ring: fine enough to look round, coarse enough to be made in a few milliseconds. */
const ROWS = 24;
const COLUMNS = 48;
/** Widest piece of a surface, as a share of its reach: a step of its directions is an eighth of a radian. */
const WIDEST = 0.25;

export interface EnvelopeSurface {
  /** 3 per point, N*m*s. */
  readonly points: Float64Array;
  /** Three points to a triangle; those with a point that is not there are left out. */
  readonly triangles: readonly number[];
  /** Two points to a line: every third ring and meridian. */
  readonly lines: readonly number[];
}

/**
 * Whether points of the surface belong together: all there, and no further apart than a piece of it may be. Where the
 * direction passes a gimbal axis that wheel turns about at once, and the surface has a hole with a rim.
 */
function isWhole({ points }: MomentumSurface, widest: number, ...at: readonly number[]): boolean {
  return at.every((k, i) => {
    const other = at[(i + 1) % at.length] as number;
    let square = 0;
    for (let axis = 0; axis < 3; axis++)
      square += ((points[3 * k + axis] as number) - (points[3 * other + axis] as number)) ** 2;
    return square <= widest * widest;
  });
}

function meshOf(surface: MomentumSurface, widest: number): EnvelopeSurface {
  const isThere = (of: MomentumSurface, ...at: readonly number[]): boolean => isWhole(of, widest, ...at);
  const { rows, columns } = surface;
  const triangles: number[] = [];
  const lines: number[] = [];
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      const a = r * columns + c;
      const b = r * columns + ((c + 1) % columns);
      if (r % 3 === 0 && isThere(surface, a, b)) lines.push(a, b);
      if (r + 1 === rows) continue;
      const d = a + columns;
      const e = b + columns;
      if (c % 3 === 0 && isThere(surface, a, d)) lines.push(a, d);
      if (isThere(surface, a, b, d)) triangles.push(a, d, b);
      if (isThere(surface, b, d, e)) triangles.push(b, d, e);
    }
  }
  return { points: surface.points, triangles, lines };
}

export interface EnvelopeShape {
  readonly outer: EnvelopeSurface;
  readonly inner: readonly EnvelopeSurface[];
  /** N*m*s, largest momentum of the outer surface. */
  readonly reach: number;
}

/**
 * The envelope of a rig's array with unlimited tilt; undefined without wheels that turn.
 *
 * @param momenta  N*m*s, of each wheel
 */
export function envelopeShape(
  gyros: Rig['array']['gyros'],
  momenta: readonly number[],
): EnvelopeShape | undefined {
  if (gyros.length === 0 || momenta.every((h) => h === 0)) return undefined;
  const array = compileArray(
    gyros.map(({ gimbalAxis, spinAxis }) => ({ gimbalAxis, spinAxis, axialInertia: 0 })),
  );
  const { outer, inner } = momentumEnvelope(array, momenta.map(Math.abs), ROWS, COLUMNS);
  let reach = 0;
  for (let k = 0; k < outer.points.length; k += 3) {
    const size = Math.hypot(
      outer.points[k] as number,
      outer.points[k + 1] as number,
      outer.points[k + 2] as number,
    );
    if (size > reach) reach = size;
  }
  if (reach === 0) return undefined;
  const widest = WIDEST * reach;
  return { outer: meshOf(outer, widest), inner: inner.map((surface) => meshOf(surface, widest)), reach };
}
