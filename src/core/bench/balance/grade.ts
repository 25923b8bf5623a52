import { BALANCE_GRADES } from '../../physics';

/** Grade, mm/s, that a rotor with a residual unbalance (kg*m) has at a speed (rad/s). Source: ISO 21940-11:2016. */
export const gradeOfUnbalance = (unbalance: number, mass: number, speed: number): number =>
  (1e3 * unbalance * speed) / mass;

/** Smallest grade in common use that a value (mm/s) meets; undefined when it meets none. */
export const findGrade = (value: number): number | undefined =>
  BALANCE_GRADES.find(({ grade }) => value <= grade * (1 + 1e-12))?.grade;

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
