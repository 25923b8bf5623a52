import type { DesignOutcome, DesignRequest } from './gainDesign';
import { designGains } from './gainDesign';
import type { LoopModel } from './loopModel';
import { judgeLoop, type LoopVerdict, measureDecay } from './margins';

/** What to do with the gains as the wheel slows. */
export interface SpeedRow {
  /** share of the full wheel speed */
  readonly share: number;
  /** gains through the plant divided by the share, those inside the law kept: the loop stays the same */
  readonly scaled: Float64Array;
  /** with those */
  readonly scaledVerdict: LoopVerdict;
  /** with the full-speed gains left as they are */
  readonly fixedVerdict: LoopVerdict;
}

/**
 * Gains against wheel speed. Momentum and speed go together, and the loop feels only momentum times gain: gains of
 * lean and lean rate in inverse proportion to speed leave the loop as it was, as long as tilt and servo have room.
 */
export function scheduleGains(loop: LoopModel, shares: readonly number[]): SpeedRow[] {
  return shares.map((share) => {
    const slow: LoopModel = { ...loop, plant: { ...loop.plant, momentum: loop.plant.momentum * share } };
    const scaled = scaleGains(loop, 1 / share);
    return {
      share,
      scaled,
      scaledVerdict: judgeLoop({ ...slow, gains: scaled }),
      fixedVerdict: judgeLoop(slow),
    };
  });
}

/** The gains with those that act through the plant multiplied by a factor. */
export function scaleGains(loop: Pick<LoopModel, 'law' | 'gains'>, factor: number): Float64Array {
  const through = loop.law === 'feedback' ? 2 : 3;
  return Float64Array.from(loop.gains, (g, i) => (i < through ? g * factor : g));
}

export type LeastSpeed =
  /** holds from `share` of full speed upwards, as far as the linear loop goes */
  | { readonly kind: 'found'; readonly share: number; readonly momentum: number }
  /** does not hold at full speed either */
  | { readonly kind: 'never' }
  /** holds with the wheel at rest: the body rights itself */
  | { readonly kind: 'always' };

/**
 * The least share of wheel speed at which the loop with these gains, left as they are, still holds, coming down
 * from full speed: for spin-down and a flat battery. To 1e-6 of full speed.
 */
export function findLeastSpeed(loop: LoopModel): LeastSpeed {
  const holds = (share: number): boolean =>
    measureDecay({ ...loop, plant: { ...loop.plant, momentum: loop.plant.momentum * share } }) > 0;
  if (!holds(1)) return { kind: 'never' };
  /* Coming down in steps, so that the first border met is the one reported, whatever lies below it. */
  let high = 1;
  let low = 0;
  for (let share = 0.98; share > 0.005; share *= 0.98) {
    if (!holds(share)) {
      low = share;
      break;
    }
    high = share;
  }
  if (low === 0) {
    if (holds(1e-6)) return { kind: 'always' };
    low = 1e-6;
  }
  while (high - low > 1e-6) {
    const middle = 0.5 * (low + high);
    if (holds(middle)) high = middle;
    else low = middle;
  }
  return { kind: 'found', share: high, momentum: high * loop.plant.momentum };
}

/**
 * The largest lean (rad) at rest from which the array can still bring the body back: an array that gave all its
 * momentum at once would stop the growing part, lean + rate / sqrt(k / I), of a lean of spare / sqrt(I k). An upper
 * bound for any law, small leans.
 *
 * @param spare N*m*s that the array can still give from its present tilt: h (sin(limit) - sin(tilt))
 */
export function boundLean(inertia: number, stiffness: number, spare: number): number {
  return stiffness > 0 ? spare / Math.sqrt(inertia * stiffness) : Number.POSITIVE_INFINITY;
}

export interface SpeedDesign {
  readonly share: number;
  readonly outcome: DesignOutcome;
}

/** Gains designed afresh at each share of wheel speed. About 0.05 s each. */
export function designAgainstSpeed(request: DesignRequest, shares: readonly number[]): SpeedDesign[] {
  return shares.map((share) => ({
    share,
    outcome: designGains({
      ...request,
      plant: { ...request.plant, momentum: request.plant.momentum * share },
    }),
  }));
}
