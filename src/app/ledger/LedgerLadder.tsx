import { type LedgerLine, tightest } from '../../core/planning';
import { showQuantity } from '../sheet/showFigure';
import { useShown } from '../state/reading';
import { useSession } from '../state/session';
import { stream } from '../state/stream';
import { fails, quantityOf, spareWords } from './ledgerMarks';

/** Where the right rail (what there is) stands, and the longest rung, in hundredths of the ladder's width. */
const RAIL = 78;
const LONGEST = 100;

const rungLength = (line: LedgerLine): number => {
  const share = line.spare === Number.NEGATIVE_INFINITY ? LONGEST / RAIL : 1 - line.spare;
  return Math.min(LONGEST, Math.max(1, share * RAIL));
};

/** Opens or closes a line; opening it moves the ribbon to the instant at which it is tightest. */
export function toggleLine(line: LedgerLine): void {
  const { openedLine, openLine } = useSession.getState();
  const isOpening = openedLine !== line.name;
  openLine(isOpening ? line.name : undefined);
  if (isOpening && line.at !== undefined) {
    stream.pause();
    stream.seek(line.at);
  }
}

function Rung({ line }: { readonly line: LedgerLine }) {
  const isOpen = useSession((session) => session.openedLine === line.name);
  const askSymbol = useSession((session) => session.units[line.ask.dimension]);
  const ask = showQuantity(line.ask.value, line.ask.dimension, askSymbol);
  const have = showQuantity(line.have.value, line.have.dimension, askSymbol);
  return (
    <li>
      <button
        type="button"
        className="rung"
        data-fails={fails(line) || undefined}
        data-quantity={quantityOf(line.name)}
        aria-expanded={isOpen}
        onClick={() => toggleLine(line)}
      >
        <span className="rung-label">{line.label}</span>
        <span className="rung-spare">
          {fails(line) && <b className="word-fails">Fails</b>} {spareWords(line.spare)}
        </span>
        <span className="rung-track" aria-hidden>
          <span className="rung-ask" style={{ width: `${rungLength(line)}%` }} />
        </span>
        <span className="rung-figures">
          asks {ask} of {have}
        </span>
      </button>
    </li>
  );
}

/** The ladder of asks against haves, tightest on top. The right rail is what there is; a rung through it fails. */
export function LedgerLadder() {
  const ledger = useShown()?.ledger;
  return (
    <section className="ledger" aria-label="Ledger: asks against haves, tightest first">
      <header className="ledger-head">
        <h2>Ledger</h2>
        <span aria-hidden>ask against have</span>
      </header>
      {!ledger && <p className="waiting">Working it out…</p>}
      <ol>
        {ledger?.lines.map((line) => (
          <Rung key={line.name} line={line} />
        ))}
      </ol>
    </section>
  );
}

/** The ladder folded to one line, for narrow screens: the tightest, by name. */
export function LedgerLineFolded({ onUnfold }: { readonly onUnfold: () => void }) {
  const ledger = useShown()?.ledger;
  const line = ledger && tightest(ledger);
  if (!line) return <div className="ledger-folded waiting">Working it out…</div>;
  return (
    <button type="button" className="ledger-folded" data-fails={fails(line) || undefined} onClick={onUnfold}>
      <span>
        Tightest: <b>{line.label}</b>
      </span>
      <span>
        {fails(line) && <b className="word-fails">Fails</b>} {spareWords(line.spare)}
      </span>
    </button>
  );
}
