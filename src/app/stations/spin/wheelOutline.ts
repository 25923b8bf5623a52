/** A wheel's stack as shapes of its section through the spin axis: radius to the right, axis upright. All in m. */
import { outerRadiusOf } from '../../../core/physics';
import type { WheelPart } from '../../../core/rig';

export type PartShape =
  | {
      readonly kind: 'ring';
      readonly inner: number;
      readonly outer: number;
      readonly low: number;
      readonly high: number;
    }
  | { readonly kind: 'ball'; readonly radius: number; readonly height: number; readonly size: number }
  | { readonly kind: 'bolt'; readonly radius: number; readonly height: number };

export interface WheelOutline {
  readonly shapes: readonly PartShape[];
  readonly outerRadius: number;
  /** The innermost bore; 0 for a wheel without one. */
  readonly boreRadius: number;
  readonly low: number;
  readonly high: number;
}

const ring = (inner: number, outer: number, thickness: number, offset: number): PartShape => ({
  kind: 'ring',
  inner,
  outer,
  low: offset - thickness / 2,
  high: offset + thickness / 2,
});

export function partShape(part: WheelPart): PartShape {
  switch (part.kind) {
    case 'disc':
      return ring(part.bore, part.radius, part.thickness, part.offset);
    case 'rim':
      return ring(part.innerRadius, part.outerRadius, part.width, part.offset);
    case 'hub':
      return ring(part.bore, part.radius, part.length, part.offset);
    case 'balls':
      return { kind: 'ball', radius: part.pitchRadius, height: part.offset, size: part.diameter };
    case 'bolts':
      return { kind: 'bolt', radius: part.pitchRadius, height: part.offset };
  }
}

export function outlineWheel(parts: readonly WheelPart[]): WheelOutline {
  const shapes = parts.map(partShape);
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  let boreRadius = Number.POSITIVE_INFINITY;
  for (const shape of shapes) {
    const half = shape.kind === 'ball' ? shape.size / 2 : 0;
    low = Math.min(low, shape.kind === 'ring' ? shape.low : shape.height - half);
    high = Math.max(high, shape.kind === 'ring' ? shape.high : shape.height + half);
    if (shape.kind === 'ring') boreRadius = Math.min(boreRadius, shape.inner);
  }
  return {
    shapes,
    outerRadius: Math.max(...parts.map(outerRadiusOf)),
    boreRadius: Number.isFinite(boreRadius) ? boreRadius : 0,
    low,
    high,
  };
}

/** How hard a part is worked: factor x stress over the allowable, in steps that a hatch can tell apart. */
export const STRESS_BANDS = [
  { below: 0.25, words: 'under ¼' },
  { below: 0.5, words: 'under ½' },
  { below: 0.75, words: 'under ¾' },
  { below: 1, words: 'up to full' },
  { below: Number.POSITIVE_INFINITY, words: 'too much' },
] as const;

/** The band of a share of what is allowed; exactly full is not yet too much. */
export const stressBand = (share: number): number =>
  share > 1 ? STRESS_BANDS.length - 1 : Math.max(0, Math.min(3, Math.floor(share * 4)));
