/** How close is close enough. A value passes when |actual - expected| <= abs + rel * |expected|. */
export interface Tolerance {
  readonly abs?: number;
  readonly rel?: number;
}

type Numbers = number | ArrayLike<number>;

const asArray = (value: Numbers): ArrayLike<number> => (typeof value === 'number' ? [value] : value);

/**
 * Asserts that numbers agree within an absolute plus a relative tolerance, worst element reported.
 * Refuses NaN on either side, unequal lengths, and a tolerance of nothing.
 */
export function expectClose(actual: Numbers, expected: Numbers, tolerance: Tolerance, label = 'value'): void {
  const abs = tolerance.abs ?? 0;
  const rel = tolerance.rel ?? 0;
  if (!(abs >= 0 && rel >= 0 && abs + rel > 0))
    throw new Error(`${label}: give a positive abs or rel tolerance`);
  const got = asArray(actual);
  const want = asArray(expected);
  if (got.length !== want.length) {
    throw new Error(`${label}: ${got.length} values where ${want.length} were expected`);
  }
  let worst = -1;
  let worstExcess = 1;
  for (let i = 0; i < want.length; i++) {
    const a = got[i] as number;
    const b = want[i] as number;
    if (Number.isNaN(a) || Number.isNaN(b)) throw new Error(`${label}[${i}]: NaN (got ${a}, expected ${b})`);
    if (a === b) continue;
    const excess = Math.abs(a - b) / (abs + rel * Math.abs(b));
    if (!(excess <= worstExcess)) {
      worst = i;
      worstExcess = excess;
    }
  }
  if (worst >= 0) {
    throw new Error(
      `${label}[${worst}]: got ${got[worst]}, expected ${want[worst]}, off by ${Math.abs(
        (got[worst] as number) - (want[worst] as number),
      )}, ${worstExcess.toPrecision(3)} times the tolerance (abs ${abs}, rel ${rel})`,
    );
  }
}
