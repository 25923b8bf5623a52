import { type Caution, type CautionKind, describeTrigger } from '../../../core/physics';

const CAUTION_WORDS: Readonly<Record<CautionKind, string>> = {
  burst: 'Can burst',
  printed: 'Printed plastic',
  firstSpin: 'First spin',
  knock: 'After a knock',
  trap: 'Can trap',
  battery: 'Can burn',
  discharge: 'Before work',
  defer: 'Codes and engineers',
};

/** Every caution the rig calls for, with what set it off. They cannot be folded away. */
export function Cautions({ cautions }: { readonly cautions: readonly Caution[] }) {
  if (cautions.length === 0) return null;
  return (
    <section className="cautions" aria-label="Cautions">
      <h3>Cautions</h3>
      <ul>
        {cautions.map((caution) => (
          <li key={caution.kind}>
            <b>{CAUTION_WORDS[caution.kind]}</b>
            <p>{caution.sentence}</p>
            <p className="aside">Because: {describeTrigger(caution.trigger)}.</p>
          </li>
        ))}
      </ul>
    </section>
  );
}

/** The cautions' words alone, at the head of the sheet, so that they are in sight whatever is open below. */
export function CautionStrip({ cautions }: { readonly cautions: readonly Caution[] }) {
  const dangers = cautions.filter(({ kind }) => ['burst', 'printed', 'trap', 'battery'].includes(kind));
  if (dangers.length === 0) return null;
  return (
    <p className="caution-strip">
      <svg viewBox="0 0 24 22" width="24" height="22" aria-hidden>
        <path d="M12 2 22.5 20.5h-21zM12 9v5M12 16.6v1.4" />
      </svg>
      <span>{dangers.map(({ kind }) => CAUTION_WORDS[kind]).join(' · ')}: read the cautions below.</span>
    </p>
  );
}
