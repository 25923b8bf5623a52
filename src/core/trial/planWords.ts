import type { AxisFailure, LedgerLineName, LimitName, MomentumPlanOutcome } from '../planning';
import { type Dimension, formatQuantity } from '../units';

interface LimitWords {
  readonly line: LedgerLineName;
  readonly dimension: Dimension;
  readonly noun: string;
}

const WORDS: Readonly<Record<LimitName, LimitWords>> = {
  momentum: { line: 'momentum', dimension: 'angularMomentum', noun: 'stored momentum' },
  'tilt rate': { line: 'tiltRate', dimension: 'angularRate', noun: 'tilt rate' },
  torque: { line: 'rollTorque', dimension: 'torque', noun: 'torque' },
  'servo torque': { line: 'servoTorque', dimension: 'torque', noun: 'servo torque' },
  'centre of pressure': {
    line: 'centreOfPressure',
    dimension: 'length',
    noun: 'room for the centre of pressure',
  },
  lean: { line: 'tilt', dimension: 'angle', noun: 'room to lean' },
  'mean moment': { line: 'rollTorque', dimension: 'torque', noun: 'mean moment over the cycle' },
};

/** What forbids a plan, and the ledger line it belongs to. */
export interface Explained {
  readonly line: LedgerLineName;
  readonly sentence: string;
}

/** Names the limit that weighs most in the proof that there is no plan; by how much it falls short takes more solves. */
export function nameImpossible(failures: readonly AxisFailure[]): Explained {
  const weight = new Map<LimitName, number>();
  for (const { certificate, rowLimit } of failures) {
    rowLimit.forEach((limit, row) => {
      weight.set(limit, (weight.get(limit) ?? 0) + Math.abs(certificate.dual[row] ?? 0));
    });
  }
  const [limit] = [...weight].reduce((a, b) => (b[1] > a[1] ? b : a), ['momentum', 0] as [LimitName, number]);
  const { line, noun } = WORDS[limit];
  return { line, sentence: `No plan exists: ${noun} falls short.` };
}

/** Says which limit forbids a plan and by how much, in words with units. */
export function explainImpossible(outcome: Extract<MomentumPlanOutcome, { kind: 'impossible' }>): Explained {
  const { line, dimension, noun } = WORDS[outcome.limit];
  const short = formatQuantity(outcome.shortBy, dimension);
  if (outcome.limit === 'mean moment') {
    const shift = outcome.shift ?? 0;
    const way = shift > 0 ? 'left' : 'right';
    return {
      line,
      sentence: `No plan closes on itself: ${short} of ${noun} is left over, and an array can only lend momentum. Move the centre of mass ${formatQuantity(Math.abs(shift), 'length')} to the ${way}.`,
    };
  }
  if (!Number.isFinite(outcome.shortBy)) {
    return {
      line,
      sentence: `No plan exists: ${noun} falls short, and no amount of it alone would be enough.`,
    };
  }
  const where = outcome.limit === 'centre of pressure' ? ' on each side of the support' : '';
  return { line, sentence: `No plan exists: ${noun} falls short by ${short}${where}.` };
}
