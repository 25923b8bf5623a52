import { useEvaluation } from '../state/reading';

/** Why the rig as it stands cannot be worked out; what is on screen is the last that could. */
export function Refusals() {
  const evaluation = useEvaluation();
  if (evaluation?.kind !== 'refused') return null;
  return (
    <div className="refusals" role="alert">
      <b className="word-fails">Cannot stand like this</b>
      <ul>
        {evaluation.refusals.map((refusal) => (
          <li key={refusal.field + refusal.sentence}>{refusal.sentence}</li>
        ))}
      </ul>
      <p>Stage, ledger and ribbon show the last rig that could be worked out.</p>
    </div>
  );
}
