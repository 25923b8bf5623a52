/** How the body moves over its feet: level, at constant height, its hips swaying and its mean progress steady. */
import { type FootTrack, footStateAt } from './footMotion';

/** Offset of the body from the frame that walks with its mean motion. */
export type BodyTrack =
  | { readonly kind: 'still' }
  | {
      /** Across the body, amplitude cos(2 pi time / period + phase). */
      readonly kind: 'sway';
      readonly amplitude: number;
      readonly period: number;
      readonly phase: number;
    }
  /** Between places it rests at: a track of its own, as of a foot that is never lifted. */
  | { readonly kind: 'stops'; readonly track: FootTrack };

/**
 * Phase (rad) that puts the sway over the legs that carry: the first harmonic of the count of left feet down
 * less right feet down. Zero when that harmonic vanishes, as in a trot.
 *
 * @param tracks  feet in leg order, left before right
 */
export function swayPhaseOf(tracks: readonly FootTrack[], period: number): number {
  let cosine = 0;
  let sine = 0;
  tracks.forEach((track, leg) => {
    const side = leg % 2 === 0 ? 1 : -1;
    for (const span of track.spans) {
      if (!span.isDown) continue;
      const from = (2 * Math.PI * span.from) / period;
      const to = (2 * Math.PI * span.to) / period;
      cosine += side * (Math.sin(to) - Math.sin(from));
      sine += side * (Math.cos(from) - Math.cos(to));
    }
  });
  return Math.abs(cosine) + Math.abs(sine) < 1e-9 ? 0 : Math.atan2(-sine, cosine);
}

/**
 * Position, velocity and acceleration of the body's origin in the frame that walks with its mean motion.
 *
 * @param body  how it moves
 * @param time  s, any
 * @param out   at least at + 9: m, m/s, m/s^2, each as x, y, z
 *
 * Smooth to the second derivative and periodic. O(1), allocates nothing.
 */
export function bodyStateAt(body: BodyTrack, time: number, out: Float64Array, at = 0): void {
  if (body.kind === 'stops') {
    footStateAt(body.track, time, out, at);
    return;
  }
  for (let i = 0; i < 9; i++) out[at + i] = 0;
  if (body.kind === 'still') return;
  const rate = (2 * Math.PI) / body.period;
  const angle = rate * time + body.phase;
  out[at + 1] = body.amplitude * Math.cos(angle);
  out[at + 4] = -body.amplitude * rate * Math.sin(angle);
  out[at + 7] = -body.amplitude * rate * rate * Math.cos(angle);
}
