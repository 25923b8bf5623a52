/** The ground the feet enclose: its outline, how far the centre of pressure may go along a line, and what friction holds. */

/** Corners of a convex outline, anticlockwise from above, x y packed; m. Empty when no foot is down. */
export type Polygon = Float64Array;

/**
 * Convex hull of points in the plane.
 *
 * @param points  x y packed, m
 * @returns corners anticlockwise, none on a straight line between its neighbours; fewer than three when the points are in line
 *
 * O(n log n). Source: Andrew, Another efficient algorithm for convex hulls in two dimensions, Information
 * Processing Letters 9 (1979).
 */
export function convexHull(points: ArrayLike<number>): Polygon {
  const count = points.length / 2;
  const order = Array.from({ length: count }, (_, i) => i).sort(
    (a, b) =>
      (points[2 * a] as number) - (points[2 * b] as number) ||
      (points[2 * a + 1] as number) - (points[2 * b + 1] as number),
  );
  const chain: number[] = [];
  const addChain = (indices: readonly number[]): void => {
    const base = chain.length;
    for (const i of indices) {
      while (
        chain.length - base >= 2 &&
        !turnsLeft(points, chain.at(-2) as number, chain.at(-1) as number, i)
      ) {
        chain.pop();
      }
      chain.push(i);
    }
    chain.pop();
  };
  addChain(order);
  addChain(order.toReversed());
  const corners = count === 1 ? order : chain;
  const out = new Float64Array(2 * corners.length);
  corners.forEach((corner, i) => {
    out[2 * i] = points[2 * corner] as number;
    out[2 * i + 1] = points[2 * corner + 1] as number;
  });
  return out;
}

function turnsLeft(points: ArrayLike<number>, a: number, b: number, c: number): boolean {
  const ax = points[2 * a] as number;
  const ay = points[2 * a + 1] as number;
  const bx = (points[2 * b] as number) - ax;
  const by = (points[2 * b + 1] as number) - ay;
  const cx = (points[2 * c] as number) - ax;
  const cy = (points[2 * c + 1] as number) - ay;
  return bx * cy - by * cx > 1e-14;
}

/**
 * Outline of the ground under rectangular feet that point along x.
 *
 * @param centres  x y packed, m, middle of each sole that is down
 */
export function supportPolygon(centres: ArrayLike<number>, footLength: number, footWidth: number): Polygon {
  const feet = centres.length / 2;
  const corners = new Float64Array(8 * feet);
  for (let foot = 0; foot < feet; foot++) {
    for (let corner = 0; corner < 4; corner++) {
      corners[8 * foot + 2 * corner] = (centres[2 * foot] as number) + (corner < 2 ? 0.5 : -0.5) * footLength;
      corners[8 * foot + 2 * corner + 1] =
        (centres[2 * foot + 1] as number) + (corner % 2 === 0 ? 0.5 : -0.5) * footWidth;
    }
  }
  return convexHull(corners);
}

/** Axis index: 0 along (x), 1 across (y). */
export type GroundAxis = 0 | 1;

/** Least and greatest coordinate of an outline along an axis, m; undefined for an empty one. */
export function extentOf(polygon: Polygon, axis: GroundAxis): readonly [number, number] | undefined {
  let least = Infinity;
  let greatest = -Infinity;
  for (let i = axis; i < polygon.length; i += 2) {
    least = Math.min(least, polygon[i] as number);
    greatest = Math.max(greatest, polygon[i] as number);
  }
  return least <= greatest ? [least, greatest] : undefined;
}

/**
 * Stretch of a line across an outline in which the centre of pressure keeps a margin from every edge.
 *
 * @param axis    the axis the stretch runs along
 * @param at      m, where the line crosses the other axis
 * @param margin  m, distance kept from each edge
 * @returns ends of the stretch, m; undefined when none of the line keeps the margin
 *
 * O(corners).
 */
export function pressureInterval(
  polygon: Polygon,
  axis: GroundAxis,
  at: number,
  margin: number,
): readonly [number, number] | undefined {
  const count = polygon.length / 2;
  if (count < 3) return undefined;
  let least = -Infinity;
  let greatest = Infinity;
  for (let i = 0; i < count; i++) {
    const j = (i + 1) % count;
    const dx = (polygon[2 * j] as number) - (polygon[2 * i] as number);
    const dy = (polygon[2 * j + 1] as number) - (polygon[2 * i + 1] as number);
    const length = Math.sqrt(dx * dx + dy * dy);
    // Outward normal of an edge walked anticlockwise.
    const nx = dy / length;
    const ny = -dx / length;
    const reach =
      nx * (polygon[2 * i] as number) +
      ny * (polygon[2 * i + 1] as number) -
      margin -
      (axis === 0 ? ny : nx) * at;
    const slope = axis === 0 ? nx : ny;
    if (slope > 1e-12) greatest = Math.min(greatest, reach / slope);
    else if (slope < -1e-12) least = Math.max(least, reach / slope);
    else if (reach < -1e-12) return undefined;
  }
  return least <= greatest ? [least, greatest] : undefined;
}

/** Least and greatest coordinate, m. */
export type Stretch = readonly [number, number];

/**
 * Stretch of the line at `at` that keeps the margin. A line that misses the outline is moved to its nearest part,
 * and one on which the margin leaves nothing gives the middle of what there is.
 */
export function pressureStretch(polygon: Polygon, axis: GroundAxis, at: number, margin: number): Stretch {
  const other = extentOf(polygon, axis === 1 ? 0 : 1);
  const own = extentOf(polygon, axis);
  if (other === undefined || own === undefined) return [0, 0];
  const low = other[0] + margin;
  const high = other[1] - margin;
  const line = low <= high ? Math.min(high, Math.max(low, at)) : (other[0] + other[1]) / 2;
  const kept = pressureInterval(polygon, axis, line, margin);
  if (kept !== undefined) return kept;
  const bare = pressureInterval(polygon, axis, line, 0) ?? own;
  const middle = (bare[0] + bare[1]) / 2;
  return [middle, middle];
}

/** Integral of the distance from the origin over the rectangle from the origin to (x, y); odd in both. */
function distanceIntegral(x: number, y: number): number {
  if (x === 0 || y === 0) return 0;
  const r = Math.sqrt(x * x + y * y);
  return (
    (x * y * r) / 3 +
    (x * x * x * Math.asinh(y / Math.abs(x))) / 6 +
    (y * y * y * Math.asinh(x / Math.abs(y))) / 6
  );
}

/**
 * Mean distance of the soles' area from its own middle, m: the arm on which friction resists turning, pressure
 * taken as even.
 *
 * @param centres  x y packed, m, middle of each sole that is down
 *
 * O(feet). Source: the integral of distance over a rectangle in closed form.
 */
export function turningArm(centres: ArrayLike<number>, footLength: number, footWidth: number): number {
  const feet = centres.length / 2;
  if (feet === 0) return 0;
  let middleX = 0;
  let middleY = 0;
  for (let foot = 0; foot < feet; foot++) {
    middleX += (centres[2 * foot] as number) / feet;
    middleY += (centres[2 * foot + 1] as number) / feet;
  }
  let sum = 0;
  for (let foot = 0; foot < feet; foot++) {
    const left = (centres[2 * foot] as number) - middleX - footLength / 2;
    const low = (centres[2 * foot + 1] as number) - middleY - footWidth / 2;
    const right = left + footLength;
    const high = low + footWidth;
    sum +=
      distanceIntegral(right, high) -
      distanceIntegral(left, high) -
      distanceIntegral(right, low) +
      distanceIntegral(left, low);
  }
  return sum / (feet * footLength * footWidth);
}
