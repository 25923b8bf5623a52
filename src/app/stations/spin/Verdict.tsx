import type { SpinSheetOutcome } from '../../../core/physics';

/** Wheels with what forbids spinning them; those that fail alike stand in one sentence. */
function failuresInWords(outcome: Extract<SpinSheetOutcome, { kind: 'sheet' }>): readonly string[] {
  const about = new Map<string, string[]>();
  for (const { name, failures } of outcome.sheet.gyros) {
    for (const failure of failures) about.set(failure, [...(about.get(failure) ?? []), name]);
  }
  return [...about].map(([failure, names]) => `${names.join(', ')}: ${failure}.`);
}

/** Whether the wheels may be spun as they stand, and if not, why. */
export function Verdict({ outcome }: { readonly outcome: SpinSheetOutcome | undefined }) {
  if (!outcome) return null;
  const sentences = outcome.kind === 'sheet' ? failuresInWords(outcome) : outcome.sentences;
  if (sentences.length === 0) {
    return (
      <div className="plan-state" data-state="holds">
        <h3>May be spun</h3>
        <p className="aside">Below its safe speed, in reach of motor and battery, bearings bear it.</p>
      </div>
    );
  }
  return (
    <div className="plan-state" data-state="fails" role="alert">
      <h3>
        <b className="word-fails">{outcome.kind === 'sheet' ? 'Do not spin it so' : 'Not a wheel'}</b>
      </h3>
      {sentences.map((sentence) => (
        <p key={sentence}>{sentence}</p>
      ))}
      {outcome.kind === 'refused' && <p>The figures are of the last wheel that could be worked out.</p>}
    </div>
  );
}
