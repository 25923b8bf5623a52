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

const DANGERS: Readonly<Partial<Record<CautionKind, string>>> = {
  burst: 'burst',
  trap: 'trap',
  battery: 'burn',
};

/** The dangers in a few words at the head of the sheet, in sight whatever is scrolled below; a tap leads to them all. */
export function CautionStrip({ cautions }: { readonly cautions: readonly Caution[] }) {
  if (cautions.length === 0) return null;
  const dangers = cautions.flatMap(({ kind }) => DANGERS[kind] ?? []);
  const isPrinted = cautions.some(({ kind }) => kind === 'printed');
  return (
    <button
      type="button"
      className="caution-strip"
      onClick={(event) =>
        event.currentTarget
          .closest('.sheet-body')
          ?.querySelector('.cautions')
          ?.scrollIntoView({ block: 'start' })
      }
    >
      <svg viewBox="0 0 24 22" width="24" height="22" aria-hidden>
        <path d="M12 2 22.5 20.5h-21zM12 9v5M12 16.6v1.4" />
      </svg>
      <span>
        {dangers.length > 0 && `Can ${dangers.join(', ')}`}
        {isPrinted && (dangers.length > 0 ? '; printed plastic' : 'Printed plastic')}
      </span>
      <small>{cautions.length} cautions ↓</small>
    </button>
  );
}
