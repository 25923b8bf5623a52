/** A momentum surface as triangles and lines, in units of the largest momentum it reaches. */
import { compileArray, type MomentumSurface, momentumEnvelope } from '../../core/physics';
import type { Rig } from '../../core/rig';

/** Rings and points to a ring: fine enough to look round, coarse enough to be made in a few milliseconds. */
const ROWS = 24;
const COLUMNS = 48;

export interface EnvelopeSurface {
  /** 3 per point, N*m*s. */
  readonly points: Float64Array;
  /** Three points to a triangle; those with a point that is not there are left out. */
  readonly triangles: readonly number[];
  /** Two points to a line: every third ring and meridian. */
  readonly lines: readonly number[];
}

const isThere = ({ points }: MomentumSurface, ...at: readonly number[]): boolean =>
  at.every((k) => Number.isFinite(points[3 * k] as number));

function meshOf(surface: MomentumSurface): EnvelopeSurface {
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
  return reach > 0 ? { outer: meshOf(outer), inner: inner.map(meshOf), reach } : undefined;
}
