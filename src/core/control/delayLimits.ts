import { Matrix } from 'ml-matrix';
import { findEigenvalues } from './linear/spectrum';

/**
 * Longest delay at which proportional feedback can hold dx/dt = p x + u(t - delay): one over p.
 *
 * Source: De Paor and O'Malley, Int. J. Control 49 (1989); Silva, Datta, Bhattacharyya, PID Controllers for
 * Time-Delay Systems.
 */
export const limitDelayFirstOrder = (pole: number): number => 1 / pole;

/**
 * Longest delay at which lean and lean rate feedback can hold d2x/dt2 = a x + u(t - delay): sqrt(2 / a).
 * No choice of the two gains does better, so for a body with k / I = a it bounds loop, servo and filter together.
 *
 * Source: Stepan, Retarded Dynamical Systems (1989); Insperger, Commun. Nonlinear Sci. Numer. Simul. 16 (2011).
 */
export const limitDelaySecondOrder = (a: number): number => Math.sqrt(2 / a);

/** m, shortest stick a balancer with this reaction delay can hold on a base that slides freely (a = 6 g / l). */
export const shortestSlidingStick = (delay: number, gravity: number): number => 3 * gravity * delay * delay;

/** m, the same on a base whose acceleration is commanded (a = 3 g / (2 l)). */
export const shortestDrivenStick = (delay: number, gravity: number): number => 0.75 * gravity * delay * delay;

/**
 * Largest real part of the roots of dx/dt = A x(t) + Ad x(t - delay), which has infinitely many.
 *
 * @param nodes Chebyshev nodes over one delay; 16 give about eight digits for loops of ordinary size
 *
 * The solution operator's generator, collocated at Chebyshev nodes: Breda, Maset, Vermiglio, SIAM J. Sci. Comput.
 * 27 (2005). O((nodes n)^3).
 */
export function findDelayAbscissa(a: Matrix, ad: Matrix, delay: number, nodes = 16): number {
  const n = a.rows;
  const points = Array.from({ length: nodes + 1 }, (_, i) => Math.cos((i * Math.PI) / nodes));
  const weight = (i: number): number => (i === 0 || i === nodes ? 2 : 1) * (i % 2 === 0 ? 1 : -1);
  const size = n * (nodes + 1);
  const m = Matrix.zeros(size, size);
  for (let r = 0; r < n; r++) {
    for (let c = 0; c < n; c++) {
      m.set(r, c, a.get(r, c));
      m.set(r, nodes * n + c, ad.get(r, c));
    }
  }
  for (let i = 1; i <= nodes; i++) {
    let diagonal = 0;
    for (let j = 0; j <= nodes; j++) {
      if (j === i) continue;
      const d = weight(i) / weight(j) / (points[i]! - points[j]!);
      diagonal -= d;
      for (let k = 0; k < n; k++) m.set(i * n + k, j * n + k, (2 / delay) * d);
    }
    for (let k = 0; k < n; k++) m.set(i * n + k, i * n + k, (2 / delay) * diagonal);
  }
  return findEigenvalues(m).re.reduce((worst, x) => Math.max(worst, x), Number.NEGATIVE_INFINITY);
}
