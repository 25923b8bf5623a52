/** Balance grades of ISO 21940-11: the product of eccentricity and speed, mm/s. */
export const BALANCE_GRADES: readonly number[] = [0.4, 1, 2.5, 6.3, 16, 40, 100, 250, 630, 1600, 4000];

/**
 * Permissible residual unbalance, kg*m, of a rotor at a grade: U = G m / omega (e_per * omega = G).
 *
 * @param grade  mm/s, as the grades are named; @param mass kg; @param speed rad/s
 * Source: ISO 21940-11 section 6.2.
 */
export const permissibleUnbalance = (grade: number, mass: number, speed: number): number =>
  (1e-3 * grade * mass) / speed;

/** Grade, mm/s, that a rotor with a residual unbalance (kg*m) has at a speed (rad/s). */
export const gradeOfUnbalance = (unbalance: number, mass: number, speed: number): number =>
  (1e3 * unbalance * speed) / mass;

/** Smallest named grade that a value (mm/s) meets; undefined when it meets none. */
export const findGrade = (value: number): number | undefined =>
  BALANCE_GRADES.find((g) => value <= g * (1 + 1e-12));

export interface GradeChange {
  /** kg*m. */
  readonly unbalanceBefore: number;
  readonly unbalanceAfter: number;
  /** mm/s. */
  readonly before: number;
  readonly after: number;
  readonly gradeBefore: number | undefined;
  readonly gradeAfter: number | undefined;
}

/**
 * Grade before and after a correction: the correction itself measures what was wrong.
 *
 * @param correction  kg needed, at `radius` m; @param left  kg still missing after holes and steps
 */
export function compareGrades(
  correction: number,
  left: number,
  radius: number,
  mass: number,
  speed: number,
): GradeChange {
  const before = gradeOfUnbalance(correction * radius, mass, speed);
  const after = gradeOfUnbalance(left * radius, mass, speed);
  return {
    unbalanceBefore: correction * radius,
    unbalanceAfter: left * radius,
    before,
    after,
    gradeBefore: findGrade(before),
    gradeAfter: findGrade(after),
  };
}
