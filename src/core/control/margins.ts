import { findSpectralRadius } from './linear/spectrum';
import { createLoopBasis, evaluateLoopGain, fillLoopBasis, prepareLoop } from './loopBasis';
import { buildClosedLoop, type LoopModel } from './loopModel';

/** How far a holding loop is from not holding. */
export interface Margins {
  /** factor by which the loop gain (momentum, servo gain) may grow; Infinity when it may grow without end */
  readonly gainUp: number;
  /** factor to which it may shrink; 0 when it may vanish */
  readonly gainDown: number;
  /** rad, smallest phase lag that brings the loop to its border; Infinity when |L| never reaches 1 */
  readonly phase: number;
  /** s of further delay that brings it to its border */
  readonly delay: number;
  /** rad/s where that delay margin is set */
  readonly delayFrequency: number;
  /** largest |1 / (1 + L)| */
  readonly sensitivity: number;
  /** rad/s where it stands */
  readonly sensitivityFrequency: number;
}

/** Writes L(i omega) or L(exp(i omega dt)) into out: re, im. */
export type Response = (omega: number, out: Float64Array) => void;

interface Crossing {
  readonly omega: number;
  readonly re: number;
  readonly im: number;
}

function refine(
  respond: Response,
  low: number,
  high: number,
  measure: (re: number, im: number) => number,
): Crossing {
  const out = new Float64Array(2);
  respond(low, out);
  let a = low;
  let b = high;
  const sign = measure(out[0]!, out[1]!) < 0;
  for (let i = 0; i < 60 && b - a > 1e-14 * b; i++) {
    const middle = 0.5 * (a + b);
    respond(middle, out);
    if (measure(out[0]!, out[1]!) < 0 === sign) a = middle;
    else b = middle;
  }
  const omega = 0.5 * (a + b);
  respond(omega, out);
  return { omega, re: out[0]!, im: out[1]! };
}

function refinePeak(respond: Response, low: number, high: number): { omega: number; peak: number } {
  const out = new Float64Array(2);
  const size = (omega: number): number => {
    respond(omega, out);
    return 1 / Math.sqrt((1 + out[0]!) ** 2 + out[1]! ** 2);
  };
  const ratio = (Math.sqrt(5) - 1) / 2;
  let a = low;
  let b = high;
  let c = b - ratio * (b - a);
  let d = a + ratio * (b - a);
  let fc = size(c);
  let fd = size(d);
  for (let i = 0; i < 50; i++) {
    if (fc > fd) {
      b = d;
      d = c;
      fd = fc;
      c = b - ratio * (b - a);
      fc = size(c);
    } else {
      a = c;
      c = d;
      fc = fd;
      d = a + ratio * (b - a);
      fd = size(d);
    }
  }
  const omega = 0.5 * (a + b);
  return { omega, peak: size(omega) };
}

/**
 * Margins of a loop that is known to hold, from its frequency response (meaningless for one that is not).
 *
 * @param respond  loop gain L, negative feedback (closed at 1 + L)
 * @param from,to  rad/s, range to search; `to` may be the Nyquist frequency
 * @param points   on a logarithmic grid; every crossing found is refined to rounding
 *
 * Source: textbook (Astrom and Murray, Feedback Systems, ch. 10); delay margin = phase / frequency, smallest over
 * all crossings of |L| = 1. For a sampled loop that last is an approximation good to (omega dt)^2.
 */
export function measureMargins(respond: Response, from: number, to: number, points = 600): Margins {
  const grid = Float64Array.from({ length: points }, (_, i) => from * (to / from) ** (i / (points - 1)));
  grid[points - 1] = to;
  const re = new Float64Array(points);
  const im = new Float64Array(points);
  const out = new Float64Array(2);
  for (let i = 0; i < points; i++) {
    respond(grid[i]!, out);
    re[i] = out[0]!;
    im[i] = out[1]!;
  }
  return {
    ...findGainMargins(respond, grid, re, im),
    ...findPhaseMargins(respond, grid, re, im),
    ...findPeak(respond, grid, re, im),
  };
}

type Sweep = [respond: Response, grid: Float64Array, re: Float64Array, im: Float64Array];

function findGainMargins(...[respond, grid, re, im]: Sweep): Pick<Margins, 'gainUp' | 'gainDown'> {
  let gainUp = Number.POSITIVE_INFINITY;
  let gainDown = 0;
  const note = (real: number): void => {
    if (real >= 0) return;
    const factor = -1 / real;
    if (factor > 1) gainUp = Math.min(gainUp, factor);
    else gainDown = Math.max(gainDown, factor);
  };
  const last = grid.length - 1;
  for (let i = 1; i <= last; i++) {
    if (im[i]! < 0 === im[i - 1]! < 0 || (re[i]! >= 0 && re[i - 1]! >= 0)) continue;
    note(refine(respond, grid[i - 1]!, grid[i]!, (_, y) => y).re);
  }
  /* The ends of the grid stand for zero frequency and for Nyquist's, where L is real. */
  for (const end of [0, last]) if (Math.abs(im[end]!) < 1e-3 * Math.abs(re[end]!)) note(re[end]!);
  return { gainUp, gainDown };
}

