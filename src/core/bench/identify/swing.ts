/** Free swing about an equilibrium, with three kinds of damping: the motion behind a roll or pendulum decay. */

/** Parameters in order, all per unit of inertia. */
export const SWING_NAMES = [
  'frequency',
  'linear',
  'quadratic',
  'dry',
  'start',
  'startRate',
  'offset',
] as const;

export interface SwingShape {
  /** True: restoring moment goes with sin(angle), as for a pendulum; false: with the angle. */
  readonly isSine: boolean;
  /** What the log holds. */
  readonly signal: 'angle' | 'rate';
}

const STEPS_PER_TURN = 80;

/**
 * Integrates theta'' = -w^2 g(theta) - c1 theta' - c2 theta'|theta'| - c0 sign(theta') and samples it.
 *
 * Between turning points the sign is fixed and the motion smooth; each turning point is located on the step
 * so that the result is a smooth function of the parameters, which the fit needs. Where dry friction can hold the
 * body it stays. Classical fourth-order Runge-Kutta, at least 80 steps a cycle.
 *
 * @param p      7: w rad/s, c1 1/s, c2 1/rad, c0 rad/s^2, theta at time[0], rate there, offset of the signal
 * @param time   n, s, rising
 * @param out    n, rad or rad/s, offset added
 */
export function simulateSwing(
  shape: SwingShape,
  p: Float64Array,
  time: Float64Array,
  out: Float64Array,
): void {
  const w2 = p[0] * p[0];
  const c1 = p[1];
  const c2 = p[2];
  const c0 = p[3];
  let angle = p[4];
  let rate = p[5];
  const longest = (2 * Math.PI) / (Math.abs(p[0]) * STEPS_PER_TURN);
  let side = rate !== 0 ? Math.sign(rate) : -Math.sign(angle);
  let isHeld = rate === 0 && w2 * Math.abs(angle) <= c0;
  const state = new Float64Array(2);
  const isRate = shape.signal === 'rate';
  for (let i = 0; i < time.length; i++) {
    if (i > 0 && !isHeld) {
      const span = time[i] - time[i - 1];
      const steps = Math.max(1, Math.ceil(span / longest));
      if (steps > 100_000) {
        out.fill(Number.NaN);
        return;
      }
      let left = span;
      const h = span / steps;
      let guard = 0;
      while (left > 1e-12 * span && !isHeld && guard++ < 4 * steps + 8) {
        let d = Math.min(h, left);
        stepSwing(shape.isSine, w2, c1, c2, c0, side, angle, rate, d, state);
        if (state[1] * side < 0) {
          d = findTurn(shape.isSine, w2, c1, c2, c0, side, angle, rate, d, state);
          angle = state[0];
          rate = 0;
          const pull = w2 * (shape.isSine ? Math.sin(angle) : angle);
          if (Math.abs(pull) <= c0) isHeld = true;
          side = -Math.sign(pull);
        } else {
          angle = state[0];
          rate = state[1];
        }
        left -= d;
      }
    }
    out[i] = (isRate ? (isHeld ? 0 : rate) : angle) + p[6];
  }
}

/** Time within the step at which the rate is zero, by regula falsi with bisection behind it; state at that time. */
function findTurn(
  isSine: boolean,
  w2: number,
  c1: number,
  c2: number,
  c0: number,
  side: number,
  angle: number,
  rate: number,
  h: number,
  state: Float64Array,
): number {
  let low = 0;
  let high = h;
  let vLow = rate * side;
  let vHigh = state[1] * side;
  let at = 0;
  for (let k = 0; k < 40; k++) {
    at = k % 4 === 3 ? 0.5 * (low + high) : low + ((high - low) * vLow) / (vLow - vHigh);
    stepSwing(isSine, w2, c1, c2, c0, side, angle, rate, at, state);
    const v = state[1] * side;
    if (Math.abs(v) < 1e-15 * (Math.abs(rate) + Math.sqrt(w2) * Math.abs(angle)) || high - low < 1e-14 * h)
      break;
    if (v > 0) {
      low = at;
      vLow = v;
    } else {
      high = at;
      vHigh = v;
    }
  }
  return at;
}

function stepSwing(
  isSine: boolean,
  w2: number,
  c1: number,
  c2: number,
  c0: number,
  side: number,
  angle: number,
  rate: number,
  h: number,
  state: Float64Array,
): void {
  const half = 0.5 * h;
  const k1 = pull(isSine, w2, c1, c2, c0, side, angle, rate);
  const v2 = rate + half * k1;
  const k2 = pull(isSine, w2, c1, c2, c0, side, angle + half * rate, v2);
  const v3 = rate + half * k2;
  const k3 = pull(isSine, w2, c1, c2, c0, side, angle + half * v2, v3);
  const v4 = rate + h * k3;
  const k4 = pull(isSine, w2, c1, c2, c0, side, angle + h * v3, v4);
  state[0] = angle + (h / 6) * (rate + 2 * v2 + 2 * v3 + v4);
  state[1] = rate + (h / 6) * (k1 + 2 * k2 + 2 * k3 + k4);
}

const pull = (
  isSine: boolean,
  w2: number,
  c1: number,
  c2: number,
  c0: number,
  side: number,
  a: number,
  v: number,
): number => -w2 * (isSine ? Math.sin(a) : a) - c1 * v - c2 * side * v * v - c0 * side;
