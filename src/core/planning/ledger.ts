import type { Figure } from '../units';

export const LEDGER_LINES = [
  'rollTorque',
  'pitchTorque',
  'momentum',
  'pitchMomentum',
  'tilt',
  'pitchTilt',
  'tiltRate',
  'pitchTiltRate',
  'servoTorque',
  'pitchServoTorque',
  'servoHeat',
  'pitchServoHeat',
  'singularity',
  'lean',
  'pitchLean',
  'centreOfPressure',
  'pressureAlong',
  'yawLeak',
  'rimStress',
  'bearing',
  'battery',
] as const;
export type LedgerLineName = (typeof LEDGER_LINES)[number];

/** One ask held against what there is. `ask` and `have` share one dimension and are never negative. */
export interface LedgerLine {
  readonly name: LedgerLineName;
  readonly label: string;
  readonly ask: Figure;
  readonly have: Figure;
  /** (have - ask) / have; negative: it fails; minus infinity when there is nothing to have. */
  readonly spare: number;
  /** Instant of least spare, s from the start of the plan; undefined for a line that does not change over time. */
  readonly at: number | undefined;
  /** Ask and have over the plan's instants, for the ribbon; undefined for a line that does not change over time. */
  readonly course:
    | { readonly time: Float64Array; readonly ask: Float64Array; readonly have: Float64Array }
    | undefined;
}

export interface Ledger {
  /** Least spare first. */
  readonly lines: readonly LedgerLine[];
}

/** A limit passed by less than this share of it is met: a plan touches its limits, and digits run out there. */
const MET = 1e-6;

/** (have - ask) / have, with nothing to have counted as failing. */
export function spareOf(ask: number, have: number): number {
  if (!(have > 0)) return ask > 0 ? Number.NEGATIVE_INFINITY : 0;
  const spare = (have - ask) / have;
  return spare < 0 && spare > -MET ? 0 : spare;
}

/** Puts lines in order, the tightest first. */
export const makeLedger = (lines: readonly LedgerLine[]): Ledger => ({
  lines: lines.toSorted((a, b) => a.spare - b.spare),
});

/** The line with the least spare; undefined when there is none. */
export const tightest = (ledger: Ledger): LedgerLine | undefined => ledger.lines[0];
