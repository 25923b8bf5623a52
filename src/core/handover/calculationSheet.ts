/** The calculation sheet as data: what is printed, and what is written as HTML and plain text. */
import { type Caution, describeTrigger, type SpinSheetOutcome } from '../physics';
import type { Rig } from '../rig';
import type { Evaluation, GainOutcome } from '../trial';
import { hashRig } from './canonicalRig';
import type { Imprint } from './handoverJson';
import {
  entrySection,
  figureRow,
  gainSection,
  ledgerRow,
  type SheetSection,
  spinSections,
} from './sheetRows';

export type Evaluated = Extract<Evaluation, { kind: 'evaluated' }>;

/** Everything that was found out about a rig, ready to be handed over. */
export interface Findings {
  readonly rig: Rig;
  readonly evaluation: Evaluated;
  readonly gains: GainOutcome;
  readonly spin: SpinSheetOutcome;
  readonly cautions: readonly Caution[];
}

export interface SheetCaution {
  readonly sentence: string;
  /** What set it off, with both numbers. */
  readonly because: string;
}

export interface CalculationSheet {
  readonly title: string;
  readonly program: string;
  readonly date: string;
  /** SHA-256 of the canonical rig file. */
  readonly sha256: string;
  /** What it comes to, in words; those that fail first. */
  readonly verdicts: readonly { readonly holds: boolean; readonly sentence: string }[];
  /** There is no way to leave them out. */
  readonly cautions: readonly SheetCaution[];
  readonly sections: readonly SheetSection[];
}

function verdictsOf({ evaluation, spin }: Findings): CalculationSheet['verdicts'] {
  const { plan, ledger, outcome } = evaluation;
  const failing = ledger.lines.filter(({ spare }) => spare < 0).map(({ label }) => label);
  const verdicts = [
    plan.kind === 'planned'
      ? { holds: true, sentence: 'There is a plan: the gimbals can carry the body through its jobs.' }
      : { holds: false, sentence: plan.sentence },
    failing.length > 0
      ? { holds: false, sentence: `The ledger fails on: ${failing.join(', ')}.` }
      : { holds: true, sentence: 'Every line of the ledger has something to spare.' },
    outcome.kind === 'holds'
      ? { holds: true, sentence: 'The body is still standing at the end of the preview.' }
      : { holds: false, sentence: `The body goes over ${outcome.at.toFixed(2)} s into the preview.` },
  ];
  if (spin.kind === 'refused')
    verdicts.push(...spin.sentences.map((sentence) => ({ holds: false, sentence })));
  else {
    for (const { name, failures } of spin.sheet.gyros)
      verdicts.push(...failures.map((failure) => ({ holds: false, sentence: `${name}: ${failure}` })));
  }
  return verdicts.toSorted((a, b) => Number(a.holds) - Number(b.holds));
}

const cautionOf = (caution: Caution): SheetCaution => ({
  sentence: caution.sentence,
  because: describeTrigger(caution.trigger),
});

/**
 * Puts the sheet together: verdicts, cautions, ledger, weight and fall, wheels, gains, and the rig as entered.
 *
 * O(rows).
 */
export function makeSheet(findings: Findings, imprint: Imprint): CalculationSheet {
  const { rig, evaluation, gains, spin } = findings;
  const ledger: SheetSection = {
    title: 'Ledger: what is asked against what there is',
    notes: [],
    rows: evaluation.ledger.lines.map(ledgerRow),
  };
  return {
    title: rig.name,
    program: imprint.program,
    date: imprint.date,
    sha256: hashRig(rig),
    verdicts: verdictsOf(findings),
    cautions: findings.cautions.map(cautionOf),
    sections: [
      ledger,
      { title: 'Weight, centre and fall', notes: [], rows: evaluation.weigh.map(figureRow) },
      ...(spin.kind === 'sheet' ? spinSections(spin.sheet) : []),
      gainSection(gains),
      entrySection(rig),
    ],
  };
}
