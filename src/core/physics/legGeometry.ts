/** Two straight links from a hip to a foot: where the knee goes, and how far a leg can reach. */
import type { LeggedBody } from '../rig';
import type { Vec3 } from './spatial';

/**
 * Hips in the body frame, m, in leg order: left before right, front pair before back pair.
 *
 * @returns one point for each leg
 */
export function hipPositions(body: LeggedBody): readonly Vec3[] {
  const pairs = body.legs / 2;
  const hips: Vec3[] = [];
  for (let pair = 0; pair < pairs; pair++) {
    const x = ((pairs - 1) / 2 - pair) * body.hips.pitch;
    for (const side of [1, -1]) hips.push([x, (side * body.hips.width) / 2, body.hips.height]);
  }
  return hips;
}

/** Longest distance from hip to sole, m. */
export const legReach = (body: LeggedBody): number => body.thigh.length + body.shank.length;

/**
 * Places the knee between a hip and a foot; it bends forward, in the plane of the leg and the x axis.
 * A foot out of reach gets a straight leg that points at it: callers refuse such a rig before drawing it.
 *
 * @param hip    m, any frame with x forward
 * @param foot   m, same frame
 * @param out    3, m, same frame; the knee
 * @param at     where in `out` the knee goes
 *
 * Source: law of cosines.
 */
export function placeKnee(
  hip: ArrayLike<number>,
  foot: ArrayLike<number>,
  thigh: number,
  shank: number,
  out: Float64Array,
  at = 0,
): void {
  const dx = (foot[0] as number) - (hip[0] as number);
  const dy = (foot[1] as number) - (hip[1] as number);
  const dz = (foot[2] as number) - (hip[2] as number);
  const length = Math.sqrt(dx * dx + dy * dy + dz * dz);
  const ux = dx / length;
  const uy = dy / length;
  const uz = dz / length;
  const along = (thigh * thigh - shank * shank + length * length) / (2 * length);
  const squared = thigh * thigh - along * along;
  const across = squared > 0 ? Math.sqrt(squared) : 0;
  // Forward, less its part along the leg: the knee's way out. A leg that lies along x bends upward instead.
  let px = 1 - ux * ux;
  let py = -ux * uy;
  let pz = -ux * uz;
  let size = Math.sqrt(px * px + py * py + pz * pz);
  if (size < 1e-9) {
    px = -uz * ux;
    py = -uz * uy;
    pz = 1 - uz * uz;
    size = Math.sqrt(px * px + py * py + pz * pz);
  }
  const reach = squared > 0 ? along : thigh;
  out[at] = (hip[0] as number) + ux * reach + (px / size) * across;
  out[at + 1] = (hip[1] as number) + uy * reach + (py / size) * across;
  out[at + 2] = (hip[2] as number) + uz * reach + (pz / size) * across;
}

/** Soles at rest, m, body frame, in leg order: under the hips, at the stance width given. */
export const restFeet = (body: LeggedBody, stanceWidth: number): readonly Vec3[] =>
  hipPositions(body).map(([x, y]) => [x, (Math.sign(y) * stanceWidth) / 2, 0]);
