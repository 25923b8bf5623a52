/**
 * Closed forms of the linear inverted pendulum: a centre of mass kept at one height over a point it presses on.
 * One axis at a time; places and speeds along that axis.
 */

/** Rate at which a pendulum of this height falls away, 1/s: sqrt(g / height). Source: Kajita, Yamaura and Kobayashi, IEEE Trans. Robotics and Automation 8 (1992). */
export const fallRate = (height: number, gravity: number): number => Math.sqrt(gravity / height);

/**
 * Place (m) and speed (m/s) of the centre of mass after `time` s, the pressure resting at 0.
 *
 * @param x0    m from the centre of pressure
 * @param v0    m/s
 * @param rate  1/s, from `fallRate`
 *
 * Source: Kajita, Yamaura and Kobayashi (1992): x = x0 cosh(wt) + (v0 / w) sinh(wt).
 */
export function pendulumState(
  x0: number,
  v0: number,
  rate: number,
  time: number,
): { readonly x: number; readonly v: number } {
  const c = Math.cosh(rate * time);
  const s = Math.sinh(rate * time);
  return { x: x0 * c + (v0 / rate) * s, v: x0 * rate * s + v0 * c };
}

/** Orbital energy per mass, m^2/s^2: v^2/2 - w^2 x^2/2, kept along a fall; positive passes over the foot, negative falls back. Source: Kajita (1992). */
export const orbitalEnergy = (x: number, v: number, rate: number): number =>
  (v * v - rate * rate * x * x) / 2;

/** Time to pass over the pressure point, s; undefined when it falls back before it. */
export function crossingTime(x: number, v: number, rate: number): number | undefined {
  const ratio = (-x * rate) / v;
  return v !== 0 && ratio >= 0 && ratio < 1 ? Math.atanh(ratio) / rate : undefined;
}

/** Where the pressure must rest for the body to come to a stand over it, m: x + v / w. Source: Pratt et al., Capture point, Humanoids (2006); Hof, Gazendam and Sinke, J. Biomechanics 38 (2005). */
export const capturePoint = (x: number, v: number, rate: number): number => x + v / rate;

/** Capture point after `time` s with the pressure at p, m: p + (xi0 - p) exp(wt). Source: as for `capturePoint`. */
export const capturePointAfter = (xi0: number, p: number, rate: number, time: number): number =>
  p + (xi0 - p) * Math.exp(rate * time);

/** Distance from the capture point to the edge of the support, m; negative: a step or an array is needed. Source: Hof, Gazendam and Sinke (2005). */
export const marginOfStability = (edge: number, x: number, v: number, rate: number): number =>
  edge - capturePoint(x, v, rate);

/** Centre of pressure under a centre of mass that accelerates, m: x - (height / g) a. Source: Kajita et al., Biped walking pattern generation by preview control, ICRA (2003); Vukobratovic and Borovac (2004). */
export const cartTablePressure = (x: number, acceleration: number, height: number, gravity: number): number =>
  x - (height / gravity) * acceleration;
