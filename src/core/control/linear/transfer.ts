import type { Matrix } from 'ml-matrix';

/** Work space for the response of a small system x+ = A x + B u, y = C x + D u at one point z. */
export interface TransferWork {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

export const createTransferWork = (states: number, inputs: number): TransferWork => ({
  re: new Float64Array(states * (states + inputs)),
  im: new Float64Array(states * (states + inputs)),
});

/**
 * Solves (z I - A) X = B for complex z and complex B by elimination with partial pivoting.
 *
 * @param a n x n   @param inputs number of columns of B
 * @param bRe,bIm n x inputs, row-major, overwritten with X
 */
export function solveResolvent(
  a: Matrix,
  zRe: number,
  zIm: number,
  bRe: Float64Array,
  bIm: Float64Array,
  inputs: number,
  work: TransferWork,
): void {
  const n = a.rows;
  const w = n + inputs;
  const { re, im } = work;
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      re[i * w + j] = (i === j ? zRe : 0) - a.get(i, j);
      im[i * w + j] = i === j ? zIm : 0;
    }
    for (let j = 0; j < inputs; j++) {
      re[i * w + n + j] = bRe[i * inputs + j]!;
      im[i * w + n + j] = bIm[i * inputs + j]!;
    }
  }
  for (let p = 0; p < n; p++) {
    let best = p;
    let bestSize = -1;
    for (let i = p; i < n; i++) {
      const size = re[i * w + p]! ** 2 + im[i * w + p]! ** 2;
      if (size > bestSize) {
        bestSize = size;
        best = i;
      }
    }
    if (best !== p) swapRows(re, im, w, p, best);
    const pr = re[p * w + p]! / bestSize;
    const pi = -im[p * w + p]! / bestSize;
    for (let i = p + 1; i < n; i++) {
      const fr = re[i * w + p]! * pr - im[i * w + p]! * pi;
      const fi = re[i * w + p]! * pi + im[i * w + p]! * pr;
      for (let j = p + 1; j < w; j++) {
        re[i * w + j]! -= fr * re[p * w + j]! - fi * im[p * w + j]!;
        im[i * w + j]! -= fr * im[p * w + j]! + fi * re[p * w + j]!;
      }
    }
  }
  for (let c = 0; c < inputs; c++) {
    for (let i = n - 1; i >= 0; i--) {
      let sr = re[i * w + n + c]!;
      let si = im[i * w + n + c]!;
      for (let j = i + 1; j < n; j++) {
        sr -= re[i * w + j]! * bRe[j * inputs + c]! - im[i * w + j]! * bIm[j * inputs + c]!;
        si -= re[i * w + j]! * bIm[j * inputs + c]! + im[i * w + j]! * bRe[j * inputs + c]!;
      }
      const dr = re[i * w + i]!;
      const di = im[i * w + i]!;
      const size = dr * dr + di * di;
      bRe[i * inputs + c] = (sr * dr + si * di) / size;
      bIm[i * inputs + c] = (si * dr - sr * di) / size;
    }
  }
}

function swapRows(re: Float64Array, im: Float64Array, w: number, p: number, q: number): void {
  for (let j = 0; j < w; j++) {
    const r = re[p * w + j]!;
    re[p * w + j] = re[q * w + j]!;
    re[q * w + j] = r;
    const m = im[p * w + j]!;
    im[p * w + j] = im[q * w + j]!;
    im[q * w + j] = m;
  }
}
