import { useEffect, useId, useRef } from 'react';
import { type LedgerLine, tightest } from '../../core/planning';
import type { PlanView } from '../../core/trial';
import { formatNumber, fromSI } from '../../core/units';
import { showQuantity } from '../sheet/showFigure';
import { useSentence } from '../state/cures';
import { useShown } from '../state/reading';
import { useSession } from '../state/session';
import { stream } from '../state/stream';
import { LineGrounds } from './LineGrounds';
import { fails, quantityOf, sparePercent, spareWords } from './ledgerMarks';

/** Where the right rail (what there is) stands, in hundredths of the ladder's width; agrees with styles/ledger.css. */
const RAIL = 78;
const LONGEST = 100;

const rungLength = (line: LedgerLine): number => {
  const share = line.spare === Number.NEGATIVE_INFINITY ? LONGEST / RAIL : 1 - line.spare;
  return Math.min(LONGEST, Math.max(1, share * RAIL));
};

/** Opens or closes a line; opening it moves the ribbon to the instant at which it is tightest. */
function toggleLine(line: LedgerLine): void {
  const { openedLine, openLine } = useSession.getState();
  const isOpening = openedLine !== line.label;
  openLine(isOpening ? line.label : undefined);
  if (isOpening && line.at !== undefined) {
    stream.pause();
    stream.seek(line.at);
  }
}

function Rung({ line }: { readonly line: LedgerLine }) {
  const id = useId();
  const place = useRef<HTMLLIElement>(null);
  const isOpen = useSession((session) => session.openedLine === line.label);
  const symbol = useSession((session) => session.units[line.ask.dimension]);
  const { dimension } = line.ask;
  const asked = formatNumber(fromSI(line.ask.value, dimension, symbol));

  useEffect(() => {
    if (isOpen) place.current?.scrollIntoView({ block: 'nearest' });
  }, [isOpen]);

  return (
    <li ref={place} data-fails={fails(line) || undefined} data-quantity={quantityOf(line.name)}>
      <button
        type="button"
        className="rung"
        aria-expanded={isOpen}
        aria-controls={id}
        onClick={() => toggleLine(line)}
      >
        <span className="rung-label">{line.label}</span>
        <span className="rung-spare" aria-hidden>
          {sparePercent(line.spare)}
        </span>
        <span className="rung-track" aria-hidden>
          <span className="rung-ask" style={{ width: `${rungLength(line)}%` }} />
        </span>
        <span className="rung-figures">
          {fails(line) && <b className="word-fails">Fails, {spareWords(line.spare)}. </b>}
          {!fails(line) && <span className="unseen">{spareWords(line.spare)}. </span>}
          asks {asked} of {showQuantity(line.have.value, dimension, symbol)}
        </span>
      </button>
      <div id={id} hidden={!isOpen}>
        {isOpen && <LineGrounds line={line} />}
      </div>
    </li>
  );
}

/** The ladder of asks against haves, tightest on top. The right rail is what there is; a rung through it fails. */
export function LedgerLadder() {
  const shown = useShown();
  return (
    <section className="ledger" aria-label="Ledger: asks against haves, tightest first">
      <header className="ledger-head">
        <h2>Ledger</h2>
        <span aria-hidden>spare</span>
      </header>
      {!shown && <p className="waiting">Working it out…</p>}
      {shown && <NoPlan plan={shown.plan} />}
      <ol>
        {shown?.ledger.lines.map((line) => (
          <Rung key={line.label} line={line} />
        ))}
      </ol>
    </section>
  );
}

/** Without a plan the ladder knows no asks over time, and must say so before it shows what is left. */
function NoPlan({ plan }: { readonly plan: PlanView }) {
  return plan.kind === 'planned' ? null : <Missing plan={plan} />;
}

function Missing({ plan }: { readonly plan: Exclude<PlanView, { kind: 'planned' }> }) {
  const goTo = useSession((session) => session.goTo);
  const sentence = useSentence(plan);
  return (
    <button
      type="button"
      className="no-plan"
      data-fails={plan.kind === 'impossible'}
      onClick={() => goTo('plan')}
    >
      <b>{plan.kind === 'impossible' ? 'No plan' : 'Not planned'}</b>
      <span>{sentence}</span>
    </button>
  );
}

/** The ladder folded to one line, for narrow screens: the tightest, by name. */
export function LedgerLineFolded({ onUnfold }: { readonly onUnfold: () => void }) {
  const shown = useShown();
  const line = shown && tightest(shown.ledger);
  if (!shown || !line) return <div className="ledger-folded waiting">Working it out…</div>;
  const hasNoPlan = shown.plan.kind === 'impossible';
  return (
    <button
      type="button"
      className="ledger-folded"
      data-fails={hasNoPlan || fails(line) || undefined}
      onClick={onUnfold}
    >
      {hasNoPlan ? (
        <b className="word-fails">No plan</b>
      ) : (
        <>
          <span>
            Tightest: <b>{line.label}</b>
          </span>
          <span>
            {fails(line) && <b className="word-fails">Fails</b>} {spareWords(line.spare)}
          </span>
        </>
      )}
    </button>
  );
}
