import { correlationFactor, studentQuantile } from '../statistics';
import { type Estimate, estimate, show } from './result';

export type ResolutionOutcome =
  | { readonly kind: 'seen'; readonly estimate: Estimate }
  | { readonly kind: 'not-seen'; readonly sentence: string };

/** Least share of readings that must lie on the staircase (length of the mean phasor), 0 to 1. */
const LEAST_PHASOR = 0.3;

/**
 * Finds the step of the staircase in which a servo follows a slow sweep.
 *
 * On a staircase of step q the phasor exp(2 pi i y / q), averaged over all readings of one direction of travel, does not
 * cancel; the q with the longest mean phasor is taken, readings are then assigned to their stairs and a straight line
 * through stair number against angle gives q and its interval.
 *
 * @param angle    n, rad, measured over whole sweeps
 * @param command  n, rad, tells the direction of travel
 * @param noise    rad, standard deviation of one reading
 */
export function findResolution(angle: Float64Array, command: Float64Array, noise: number): ResolutionOutcome {
  const n = angle.length;
  const side = new Int8Array(n);
  let d = 0;
  for (let i = 1; i < n; i++) {
    const step = command[i] - command[i - 1];
    if (step !== 0) d = Math.sign(step);
    side[i] = d;
  }
  const range = Math.max(...angle) - Math.min(...angle);
  const finest = Math.max(6 * noise, range / 2000);
  const coarsest = range / 6;
  const unseen: ResolutionOutcome = {
    kind: 'not-seen',
    sentence: `No steps are seen in the tilt: the resolution is finer than ${show(finest)} rad, or the sweep is too fast to show it.`,
  };
  if (!(finest < coarsest)) return unseen;
  let best = 0;
  let bestLength = 0;
  const stride = Math.max(1, Math.floor(n / 2500));
  for (let f = 1 / coarsest; f < 1 / finest; f += 0.15 / range) {
    const length = phasorLength(angle, side, f, stride);
    if (length > bestLength) [bestLength, best] = [length, f];
  }
  if (bestLength < LEAST_PHASOR) return unseen;
  // Golden-section polish within one grid step on all readings.
  let low = best - 0.15 / range;
  let high = best + 0.15 / range;
  const ratio = (Math.sqrt(5) - 1) / 2;
  for (let k = 0; k < 40; k++) {
    const a = high - ratio * (high - low);
    const b = low + ratio * (high - low);
    if (phasorLength(angle, side, a, stride) > phasorLength(angle, side, b, stride)) high = b;
    else low = a;
  }
  return fitStairs(angle, side, 2 / (low + high));
}

function phasorLength(angle: Float64Array, side: Int8Array, f: number, stride: number): number {
  const sums = new Float64Array(4);
  let n = 0;
  for (let i = 0; i < angle.length; i += stride) {
    if (side[i] === 0) continue;
    const k = side[i] > 0 ? 0 : 2;
    sums[k] += Math.cos(2 * Math.PI * f * angle[i]);
    sums[k + 1] += Math.sin(2 * Math.PI * f * angle[i]);
    n++;
  }
  return (Math.sqrt(sums[0] ** 2 + sums[1] ** 2) + Math.sqrt(sums[2] ** 2 + sums[3] ** 2)) / n;
}

/** One stay on one stair: mean of its later half, by when the servo has come to rest. */
interface Visit {
  readonly side: number;
  readonly stair: number;
  readonly level: number;
}

/**
 * Line through (stair number, level), one origin a direction of travel. After each reversal readings are left out until
 * the tilt has gone three stairs: while the play is taken up it stands on a stair of the other direction.
 */
function fitStairs(angle: Float64Array, side: Int8Array, q: number): ResolutionOutcome {
  const visits = findVisits(angle, side, q);
  const mean = (s: number, f: (v: Visit) => number): number => {
    const own = visits.filter((v) => v.side === s);
    return own.reduce((a, v) => a + f(v), 0) / Math.max(1, own.length);
  };
  const centre = new Map(
    [1, -1].map((s) => [s, { stair: mean(s, (v) => v.stair), level: mean(s, (v) => v.level) }]),
  );
  const rows = visits.map((v) => {
    const c = centre.get(v.side) as { stair: number; level: number };
    return { stair: v.stair - c.stair, level: v.level - c.level };
  });
  let kk = 0;
  let kv = 0;
  for (const r of rows) {
    kk += r.stair * r.stair;
    kv += r.stair * r.level;
  }
  const dof = rows.length - 3;
  if (!(kk > 0) || dof < 5)
    return {
      kind: 'not-seen',
      sentence: `Only ${rows.length} stairs of the tilt can be told: sweep further or slower.`,
    };
  const step = kv / kk;
  const residuals = rows.map((r) => r.level - step * r.stair);
  const square = residuals.reduce((a, r) => a + r * r, 0);
  const factor = correlationFactor(residuals);
  const half = studentQuantile(0.95, Math.max(1, dof / factor)) * Math.sqrt((factor * square) / dof / kk);
  return { kind: 'seen', estimate: estimate('resolution', step, half, 'rad') };
}

function findVisits(angle: Float64Array, side: Int8Array, q: number): Visit[] {
  const origins = new Map([1, -1].map((s) => [s, findOrigin(angle, side, s, q)]));
  const visits: Visit[] = [];
  let from = 0;
  let stair = Number.NaN;
  let anchor = Number.NaN;
  let last = 0;
  for (let i = 0; i <= angle.length; i++) {
    const s = i < angle.length ? side[i] : 0;
    const place = s === 0 ? Number.NaN : (angle[i] - (origins.get(s) as number)) / q;
    if (s !== last || Math.round(place) !== stair) {
      const isWhole = last !== 0 && Math.abs(angle[i - 1] - anchor) > 3 * q && s === last;
      if (isWhole && i - from >= 4) {
        const middle = from + Math.ceil((i - from) / 2);
        let sum = 0;
        for (let k = middle; k < i; k++) sum += angle[k];
        visits.push({ side: last, stair, level: sum / (i - middle) });
      }
      if (s !== last) anchor = i < angle.length ? angle[i] : Number.NaN;
      from = i;
      stair = Math.round(place);
      last = s;
    }
  }
  return visits;
}

function findOrigin(angle: Float64Array, side: Int8Array, s: number, q: number): number {
  let c = 0;
  let e = 0;
  for (let i = 0; i < angle.length; i++) {
    if (side[i] !== s) continue;
    c += Math.cos((2 * Math.PI * angle[i]) / q);
    e += Math.sin((2 * Math.PI * angle[i]) / q);
  }
  return (q * Math.atan2(e, c)) / (2 * Math.PI);
}
