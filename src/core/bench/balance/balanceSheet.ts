import * as v from 'valibot';
import { balanceByFourRuns } from './fourRun';
import { compareGrades, type GradeChange } from './grade';
import { type HoleOutcome, splitOverHoles } from './holeSplit';
import { balanceByInfluence } from './influence';
import { angleOf, type Phasor, phasor, sizeOf, subtract } from './phasor';

const positive = v.pipe(v.number(), v.finite(), v.gtValue(0));
const degrees = v.pipe(v.number(), v.finite());
const ReadingSchema = v.strictObject({
  amplitude: v.pipe(v.number(), v.finite(), v.minValue(0)),
  angle: degrees,
});

const WheelSchema = v.strictObject({ mass_kg: positive, speed_rpm: positive, radius_mm: positive });
const HolesSchema = v.strictObject({
  angles: v.pipe(v.array(degrees), v.minLength(2), v.maxLength(72)),
  most_g: v.optional(positive),
  step_g: v.optional(v.pipe(v.number(), v.minValue(0))),
  way: v.picklist(['add', 'drill']),
});

/**
 * Readings of a balancing session as typed or saved: shop units, said in the names. Angles in degrees on the wheel from the
 * mark, positive in the direction of rotation.
 */
export const BalanceSheetSchema = v.variant('method', [
  v.strictObject({
    method: v.literal('influence'),
    initial: v.pipe(v.array(ReadingSchema), v.minLength(1), v.maxLength(2)),
    trials: v.pipe(
      v.array(
        v.strictObject({
          plane: v.picklist([1, 2]),
          weight_g: positive,
          angle: degrees,
          readings: v.array(ReadingSchema),
        }),
      ),
      v.minLength(1),
      v.maxLength(2),
    ),
    readingError: v.optional(v.pipe(v.number(), v.minValue(0))),
    wheel: WheelSchema,
    holes: v.optional(HolesSchema),
  }),
  v.strictObject({
    method: v.literal('fourRun'),
    amplitude: positive,
    weight_g: positive,
    runs: v.pipe(v.array(v.strictObject({ angle: degrees, amplitude: positive })), v.length(3)),
    wheel: WheelSchema,
    holes: v.optional(HolesSchema),
  }),
]);

export type BalanceSheet = v.InferOutput<typeof BalanceSheetSchema>;

export interface PlaneAnswer {
  /** Mass to add, g, and its angle, degrees from the mark in the direction of rotation. */
  readonly mass_g: number;
  readonly angle: number;
  /** Half width of the 95 % interval of the mass, g; 0 when no reading error was given. */
  readonly doubt_g: number;
  readonly holes: HoleOutcome | undefined;
  readonly grade: GradeChange;
}

export type SheetOutcome =
  | {
      readonly kind: 'balanced';
      readonly planes: readonly PlaneAnswer[];
      readonly remarks: readonly string[];
    }
  | { readonly kind: 'refused'; readonly sentences: readonly string[] };

const RAD = Math.PI / 180;
const toPhasor = (r: { amplitude: number; angle: number }): Phasor => phasor(r.amplitude, r.angle * RAD);

/** Reads a sheet from JSON text; each fault a sentence that names the field and the value. */
export function readBalanceSheet(text: string): BalanceSheet | readonly string[] {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (error) {
    return [`The readings are no JSON: ${error instanceof Error ? error.message : String(error)}.`];
  }
  const parsed = v.safeParse(BalanceSheetSchema, value);
  if (parsed.success) return parsed.output;
  return parsed.issues.map(
    (issue) =>
      `${v.getDotPath(issue) ?? 'The sheet'} is ${issue.received}: expected ${issue.expected ?? 'a number in range'}.`,
  );
}

/** Balances by the method of the sheet, splits the answer over the holes and grades the wheel before and after. */
export function balanceWheel(sheet: BalanceSheet): SheetOutcome {
  if (sheet.method === 'fourRun') {
    const runs = sheet.runs.map((r) => ({ angle: r.angle * RAD, amplitude: r.amplitude }));
    const outcome = balanceByFourRuns(sheet.amplitude, runs, sheet.weight_g * 1e-3);
    if (outcome.kind === 'refused') return { kind: 'refused', sentences: [outcome.sentence] };
    return {
      kind: 'balanced',
      planes: [answerPlane(sheet, outcome.correction, 0, 1)],
      remarks: outcome.remarks,
    };
  }
  const trials = sheet.trials.map((t) => ({
    plane: t.plane - 1,
    weight: phasor(t.weight_g * 1e-3, t.angle * RAD),
    readings: t.readings.map(toPhasor),
  }));
  const outcome = balanceByInfluence(sheet.initial.map(toPhasor), trials, sheet.readingError ?? 0);
  if (outcome.kind === 'refused') return { kind: 'refused', sentences: [outcome.sentence] };
  const count = outcome.corrections.length;
  return {
    kind: 'balanced',
    planes: outcome.corrections.map((c, p) => answerPlane(sheet, c, outcome.doubts[p], count)),
    remarks: outcome.remarks,
  };
}

/** With two planes each is graded against its half of the wheel's mass. */
function answerPlane(sheet: BalanceSheet, correction: Phasor, doubt: number, planes: number): PlaneAnswer {
  const { wheel, holes } = sheet;
  const split = holes
    ? splitOverHoles(correction, {
        angles: holes.angles.map((a) => a * RAD),
        mostPerHole: (holes.most_g ?? Number.POSITIVE_INFINITY) * 1e-3,
        step: (holes.step_g ?? 0) * 1e-3,
        way: holes.way,
      })
    : undefined;
  const left = split?.kind === 'split' ? sizeOf(subtract(correction, split.achieved)) : 0;
  const grade = compareGrades(
    sizeOf(correction),
    Math.max(left, doubt),
    wheel.radius_mm * 1e-3,
    wheel.mass_kg / planes,
    (wheel.speed_rpm * Math.PI) / 30,
  );
  return {
    mass_g: sizeOf(correction) * 1e3,
    angle: angleOf(correction) / RAD,
    doubt_g: doubt * 1e3,
    holes: split,
    grade,
  };
}
