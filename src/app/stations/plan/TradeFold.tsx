import { useState } from 'react';
import {
  type TradeAsk,
  type TradeCell,
  type TradeNumber,
  tradeNumbers,
  tradeRig,
  tradeValue,
} from '../../../core/planning';
import type { Rig } from '../../../core/rig';
import { Choice } from '../../fields/Choice';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { Fold } from './Fold';
import { OwnNumber } from './OwnNumber';
import { planPool } from './planPool';
import { TradePicture } from './TradePicture';
import { usePlanTask } from './usePlanTask';

const CELLS = 20;

/** A map over two numbers: where the jobs can be planned, and with how much to spare; a tap loads a cell's rig. */
export const TradeFold = () => (
  <Fold title="Trade map">
    <TradeFields />
  </Fold>
);

interface Axis {
  readonly id: string;
  readonly from: number;
  readonly to: number;
}

/** A map as far as it is drawn: of which rig, over what, and its rows. */
interface Drawn {
  readonly rig: Rig;
  readonly ask: TradeAsk;
  readonly rows: readonly (readonly TradeCell[] | undefined)[];
}

const axisOf = ({ id, from, to }: TradeNumber): Axis => ({ id, from, to });

function TradeFields() {
  const rig = useDocument((document) => document.rig);
  const numbers = tradeNumbers(rig);
  const [chosen, setChosen] = useState<{ readonly across?: Axis; readonly up?: Axis }>({});
  const [drawn, setDrawn] = useState<Drawn>();
  const { state, start, end } = usePlanTask<void>();
  const first = numbers[0];
  const second = numbers[1];
  if (!first || !second) return <p>This rig has no two numbers to map over yet.</p>;
  const isThere = (axis: Axis | undefined): axis is Axis => numbers.some(({ id }) => id === axis?.id);
  const across = isThere(chosen.across) ? chosen.across : axisOf(first);
  const up = isThere(chosen.up) ? chosen.up : axisOf(second);
  const isSame = across.id === up.id;

  const draw = (): void => {
    const ask: TradeAsk = { across, up, columns: CELLS, rows: CELLS };
    setDrawn({ rig, ask, rows: Array.from({ length: CELLS }, () => undefined) });
    start(
      planPool.drawMap(rig, ask, (row, cells) =>
        setDrawn((before) =>
          before?.ask === ask
            ? { ...before, rows: before.rows.map((old, r) => (r === row ? cells : old)) }
            : before,
        ),
      ),
    );
  };
  const done = drawn?.rows.filter((row) => row !== undefined).length ?? 0;
  return (
    <>
      <AxisFields
        label="Across"
        numbers={numbers}
        axis={across}
        onChange={(axis) => setChosen((c) => ({ ...c, across: axis }))}
      />
      <AxisFields
        label="Upwards"
        numbers={numbers}
        axis={up}
        onChange={(axis) => setChosen((c) => ({ ...c, up: axis }))}
      />
      {isSame && <p>Choose two different numbers.</p>}
      {state.kind === 'working' ? (
        <>
          <button type="button" className="wide" onClick={end}>
            Cancel the map
          </button>
          <progress max={CELLS} value={done} aria-label="Rows of the map drawn" />
        </>
      ) : (
        <button type="button" className="wide" disabled={isSame} onClick={draw}>
          Draw the map
        </button>
      )}
      {drawn && <TradeMap drawn={drawn} />}
    </>
  );
}

interface AxisFieldsProps {
  readonly label: string;
  readonly numbers: readonly TradeNumber[];
  readonly axis: Axis;
  readonly onChange: (axis: Axis) => void;
}

function AxisFields({ label, numbers, axis, onChange }: AxisFieldsProps) {
  const number = numbers.find(({ id }) => id === axis.id);
  if (!number) return null;
  const { dimension } = number;
  const wide = 1e6;
  return (
    <>
      <Choice
        label={label}
        options={numbers.map(({ id, label: words }) => ({ value: id, label: words }))}
        value={axis.id}
        onChange={(id) => {
          const next = numbers.find((each) => each.id === id);
          if (next) onChange(axisOf(next));
        }}
      />
      <OwnNumber
        label={`${label}, from`}
        dimension={dimension}
        min={-wide}
        max={wide}
        value={axis.from}
        onChange={(from) => onChange({ ...axis, from })}
      />
      <OwnNumber
        label={`${label}, to`}
        dimension={dimension}
        min={-wide}
        max={wide}
        value={axis.to}
        onChange={(to) => onChange({ ...axis, to })}
      />
    </>
  );
}

function TradeMap({ drawn }: { readonly drawn: Drawn }) {
  const edit = useDocument((document) => document.edit);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const units = useSession((session) => session.units);
  const [at, setAt] = useState<{ readonly column: number; readonly row: number }>();
  const { rig, ask, rows } = drawn;
  const numbers = tradeNumbers(rig);
  const across = numbers.find(({ id }) => id === ask.across.id);
  const up = numbers.find(({ id }) => id === ask.up.id);
  if (!across || !up) return null;
  const show = (number: TradeNumber, range: Axis, cells: number, place: number): string =>
    showQuantity(tradeValue(range, cells, place), number.dimension, units[number.dimension], 3);
  const cell = at && rows[at.row]?.[at.column];
  const load = (column: number, row: number): void => {
    setAt({ column, row });
    const changed = tradeRig(rig, ask, column, row);
    if (!changed || isReadOnly || rows[row]?.[column] === undefined) return;
    edit(`${across.label} and ${up.label.toLowerCase()} from the map`, () => changed);
  };
  return (
    <div className="trade">
      <p className="trade-up">
        {up.label}, {show(up, ask.up, ask.rows, 0)} to {show(up, ask.up, ask.rows, ask.rows - 1)}
      </p>
      <TradePicture ask={ask} rows={rows} at={at} onTap={load} />
      <p className="trade-across">
        {across.label}, {show(across, ask.across, ask.columns, 0)} to{' '}
        {show(across, ask.across, ask.columns, ask.columns - 1)}
      </p>
      <Legend />
      <p role="status">
        {at && cell
          ? `${across.label} ${show(across, ask.across, ask.columns, at.column)}, ${up.label.toLowerCase()} ${show(up, ask.up, ask.rows, at.row)}: ${wordsOf(cell)}`
          : 'Tap a cell to put its two numbers in the rig.'}
      </p>
    </div>
  );
}

function wordsOf(cell: TradeCell): string {
  switch (cell.kind) {
    case 'planned':
      return `planned, ${(100 * cell.spare).toFixed(0)} % to spare, tightest ${cell.label.toLowerCase()}.`;
    case 'impossible':
      return 'no plan exists.';
    case 'refused':
      return cell.sentence;
  }
}

const Legend = () => (
  <ul className="trade-legend" aria-label="Legend">
    {[0, 25, 50, 75].map((percent) => (
      <li key={percent}>
        <i data-spare={percent} />
        {percent} %
      </li>
    ))}
    <li>
      <i data-spare="fails" />
      fails
    </li>
    <li>
      <i data-spare="impossible" />
      no plan
    </li>
    <li>
      <i data-spare="refused" />
      no rig
    </li>
  </ul>
);
