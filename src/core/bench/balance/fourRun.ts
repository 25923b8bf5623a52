import { type Phasor, phasor } from './phasor';

export interface AmplitudeRun {
  /** rad, where the trial weight stood. */
  readonly angle: number;
  readonly amplitude: number;
}

export type FourRunOutcome =
  | {
      readonly kind: 'balanced';
      /** kg at an angle, to add with the trial weight off. */
      readonly correction: Phasor;
      /** How far the four amplitudes contradict each other, as a share of the first: 0 for perfect readings. */
      readonly contradiction: number;
      readonly remarks: readonly string[];
    }
  | { readonly kind: 'refused'; readonly sentence: string };

const LARGEST_CONTRADICTION = 0.25;

/**
 * Single-plane balance from amplitudes alone: one run bare, three with the same trial weight at three angles.
 *
 * With O the first amplitude, t the effect of the trial weight and psi its angle against the unbalance,
 * R_k^2 - O^2 = t^2 + 2 O t cos(angle_k - psi), linear in t^2, O t cos psi, O t sin psi; O itself then checks the answer.
 *
 * @param first  amplitude bare
 * @param runs   three runs; angles anywhere, best a third of a turn apart
 * @param trial  kg
 *
 * Source: the four-circle method (Siebert), common practice.
 */
export function balanceByFourRuns(
  first: number,
  runs: readonly AmplitudeRun[],
  trial: number,
): FourRunOutcome {
  const refuse = (sentence: string): FourRunOutcome => ({ kind: 'refused', sentence });
  if (runs.length !== 3)
    return refuse(`${runs.length} trial runs are given: three are needed besides the bare one.`);
  if (!(trial > 0)) return refuse(`The trial weight is ${trial} kg: it must be above zero.`);
  const wrong = [first, ...runs.map((r) => r.amplitude)].findIndex((a) => !(a > 0 && Number.isFinite(a)));
  if (wrong >= 0)
    return refuse(
      `The amplitude of run ${wrong + 1} is ${[first, ...runs.map((r) => r.amplitude)][wrong]}: it must be above zero.`,
    );
  const [a, b, c] = runs.map((r) => ({
    x: Math.cos(r.angle),
    y: Math.sin(r.angle),
    q: r.amplitude ** 2 - first ** 2,
  }));
  const determinant = (b.x - a.x) * (c.y - a.y) - (c.x - a.x) * (b.y - a.y);
  if (!(Math.abs(determinant) > 0.15))
    return refuse(
      'The three angles of the trial weight lie too close together: set them about a third of a turn apart.',
    );
  const gx = ((b.q - a.q) * (c.y - a.y) - (c.q - a.q) * (b.y - a.y)) / determinant / 2;
  const gy = ((b.x - a.x) * (c.q - a.q) - (c.x - a.x) * (b.q - a.q)) / determinant / 2;
  const square = a.q - 2 * (gx * a.x + gy * a.y);
  const product = Math.sqrt(gx * gx + gy * gy);
  if (!(square > 0))
    return refuse(
      'The amplitudes contradict each other: no trial weight could have caused all four. Check that the speed was the same and read again.',
    );
  const effect = Math.sqrt(square);
  const contradiction = Math.abs(product / effect - first) / first;
  if (contradiction > LARGEST_CONTRADICTION) {
    return refuse(
      `The amplitudes contradict each other by ${(100 * contradiction).toFixed(0)} % of the first (${100 * LARGEST_CONTRADICTION} % is the most): check that the speed was the same in all runs and read again.`,
    );
  }
  const remarks: string[] = [];
  if (effect < 0.25 * first)
    remarks.push('The trial weight hardly acts: a heavier one would give a surer answer.');
  if (contradiction > 0.08)
    remarks.push(
      `The amplitudes contradict each other by ${(100 * contradiction).toFixed(0)} % of the first.`,
    );
  // psi is where the weight adds to the unbalance in full; the correction stands opposite.
  return {
    kind: 'balanced',
    correction: phasor((trial * first) / effect, Math.atan2(gy, gx) + Math.PI),
    contradiction,
    remarks,
  };
}
