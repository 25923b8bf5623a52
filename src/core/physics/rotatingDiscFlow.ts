/**
 * Flow over a disc that spins in still fluid, by von Karman's similarity: F, G, H are the radial, swirling and
 * axial velocities over omega r, omega r and sqrt(nu omega), against the height z sqrt(omega/nu).
 *   F'' = F^2 - G^2 + F' H,  G'' = 2 F G + H G',  H' = -2 F,  F(0) = 0, G(0) = 1, H(0) = 0, F and G -> 0.
 */
export interface DiscFlow {
  /** F'(0). */
  readonly radialSlope: number;
  /** G'(0): the wall shear that makes the drag. */
  readonly swirlSlope: number;
  /** H far away: the inflow. */
  readonly inflow: number;
  /** C_M sqrt(Re) of both sides: 2 pi |G'(0)|. */
  readonly momentFactor: number;
}

const HEIGHT = 14;
const STEPS = 400;

/** State: F, F', G, G', H, then their derivatives by F'(0) and by G'(0), five each. */
const STATES = 15;

function slope(y: Float64Array, out: Float64Array): void {
  const F = y[0]!;
  const f = y[1]!;
  const G = y[2]!;
  const g = y[3]!;
  const H = y[4]!;
  out[0] = f;
  out[1] = F * F - G * G + f * H;
  out[2] = g;
  out[3] = 2 * F * G + H * g;
  out[4] = -2 * F;
  for (let k = 5; k < STATES; k += 5) {
    const dF = y[k]!;
    const df = y[k + 1]!;
    const dG = y[k + 2]!;
    const dg = y[k + 3]!;
    const dH = y[k + 4]!;
    out[k] = df;
    out[k + 1] = 2 * F * dF - 2 * G * dG + df * H + f * dH;
    out[k + 2] = dg;
    out[k + 3] = 2 * (dF * G + F * dG) + dH * g + H * dg;
    out[k + 4] = -2 * dF;
  }
}

/** Integrates from the wall to `height` with RK4. */
function shoot(radialSlope: number, swirlSlope: number, height: number): Float64Array {
  const y = new Float64Array(STATES);
  y[1] = radialSlope;
  y[2] = 1;
  y[3] = swirlSlope;
  y[6] = 1;
  y[13] = 1;
  const h = height / STEPS;
  const trial = new Float64Array(STATES);
  const k = [0, 1, 2, 3].map(() => new Float64Array(STATES)) as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  for (let step = 0; step < STEPS; step++) {
    slope(y, k[0]);
    for (let i = 0; i < STATES; i++) trial[i] = y[i]! + (h / 2) * k[0][i]!;
    slope(trial, k[1]);
    for (let i = 0; i < STATES; i++) trial[i] = y[i]! + (h / 2) * k[1][i]!;
    slope(trial, k[2]);
    for (let i = 0; i < STATES; i++) trial[i] = y[i]! + h * k[2][i]!;
    slope(trial, k[3]);
    for (let i = 0; i < STATES; i++) {
      y[i] = y[i]! + (h / 6) * (k[0][i]! + 2 * k[1][i]! + 2 * k[2][i]! + k[3][i]!);
    }
  }
  return y;
}

/**
 * Solves the similarity equations by shooting with exact sensitivities. Far from the wall F and G die out as
 * exp(H z), so F' = H F and G' = H G are asked of them at the edge; the height is raised in stages.
 *
 * Cost: some fifteen integrations of 400 steps, some milliseconds, once. Source: von Karman, ZAMM 1 (1921); Cochran, Proc.
 * Camb. Phil. Soc. 30 (1934).
 */
export function solveDiscFlow(): DiscFlow {
  let a = 0.5;
  let b = -0.6;
  let y = shoot(a, b, 3);
  for (const height of [3, 7, HEIGHT]) {
    for (let i = 0; i < 30; i++) {
      y = shoot(a, b, height);
      const H = y[4]!;
      const r1 = y[1]! - H * y[0]!;
      const r2 = y[3]! - H * y[2]!;
      const j = (k: number, of: number): number => y[k + of + 1]! - H * y[k + of]! - y[k + 4]! * y[of]!;
      const determinant = j(5, 0) * j(10, 2) - j(10, 0) * j(5, 2);
      const da = (r1 * j(10, 2) - r2 * j(10, 0)) / determinant;
      const db = (r2 * j(5, 0) - r1 * j(5, 2)) / determinant;
      a -= da;
      b -= db;
      if (Math.abs(da) + Math.abs(db) < 1e-13) break;
    }
  }
  y = shoot(a, b, HEIGHT);
  return {
    radialSlope: a,
    swirlSlope: b,
    inflow: y[4]! + (2 * y[0]!) / y[4]!,
    momentFactor: -2 * Math.PI * b,
  };
}

let known: DiscFlow | undefined;

/** The solution, worked out once. */
export function discFlow(): DiscFlow {
  known ??= solveDiscFlow();
  return known;
}
