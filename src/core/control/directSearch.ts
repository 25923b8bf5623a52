export interface SearchOptions {
  readonly evaluations: number;
  /** stop when the simplex is smaller than this in every coordinate */
  readonly tolerance: number;
  readonly startSize: number;
}

export interface SearchResult {
  readonly x: Float64Array;
  readonly value: number;
  readonly evaluations: number;
}

/**
 * Largest value of a function of a few variables without derivatives; deterministic.
 *
 * Nelder and Mead, Computer J. 7 (1965), with the dimension-dependent coefficients of Gao and Han, Comput.
 * Optim. Appl. 51 (2012), and one restart from the best point, since a simplex can collapse on a ridge.
 */
export function searchMaximum(
  value: (x: Float64Array) => number,
  start: ArrayLike<number>,
  options: SearchOptions,
): SearchResult {
  const first = climb(value, start, { ...options, evaluations: Math.floor(options.evaluations / 2) });
  const second = climb(value, first.x, {
    ...options,
    evaluations: options.evaluations - first.evaluations,
    startSize: options.startSize / 2,
  });
  const best = second.value >= first.value ? second : first;
  return { x: best.x, value: best.value, evaluations: first.evaluations + second.evaluations };
}

function climb(
  value: (x: Float64Array) => number,
  start: ArrayLike<number>,
  options: SearchOptions,
): SearchResult {
  const n = start.length;
  const expand = 1 + 2 / n;
  const contract = 0.75 - 1 / (2 * n);
  const shrink = 1 - 1 / n;
  let evaluations = 0;
  const measure = (x: Float64Array): { x: Float64Array; f: number } => {
    evaluations++;
    return { x, f: value(x) };
  };
  const simplex = [measure(Float64Array.from(start))];
  for (let i = 0; i < n; i++) {
    const x = Float64Array.from(start);
    x[i]! += options.startSize;
    simplex.push(measure(x));
  }
  const blend = (centre: Float64Array, worst: Float64Array, t: number): Float64Array =>
    centre.map((c, i) => c + t * (worst[i]! - c));
  while (evaluations < options.evaluations) {
    simplex.sort((a, b) => b.f - a.f);
    const best = simplex[0]!;
    const worst = simplex[n]!;
    let size = 0;
    for (let i = 0; i < n; i++) size = Math.max(size, Math.abs(worst.x[i]! - best.x[i]!));
    if (size < options.tolerance) break;
    const centre = new Float64Array(n);
    for (let k = 0; k < n; k++) for (let i = 0; i < n; i++) centre[i]! += simplex[k]!.x[i]! / n;
    const reflected = measure(blend(centre, worst.x, -1));
    if (reflected.f > best.f) {
      const further = measure(blend(centre, worst.x, -expand));
      simplex[n] = further.f > reflected.f ? further : reflected;
    } else if (reflected.f > simplex[n - 1]!.f) simplex[n] = reflected;
    else {
      const inside = reflected.f > worst.f ? -contract : contract;
      const nearer = measure(blend(centre, worst.x, inside));
      if (nearer.f > Math.max(reflected.f, worst.f)) simplex[n] = nearer;
      else {
        for (let k = 1; k <= n; k++) {
          const x = simplex[k]!.x.map((xi, i) => best.x[i]! + shrink * (xi - best.x[i]!));
          simplex[k] = measure(x);
        }
      }
    }
  }
  simplex.sort((a, b) => b.f - a.f);
  return { x: simplex[0]!.x, value: simplex[0]!.f, evaluations };
}
