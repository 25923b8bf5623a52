/**
 * The disc equation solved as a boundary-value problem by shooting, for any number of bands of even thickness:
 * an answer that owes nothing to closed forms. State is growth u and edge force N = t sigma_r, at 1 rad/s:
 *   u' = (1 - nu^2) N / (E t) - nu u / r
 *   N' = t sigma_theta / r - N / r - t rho r,  sigma_theta = E u / r + nu N / t
 * (from d(r t sigma_r)/dr - t sigma_theta + t rho r^2 = 0, plane stress).
 */
export interface Band {
  readonly inner: number;
  readonly outer: number;
  readonly thickness: number;
  readonly density: number;
  readonly youngsModulus: number;
  readonly poissonRatio: number;
  /** kg/rad, outward pull per metre at the outer edge. */
  readonly edgePull: number;
}

export interface Sample {
  readonly radius: number;
  readonly radial: number;
  readonly hoop: number;
  readonly growth: number;
  readonly band: number;
}

function march(bands: readonly Band[], u0: number, n0: number, loaded: boolean, steps: number): Sample[] {
  const samples: Sample[] = [];
  let u = u0;
  let n = n0;
  bands.forEach((band, index) => {
    const { thickness: t, youngsModulus: E, poissonRatio: nu, density } = band;
    const rho = loaded ? density : 0;
    const slope = (r: number, y: number, f: number): [number, number] => {
      const hoop = (E * y) / r + (nu * f) / t;
      return [((1 - nu * nu) * f) / (E * t) - (nu * y) / r, (t * hoop - f) / r - t * rho * r];
    };
    const record = (r: number) =>
      samples.push({ radius: r, radial: n / t, hoop: (E * u) / r + (nu * n) / t, growth: u, band: index });
    const ratio = (band.outer / band.inner) ** (1 / steps);
    record(band.inner);
    for (let i = 0; i < steps; i++) {
      const r = band.inner * ratio ** i;
      const h = band.inner * ratio ** (i + 1) - r;
      const [a1, b1] = slope(r, u, n);
      const [a2, b2] = slope(r + h / 2, u + (h / 2) * a1, n + (h / 2) * b1);
      const [a3, b3] = slope(r + h / 2, u + (h / 2) * a2, n + (h / 2) * b2);
      const [a4, b4] = slope(r + h, u + h * a3, n + h * b3);
      u += (h / 6) * (a1 + 2 * a2 + 2 * a3 + a4);
      n += (h / 6) * (b1 + 2 * b2 + 2 * b3 + b4);
      record(r + h);
    }
    if (loaded) n -= band.edgePull;
  });
  samples.push({ radius: Number.NaN, radial: n, hoop: Number.NaN, growth: u, band: -1 });
  return samples;
}

/**
 * Stresses and growth at 1 rad/s. A first band that starts below a thousandth of its outer radius counts as
 * solid: it starts from the smooth centre, u proportional to r.
 */
export function solveRotatingDisc(bands: readonly Band[], borePull = 0, steps = 1500): Sample[] {
  const first = bands[0]!;
  const isSolid = first.inner < 1e-3 * first.outer;
  const { youngsModulus: E, poissonRatio: nu, thickness: t } = first;
  const unitForce = isSolid ? (E * t) / (1 - nu) / first.inner : 0;
  const forced = march(bands, 0, isSolid ? 0 : -borePull, true, steps);
  const free = march(bands, 1, unitForce, false, steps);
  const scale = -forced.at(-1)!.radial / free.at(-1)!.radial;
  return forced.slice(0, -1).map((s, i) => ({
    radius: s.radius,
    radial: s.radial + scale * free[i]!.radial,
    hoop: s.hoop + scale * free[i]!.hoop,
    growth: s.growth + scale * free[i]!.growth,
    band: s.band,
  }));
}
