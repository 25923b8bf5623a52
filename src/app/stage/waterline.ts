import type { Instant } from './motionInstant';

/** Height of a point of the hull's middle section above the water, m; the point in the body frame. */
function freeboard({ pose, water, waterSlope }: Instant, y: number, z: number): number {
  const w = pose[3];
  const a = pose[4];
  const b = pose[5];
  const c = pose[6];
  // The second and third columns of the attitude's matrix, world y and z.
  const worldY = pose[1] + y * (1 - 2 * (a * a + c * c)) + z * 2 * (b * c - w * a);
  const worldZ = pose[2] + y * 2 * (b * c + w * a) + z * (1 - 2 * (a * a + b * b));
  // The surface turns about the line through the body's origin.
  return worldZ - water - (worldY - pose[1]) * Math.tan(waterSlope);
}

/**
 * Where the water meets the section on either side: y and z of the highest crossing at the left, then the right;
 * body frame, m. A side that is wholly above or below the water gives NaN. O(points), allocates nothing.
 */
export function meetWater(
  outline: readonly (readonly [y: number, z: number])[],
  instant: Instant,
  out: Float64Array,
): void {
  out.fill(Number.NaN);
  const last = outline.length - 1;
  for (let side = 0; side < 2; side++) {
    const step = side === 0 ? 1 : -1;
    const start = side === 0 ? 0 : last;
    for (let k = 0; k < last; k++) {
      const from = outline[start + step * k];
      const to = outline[start + step * (k + 1)];
      const above = freeboard(instant, from[0], from[1]);
      const below = freeboard(instant, to[0], to[1]);
      if (above < 0 || below > 0 || above === below) {
        if (above < 0) break;
        continue;
      }
      const share = above / (above - below);
      out[2 * side] = from[0] + share * (to[0] - from[0]);
      out[2 * side + 1] = from[1] + share * (to[1] - from[1]);
      break;
    }
  }
}
