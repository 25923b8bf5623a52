/**
 * Routh's test: how many roots of a real polynomial lie in the right half plane.
 *
 * @param coefficients highest power first, the first not zero
 *
 * A zero in the first column is replaced by a vanishing one (textbook); a whole row of zeros, which means
 * roots placed evenly about the origin, counts as 'on the border'.
 * Source: Routh 1877; Gantmacher, The Theory of Matrices, ch. XV.
 */
export type RouthVerdict =
  | { readonly kind: 'stable'; readonly column: readonly number[] }
  | { readonly kind: 'unstable'; readonly roots: number; readonly column: readonly number[] }
  | { readonly kind: 'border'; readonly column: readonly number[] };

export function testRouth(coefficients: readonly number[]): RouthVerdict {
  if (coefficients.length === 0 || coefficients[0] === 0)
    throw new Error('the first coefficient must not be 0');
  const degree = coefficients.length - 1;
  let upper = coefficients.filter((_, i) => i % 2 === 0);
  let lower = coefficients.filter((_, i) => i % 2 === 1);
  const column = [upper[0]!];
  for (let row = 1; row <= degree; row++) {
    if (lower.every((x) => x === 0)) return { kind: 'border', column };
    const head = lower[0]! === 0 ? 1e-30 * Math.max(...coefficients.map(Math.abs)) : lower[0]!;
    column.push(head);
    const next: number[] = [];
    for (let i = 1; i < upper.length; i++) next.push(upper[i]! - (upper[0]! * (lower[i] ?? 0)) / head);
    upper = [head, ...lower.slice(1)];
    lower = next;
  }
  let changes = 0;
  for (let i = 1; i < column.length; i++) if (column[i]! * column[i - 1]! < 0) changes++;
  return changes === 0 ? { kind: 'stable', column } : { kind: 'unstable', roots: changes, column };
}

export interface SimplePlant {
  readonly inertia: number;
  readonly stiffness: number;
  readonly damping: number;
  readonly momentum: number;
  /** s; 0 for none */
  readonly servoLag: number;
}

const trimZero = (p: readonly number[]): readonly number[] => (p[0] === 0 ? p.slice(1) : p);

/**
 * Characteristic polynomial of PID from roll to tilt angle, highest power first:
 * I T s^3 + (I + h Kd + d T) s^2 + (h Kp + d - k T) s + (h Ki - k).
 */
export function expandPidTilt(p: SimplePlant, g: { kp: number; ki: number; kd: number }): readonly number[] {
  const { inertia: I, stiffness: k, damping: d, momentum: h, servoLag: T } = p;
  return trimZero([I * T, I + h * g.kd + d * T, h * g.kp + d - k * T, h * g.ki - k]);
}

/**
 * Of PID from roll to tilt rate: I T s^4 + (I + d T) s^3 + (h Kd + d - k T) s^2 + (h Kp - k) s + h Ki; without
 * an I term the last coefficient and one power fall away (the tilt that is then left over is not fed back).
 */
export function expandPidTiltRate(
  p: SimplePlant,
  g: { kp: number; ki: number; kd: number },
): readonly number[] {
  const { inertia: I, stiffness: k, damping: d, momentum: h, servoLag: T } = p;
  const full = trimZero([I * T, I + d * T, h * g.kd + d - k * T, h * g.kp - k, h * g.ki]);
  return g.ki === 0 ? full.slice(0, -1) : full;
}

/**
 * Of feedback of lean, lean rate and tilt to tilt rate (tilt as commanded):
 * (I s^2 + d s - k)(T s + 1)(s - c) + h s (a + b s), with a, b, c the gains.
 */
export function expandFeedback(
  p: SimplePlant,
  g: { lean: number; leanRate: number; tilt: number },
): readonly number[] {
  const { inertia: I, stiffness: k, damping: d, momentum: h, servoLag: T } = p;
  const c = g.tilt;
  return trimZero([
    I * T,
    I + d * T - I * T * c,
    d - k * T - (I + d * T) * c + h * g.leanRate,
    -k - (d - k * T) * c + h * g.lean,
    k * c,
  ]);
}
