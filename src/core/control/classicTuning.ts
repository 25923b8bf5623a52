import { type Margins, measureMargins, type Response } from './margins';

/** Rational transfer function, highest power first. */
export interface TransferFunction {
  readonly numerator: readonly number[];
  readonly denominator: readonly number[];
  /** s, pure delay */
  readonly delay?: number;
}

/** The response of a transfer function at i omega. */
export function respondTransfer(t: TransferFunction): Response {
  const evaluate = (p: readonly number[], w: number): [number, number] => {
    let re = 0;
    let im = 0;
    for (const c of p) {
      const next = -im * w + c;
      im = re * w;
      re = next;
    }
    return [re, im];
  };
  return (omega, out) => {
    const [a, b] = evaluate(t.numerator, omega);
    const [c, d] = evaluate(t.denominator, omega);
    const size = c * c + d * d;
    const re = (a * c + b * d) / size;
    const im = (b * c - a * d) / size;
    const lag = omega * (t.delay ?? 0);
    out[0] = re * Math.cos(lag) + im * Math.sin(lag);
    out[1] = im * Math.cos(lag) - re * Math.sin(lag);
  };
}

/** Margins of a transfer function closed with gain 1. */
export const measureTransfer = (t: TransferFunction, from: number, to: number): Margins =>
  measureMargins(respondTransfer(t), from, to);

export interface UltimateGain {
  readonly gain: number;
  /** s */
  readonly period: number;
}

/**
 * The proportional gain at which a stable process just oscillates, and the period of it; undefined when no gain
 * does. The lowest crossing of the negative real axis between `from` and `to` (rad/s) counts.
 */
export function findUltimateGain(t: TransferFunction, from: number, to: number): UltimateGain | undefined {
  const respond = respondTransfer(t);
  const out = new Float64Array(2);
  const points = 2000;
  let last = Number.NaN;
  let lastOmega = from;
  for (let i = 0; i < points; i++) {
    const omega = from * (to / from) ** (i / (points - 1));
    respond(omega, out);
    if (out[1]! >= 0 && last < 0 && out[0]! < 0) {
      let low = lastOmega;
      let high = omega;
      for (let k = 0; k < 100; k++) {
        const middle = 0.5 * (low + high);
        respond(middle, out);
        if (out[1]! < 0) low = middle;
        else high = middle;
      }
      respond(low, out);
      return { gain: -1 / out[0]!, period: (2 * Math.PI) / low };
    }
    last = out[1]!;
    lastOmega = omega;
  }
  return undefined;
}

/**
 * Ziegler and Nichols's gains from the ultimate gain and period: 0.6 Ku, Ti = Tu / 2, Td = Tu / 8.
 * Source: Trans. ASME 64 (1942). They suit sluggish stable processes, not a toppling body.
 */
export function tuneByUltimateGain(u: UltimateGain): {
  readonly kp: number;
  readonly integralTime: number;
  readonly derivativeTime: number;
} {
  return { kp: 0.6 * u.gain, integralTime: u.period / 2, derivativeTime: u.period / 8 };
}
