import type { LedgerLine } from '../../core/planning';
import { FigureGrounds } from '../sheet/FigureRow';
import { showQuantity } from '../sheet/showFigure';
import { useSession } from '../state/session';

/** What stands behind an opened ledger line: ask and have with their formulas, inputs and sources. */
export function LineGrounds({ line }: { readonly line: LedgerLine }) {
  const units = useSession((session) => session.units);
  return (
    <div className="line-grounds">
      {line.at !== undefined && <p>Tightest at {showQuantity(line.at, 'time', units.time)}</p>}
      {[line.ask, line.have].map((figure, index) => (
        <div key={figure.id}>
          <h3>
            <span>{index === 0 ? 'Ask' : 'Have'}</span>
            <b>{showQuantity(figure.value, figure.dimension, units[figure.dimension], 4)}</b>
          </h3>
          <FigureGrounds figure={figure} />
        </div>
      ))}
    </div>
  );
}
