/** A plan as a document of its own: every curve over its instants, every line of the ledger, in SI. */
import * as v from 'valibot';
import { LEDGER_LINES, type Ledger } from '../planning';
import type { Rig } from '../rig';
import type { PlanCourse } from '../trial';

export const PLAN_FORMAT = 'tiltwright-plan';
export const PLAN_VERSION = 1;

const column = v.array(v.pipe(v.number(), v.finite()));

const LineSchema = v.strictObject({
  name: v.picklist(LEDGER_LINES),
  label: v.string(),
  /** As the units module names it; ask and have share it. */
  dimension: v.string(),
  ask: v.pipe(v.number(), v.finite()),
  have: v.pipe(v.number(), v.finite()),
  /** (have - ask) / have; null where there is nothing to have. */
  spare: v.nullable(v.pipe(v.number(), v.finite())),
  /** s; null for a line that does not change over time. */
  at: v.nullable(v.number()),
  formula: v.strictObject({ ask: v.string(), have: v.string() }),
  source: v.string(),
});

/** The plan document. Columns are as long as `time`; a gimbal's columns are its own. */
export const PlanJsonSchema = v.strictObject({
  format: v.literal(PLAN_FORMAT),
  version: v.literal(PLAN_VERSION),
  rig: v.string(),
  jobs: v.string(),
  /** s */
  time: column,
  gimbals: v.array(
    v.strictObject({
      name: v.string(),
      /** rad; rad/s. */
      tilt: column,
      tiltRate: column,
    }),
  ),
  /** N*m; N*m; N*m*s: about roll. */
  roll: v.strictObject({ demand: column, torque: column, momentum: column, momentumLimit: column }),
  /** m, to the left; null for a body without flat feet. */
  centreOfPressure: v.nullable(v.strictObject({ across: column, supportRight: column, supportLeft: column })),
  ledger: v.array(LineSchema),
});

export type PlanJson = v.InferOutput<typeof PlanJsonSchema>;

/** Puts a plan together as a document. O(instants x gyros). */
export function planJson(rig: Rig, course: PlanCourse, ledger: Ledger): PlanJson {
  const { gyros } = course;
  const ofGyro = (packed: Float64Array, gyro: number): number[] =>
    Array.from(course.time, (_, k) => packed[k * gyros + gyro] as number);
  return {
    format: PLAN_FORMAT,
    version: PLAN_VERSION,
    rig: rig.name,
    jobs: rig.jobs.name,
    time: [...course.time],
    gimbals: Array.from({ length: gyros }, (_, gyro) => ({
      name: rig.array.gyros[gyro]?.name ?? `Gyro ${gyro + 1}`,
      tilt: ofGyro(course.tilt, gyro),
      tiltRate: ofGyro(course.tiltRate, gyro),
    })),
    roll: {
      demand: [...course.demand],
      torque: [...course.torque],
      momentum: [...course.momentum],
      momentumLimit: [...course.momentumLimit],
    },
    centreOfPressure:
      course.centreOfPressure.length > 0
        ? {
            across: [...course.centreOfPressure],
            supportRight: [...course.supportRight],
            supportLeft: [...course.supportLeft],
          }
        : null,
    ledger: ledger.lines.map(({ name, label, ask, have, spare, at }) => ({
      name,
      label,
      dimension: ask.dimension,
      ask: ask.value,
      have: have.value,
      spare: Number.isFinite(spare) ? spare : null,
      at: at ?? null,
      formula: { ask: ask.formula, have: have.formula },
      source: ask.source,
    })),
  };
}

/** The plan as the text of a JSON file. */
export const writePlanJson = (rig: Rig, course: PlanCourse, ledger: Ledger): string =>
  `${JSON.stringify(planJson(rig, course, ledger), null, 1)}\n`;

/** Reads a plan file; every fault is a sentence that names the field. */
export function readPlanJson(
  text: string,
):
  | { readonly kind: 'read'; readonly plan: PlanJson }
  | { readonly kind: 'refused'; readonly sentences: readonly string[] } {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (error) {
    return { kind: 'refused', sentences: [`The file is not JSON: ${(error as Error).message}.`] };
  }
  const result = v.safeParse(PlanJsonSchema, value);
  if (result.success) return { kind: 'read', plan: result.output };
  const sentences = result.issues
    .slice(0, 20)
    .map((issue) => `${v.getDotPath(issue) ?? 'plan'}: ${issue.message}.`);
  return { kind: 'refused', sentences };
}
