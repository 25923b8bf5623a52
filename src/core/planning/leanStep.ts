/** One exact step of I phi'' = k phi - d phi' + torque: x_next = state x + held t0 + ramp (t1 - t0). */
export interface LeanStep {
  /** 2 x 2 on (phi, phi'), row-major */
  readonly state: Float64Array;
  /** 2: effect of a torque held over the step */
  readonly held: Float64Array;
  /** 2: effect of a torque that rises by one unit over the step */
  readonly ramp: Float64Array;
}

/** exp(M) of a small dense matrix by scaling and squaring of its Taylor series. */
function exponential(m: readonly number[], n: number): number[] {
  let norm = 0;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += Math.abs(m[i * n + j]);
    norm = Math.max(norm, sum);
  }
  const halvings = Math.max(0, Math.ceil(Math.log2(norm / 0.25)));
  const scaled = m.map((v) => v / 2 ** halvings);
  const multiply = (a: readonly number[], b: readonly number[]): number[] =>
    Array.from({ length: n * n }, (_, at) => {
      let sum = 0;
      for (let l = 0; l < n; l++) sum += a[Math.floor(at / n) * n + l] * b[l * n + (at % n)];
      return sum;
    });
  const identity: number[] = Array.from({ length: n * n }, (_, at) => (at % (n + 1) === 0 ? 1 : 0));
  let term = identity;
  let sum = identity;
  // at |M| <= 1/4 the term of order 14 is below 1e-19
  for (let order = 1; order <= 14; order++) {
    term = multiply(term, scaled).map((v) => v / order);
    sum = sum.map((v, at) => v + term[at]);
  }
  for (let i = 0; i < halvings; i++) sum = multiply(sum, sum);
  return sum;
}

/**
 * Exact discretisation of the lean of a body on an edge, point, rocker or float over one step.
 *
 * @param inertia   kg m^2 about the line of lean, added inertia included; positive
 * @param stiffness N m/rad, positive topples, negative rights
 * @param damping   N m s/rad
 * @param step      s
 *
 * O(1). Source: Van Loan, IEEE Trans. Automatic Control 23 (1978), integrals by the exponential of an
 * augmented matrix; zero-order hold for the array, first-order hold for the demand.
 */
export function discretiseLean(inertia: number, stiffness: number, damping: number, step: number): LeanStep {
  const t = step;
  const e = exponential(
    [0, t, 0, 0, (stiffness / inertia) * t, (-damping / inertia) * t, t / inertia, 0, 0, 0, 0, 1, 0, 0, 0, 0],
    4,
  );
  return {
    state: Float64Array.of(e[0], e[1], e[4], e[5]),
    held: Float64Array.of(e[2], e[6]),
    ramp: Float64Array.of(e[3], e[7]),
  };
}
