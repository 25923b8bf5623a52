import type { Refusal } from '../../core/rig';
import { useDocument } from '../state/document';
import { useEvaluation } from '../state/reading';

/**
 * Refusals for people: like gyros are refused alike, so each sentence stands once, led by the names of those it is
 * about instead of their places in the file.
 */
function inWords(refusals: readonly Refusal[], names: readonly string[]): readonly string[] {
  const about = new Map<string, string[]>();
  for (const { sentence } of refusals) {
    const place = /array\.gyros\[(\d+)\]\.?/.exec(sentence);
    const rest = place ? sentence.replaceAll(place[0], '') : sentence;
    const who = place ? [names[Number(place[1])] ?? `Gyro ${Number(place[1]) + 1}`] : [];
    about.set(rest, [...(about.get(rest) ?? []), ...who]);
  }
  return [...about].map(([rest, who]) => (who.length > 0 ? `${who.join(', ')}: ${rest}` : rest));
}

/** Why the rig as it stands cannot be worked out; what is on screen is the last that could. */
export function Refusals() {
  const evaluation = useEvaluation();
  const gyros = useDocument((document) => document.rig.array.gyros);
  if (evaluation?.kind !== 'refused') return null;
  return (
    <div className="refusals" role="alert">
      <b className="word-fails">Cannot stand like this</b>
      <ul>
        {inWords(
          evaluation.refusals,
          gyros.map((gyro) => gyro.name),
        ).map((sentence) => (
          <li key={sentence}>{sentence}</li>
        ))}
      </ul>
      <p>Stage, ledger and ribbon show the last rig that could be worked out.</p>
    </div>
  );
}
