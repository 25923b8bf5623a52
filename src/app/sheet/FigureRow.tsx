import { useId, useState } from 'react';
import { type Figure, formatQuantity } from '../../core/units';
import { useSession } from '../state/session';

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
              <dd>{formatQuantity(input.value, input.dimension, units[input.dimension], 4)}</dd>
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
        <b>{formatQuantity(figure.value, figure.dimension, symbol, 4)}</b>
      </button>
      <div id={id} hidden={!isOpen}>
        {isOpen && <FigureGrounds figure={figure} />}
      </div>
    </div>
  );
}