function findPhaseMargins(
  ...[respond, grid, re, im]: Sweep
): Pick<Margins, 'phase' | 'delay' | 'delayFrequency'> {
  let phase = Number.POSITIVE_INFINITY;
  let delay = Number.POSITIVE_INFINITY;
  let delayFrequency = Number.NaN;
  const isInside = (i: number): boolean => re[i]! * re[i]! + im[i]! * im[i]! < 1;
  for (let i = 1; i < grid.length; i++) {
    if (isInside(i) === isInside(i - 1)) continue;
    const c = refine(respond, grid[i - 1]!, grid[i]!, (x, y) => x * x + y * y - 1);
    /* Lag that turns L to -1, from 0 to a full turn. */
    let lag = Math.atan2(c.im, c.re) + Math.PI;
    if (lag < 0) lag += 2 * Math.PI;
    phase = Math.min(phase, lag, 2 * Math.PI - lag);
    if (lag / c.omega < delay) {
      delay = lag / c.omega;
      delayFrequency = c.omega;
    }
  }
  return { phase, delay, delayFrequency };
}

function findPeak(...[respond, grid, re, im]: Sweep): Pick<Margins, 'sensitivity' | 'sensitivityFrequency'> {
  let sensitivity = 0;
  let at = 0;
  for (let i = 0; i < grid.length; i++) {
    const peak = 1 / Math.sqrt((1 + re[i]!) ** 2 + im[i]! ** 2);
    if (peak > sensitivity) {
      sensitivity = peak;
      at = i;
    }
  }
  const sharp = refinePeak(respond, grid[Math.max(at - 1, 0)]!, grid[Math.min(at + 1, grid.length - 1)]!);
  return sharp.peak > sensitivity
    ? { sensitivity: sharp.peak, sensitivityFrequency: sharp.omega }
    : { sensitivity, sensitivityFrequency: grid[at]! };
}

/** The loop gain of a sampled loop as a function of frequency (rad/s). */
export function respondLoop(loop: LoopModel): Response {
  const parts = prepareLoop(loop.plant, loop.estimator);
  const basis = createLoopBasis(parts, loop.law, new Float64Array(1));
  return (omega, out) => {
    basis.theta[0] = omega * loop.plant.sampleTime;
    fillLoopBasis(parts, basis, 1);
    evaluateLoopGain(basis, loop.gains, 0, 1, out);
  };
}

export type LoopVerdict =
  | {
      readonly kind: 'holds';
      readonly margins: Margins;
      /** 1/s, how fast the slowest part of the answer decays */
      readonly decay: number;
    }
  | {
      readonly kind: 'fails';
      /** 1/s, how fast the worst part grows */
      readonly growth: number;
    };

/** Whether the linear loop holds, by its eigenvalues, and with what margins. About 1,000 frequency points. */
export function judgeLoop(loop: LoopModel): LoopVerdict {
  const decay = measureDecay(loop);
  if (!(decay > 0)) return { kind: 'fails', growth: -decay };
  const dt = loop.plant.sampleTime;
  const scale = Math.sqrt(Math.abs(loop.plant.stiffness) / loop.plant.inertia);
  const from = Math.min(Math.max(scale, 1e-3), decay) * 1e-3;
  return { kind: 'holds', margins: measureMargins(respondLoop(loop), from, Math.PI / dt), decay };
}

/** 1/s at which the slowest mode of the closed loop decays; negative when one grows. */
export function measureDecay(loop: LoopModel): number {
  return -Math.log(findSpectralRadius(buildClosedLoop(loop))) / loop.plant.sampleTime;
}

/** s of further delay at which the sampled loop loses its hold, exact, by bisection on its eigenvalues. */
export function findDelayBorder(loop: LoopModel, most = 1): number {
  let low = 0;
  let high = loop.plant.sampleTime / 4;
  const holds = (more: number): boolean =>
    measureDecay({ ...loop, plant: { ...loop.plant, delay: loop.plant.delay + more } }) > 0;
  if (!holds(0)) return 0;
  while (holds(high)) {
    low = high;
    high *= 1.5;
    if (high > most) return Number.POSITIVE_INFINITY;
  }
  while (high - low > 1e-6 * high) {
    const middle = 0.5 * (low + high);
    if (holds(middle)) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}
