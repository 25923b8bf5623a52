import { EigenvalueDecomposition, Matrix } from 'ml-matrix';

export interface ComplexList {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** Eigenvalues of a real square matrix, in no particular order. */
export function findEigenvalues(a: Matrix): ComplexList {
  if (a.rows === 0) return { re: new Float64Array(0), im: new Float64Array(0) };
  const e = new EigenvalueDecomposition(a, { assumeSymmetric: false });
  return { re: Float64Array.from(e.realEigenvalues), im: Float64Array.from(e.imaginaryEigenvalues) };
}

/** Largest modulus among the eigenvalues: a sampled system is stable below 1. */
export function findSpectralRadius(a: Matrix): number {
  const { re, im } = findEigenvalues(a);
  let worst = 0;
  for (let i = 0; i < re.length; i++) worst = Math.max(worst, Math.sqrt(re[i]! ** 2 + im[i]! ** 2));
  return worst;
}

/** Largest real part among the eigenvalues: a continuous system is stable below 0. */
export function findAbscissa(a: Matrix): number {
  const { re } = findEigenvalues(a);
  return re.reduce((worst, value) => Math.max(worst, value), Number.NEGATIVE_INFINITY);
}

/**
 * Roots of a real polynomial by the eigenvalues of its balanced companion matrix.
 *
 * @param coefficients highest power first; leading zeros are dropped
 */
export function findRoots(coefficients: readonly number[]): ComplexList {
  const first = coefficients.findIndex((c) => c !== 0);
  const p = first < 0 ? [] : coefficients.slice(first);
  const n = p.length - 1;
  if (n < 1) return { re: new Float64Array(0), im: new Float64Array(0) };
  /* Scaling the variable to roots of modulus about one keeps servo and drift poles both accurate. */
  const tail = p[n]!;
  const scale = tail !== 0 ? Math.abs(tail / p[0]!) ** (1 / n) : 1;
  const companion = Matrix.zeros(n, n);
  for (let i = 0; i < n; i++) companion.set(0, i, -p[i + 1]! / (p[0]! * scale ** (i + 1)));
  for (let i = 1; i < n; i++) companion.set(i, i - 1, 1);
  const { re, im } = findEigenvalues(companion);
  return { re: re.map((x) => x * scale), im: im.map((x) => x * scale) };
}

/** Largest real part among a polynomial's roots. */
export function findRootAbscissa(coefficients: readonly number[]): number {
  return findRoots(coefficients).re.reduce((worst, x) => Math.max(worst, x), Number.NEGATIVE_INFINITY);
}
