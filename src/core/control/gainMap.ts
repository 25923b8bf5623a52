import { chooseLeastDecay } from './gainDesign';
import { createLoopBasis, type LoopBasis, prepareLoop } from './loopBasis';
import { LAW_GAINS, type LoopModel } from './loopModel';
import { countOutside, createLoopScorer, measureModulus } from './loopScore';

export interface MapRequest extends LoopModel {
  /** indices into the law's gains */
  readonly across: number;
  readonly up: number;
  readonly acrossRange: readonly [number, number];
  readonly upRange: readonly [number, number];
  readonly columns: number;
  readonly rows: number;
}

export interface GainMap {
  readonly across: Float64Array;
  readonly up: Float64Array;
  /**
   * rows x columns, bottom row first: where the loop holds, the modulus margin (0 at the border, larger is
   * better); where it does not, minus the number of growing modes
   */
  readonly value: Float64Array;
  /** pairs (across, up) along the border, NaN between its pieces: exact points, not contours of the grid */
  readonly border: Float64Array;
}

/**
 * Where in the plane of two gains the loop holds, with the others as they are.
 *
 * Every point counts its growing modes exactly by the argument principle; about 10 microseconds each.
 */
export function mapGains(request: MapRequest): GainMap {
  const { plant, estimator, law, across, up, columns, rows } = request;
  const names = LAW_GAINS[law];
  if (across === up || !(across in names) || !(up in names))
    throw new Error('a map needs two different gains');
  const scorer = createLoopScorer(plant, estimator, law, chooseLeastDecay(plant));
  const gains = Float64Array.from(request.gains);
  const spread = (range: readonly [number, number], count: number): Float64Array =>
    Float64Array.from({ length: count }, (_, i) => range[0] + ((range[1] - range[0]) * i) / (count - 1));
  const acrossValues = spread(request.acrossRange, columns);
  const upValues = spread(request.upRange, rows);
  const value = new Float64Array(rows * columns);
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      gains[across] = acrossValues[c]!;
      gains[up] = upValues[r]!;
      const loose = countOutside(scorer.hold, scorer.holdPoles, gains, 1);
      value[r * columns + c] = loose > 0 ? -loose : measureModulus(scorer.margin, gains, 1);
    }
  }
  return { across: acrossValues, up: upValues, value, border: traceBorder(request) };
}

/**
 * The border of the stable gains, by decomposition of the plane: at each frequency the closed loop's equation on
 * the unit circle is two real equations for two gains; zero frequency and Nyquist's give a line each.
 *
 * Source: Neimark's D-decomposition; e.g. Gryazina and Polyak, Automatica 42 (2006).
 */
export function traceBorder(request: MapRequest): Float64Array {
  const { plant, estimator, law, across, up } = request;
  const points = 1500;
  const theta = new Float64Array(points);
  const from = 1e-4 * Math.sqrt(Math.abs(plant.stiffness) / plant.inertia || 1) * plant.sampleTime;
  for (let i = 0; i < points; i++) theta[i] = from * (Math.PI / from) ** (i / (points - 1));
  theta[points - 1] = Math.PI * (1 - 1e-9);
  const basis = createLoopBasis(prepareLoop(plant, estimator), law, theta);
  const border: number[] = [];
  let isOpen = false;
  for (let i = 0; i < points; i++) {
    const found = solvePoint(basis, request.gains, across, up, i);
    const isInside =
      found !== undefined && isWithin(found[0], request.acrossRange) && isWithin(found[1], request.upRange);
    if (isInside) border.push(found[0], found[1]);
    else if (isOpen) border.push(Number.NaN, Number.NaN);
    isOpen = isInside;
  }
  if (isOpen) border.push(Number.NaN, Number.NaN);
  for (const end of [0, points - 1]) addLine(basis, request, end, border);
  return Float64Array.from(border);
}

const isWithin = (x: number, range: readonly [number, number]): boolean =>
  x >= Math.min(...range) - 0.2 * Math.abs(range[1] - range[0]) &&
  x <= Math.max(...range) + 0.2 * Math.abs(range[1] - range[0]);

/* Q + fixed terms + x H_across + y H_up = 0, real and imaginary parts. */
function gatherFixed(
  b: LoopBasis,
  gains: ArrayLike<number>,
  across: number,
  up: number,
  i: number,
): [number, number] {
  let re = b.qRe[i]!;
  let im = b.qIm[i]!;
  for (let k = 0; k < gains.length; k++) {
    if (k === across || k === up || gains[k] === 0) continue;
    re += gains[k]! * b.hRe[k * b.points + i]!;
    im += gains[k]! * b.hIm[k * b.points + i]!;
  }
  return [re, im];
}

function solvePoint(
  b: LoopBasis,
  gains: ArrayLike<number>,
  across: number,
  up: number,
  i: number,
): [number, number] | undefined {
  const n = b.points;
  const [re, im] = gatherFixed(b, gains, across, up, i);
  const a = b.hRe[across * n + i]!;
  const c = b.hIm[across * n + i]!;
  const e = b.hRe[up * n + i]!;
  const f = b.hIm[up * n + i]!;
  const det = a * f - c * e;
  if (Math.abs(det) < 1e-12 * (a * a + c * c + e * e + f * f)) return undefined;
  return [(-re * f + im * e) / det, (-im * a + re * c) / det];
}

/* A real root at z = 1 or z = -1: one line in the plane, cut to the map. */
function addLine(b: LoopBasis, request: MapRequest, i: number, border: number[]): void {
  const [re] = gatherFixed(b, request.gains, request.across, request.up, i);
  const a = b.hRe[request.across * b.points + i]!;
  const e = b.hRe[request.up * b.points + i]!;
  const ends: number[] = [];
  const [x0, x1] = request.acrossRange;
  const [y0, y1] = request.upRange;
  const note = (x: number, y: number): void => {
    const onMap = x >= x0 - 1e-9 * Math.abs(x1 - x0) && x <= x1 + 1e-9 * Math.abs(x1 - x0);
    const high = y >= y0 - 1e-9 * Math.abs(y1 - y0) && y <= y1 + 1e-9 * Math.abs(y1 - y0);
    if (onMap && high && ends.length < 4) ends.push(x, y);
  };
  if (Math.abs(e) > 1e-9 * Math.abs(a)) for (const x of [x0, x1]) note(x, -(re + a * x) / e);
  if (Math.abs(a) > 1e-9 * Math.abs(e)) for (const y of [y0, y1]) note(-(re + e * y) / a, y);
  if (ends.length === 4) border.push(...ends, Number.NaN, Number.NaN);
}

/** A map's range for a gain when nothing is said: from none to three times its present value. */
export function chooseRange(gain: number): readonly [number, number] {
  if (gain === 0) return [0, 1];
  return gain > 0 ? [0, 3 * gain] : [3 * gain, 0];
}
