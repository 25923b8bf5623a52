import { useId, useState } from 'react';
import type { Figure } from '../../core/units';
import { useSession } from '../state/session';
import { showQuantity } from './showFigure';

/** Formula, inputs and source of a figure. */
export function FigureGrounds({ figure }: { readonly figure: Figure }) {
  const units = useSession((session) => session.units);
  return (
    <div className="grounds">
      <p className="grounds-formula">{figure.formula}</p>
      {figure.inputs.length > 0 && (
        <dl>
          {figure.inputs.map((input) => (
            <div key={input.label}>
              <dt>{input.label}</dt>
              <dd>{showQuantity(input.value, input.dimension, units[input.dimension], 4)}</dd>
            </div>
          ))}
        </dl>
      )}
      <p className="grounds-source">Source: {figure.source}</p>
    </div>
  );
}

/** A computed number that opens to show where it comes from. */
export function FigureRow({ figure }: { readonly figure: Figure }) {
  const id = useId();
  const [isOpen, setOpen] = useState(false);
  const symbol = useSession((session) => session.units[figure.dimension]);
  return (
    <div className="figure">
      <button type="button" aria-expanded={isOpen} aria-controls={id} onClick={() => setOpen(!isOpen)}>
        <span>{figure.label}</span>
        <b>{showQuantity(figure.value, figure.dimension, symbol, 4)}</b>
      </button>
      <div id={id} hidden={!isOpen}>
        {isOpen && <FigureGrounds figure={figure} />}
      </div>
    </div>
  );
}
