import { FigureGrounds } from '../sheet/FigureRow';
import { showQuantity } from '../sheet/showFigure';
import { useShown } from '../state/reading';
import { useSession } from '../state/session';
import { fails, spareWords } from './ledgerMarks';

/** The opened ledger line: ask and have with their formulas, inputs and sources. */
export function OpenedLine() {
  const name = useSession((session) => session.openedLine);
  const close = useSession((session) => session.openLine);
  const units = useSession((session) => session.units);
  const line = useShown()?.ledger.lines.find((candidate) => candidate.name === name);
  if (!line) return null;
  return (
    <section
      className="opened-line"
      data-fails={fails(line) || undefined}
      aria-label={`${line.label}, opened`}
    >
      <header>
        <h3>{line.label}</h3>
        <button type="button" aria-label="Close" onClick={() => close(undefined)}>
          ×
        </button>
      </header>
      <p className="opened-spare">
        {fails(line) && <b className="word-fails">Fails</b>} {spareWords(line.spare)}
        {line.at !== undefined && <span> · tightest at {showQuantity(line.at, 'time', units.time)}</span>}
      </p>
      {[line.ask, line.have].map((figure, index) => (
        <div key={figure.id} className="opened-side">
          <h4>
            <span>{index === 0 ? 'Ask' : 'Have'}</span>
            <b>{showQuantity(figure.value, figure.dimension, units[figure.dimension], 4)}</b>
          </h4>
          <p>{figure.label}</p>
          <FigureGrounds figure={figure} />
        </div>
      ))}
    </section>
  );
}
