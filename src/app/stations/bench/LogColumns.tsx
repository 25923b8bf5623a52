import { useId } from 'react';
import { type ColumnMapping, LOG_QUANTITIES, type LogQuantity, type TimeUnit } from '../../../core/bench';
import { unitsOf } from '../../../core/units';
import { Choice } from '../../fields/Choice';
import { Group } from '../../sheet/Group';
import { BenchNumber } from './BenchNumber';
import { chooseMapping, type OpenLog } from './benchLog';
import { QUANTITIES, QUANTITY_WORDS } from './quantityWords';

const TIME_CHOICES: readonly { readonly value: TimeUnit; readonly label: string }[] = [
  { value: 's', label: 's' },
  { value: 'ms', label: 'ms' },
  { value: 'us', label: 'µs' },
];
const RATE_INFO = { dimension: 'frequency', min: 1e-3, max: 1e6, label: 'Readings a second' } as const;

/** Which column is what, in which unit: guessed from names and units, put right once, remembered from then on. */
export function LogColumns({ log }: { readonly log: OpenLog }) {
  const { mapping, opened } = log;
  const set = (change: Partial<ColumnMapping>): void => void chooseMapping({ ...mapping, ...change });
  const none = '–';
  return (
    <Group title="Columns">
      <p className="aside">
        {log.isRecalled
          ? 'As for the last log with these columns.'
          : 'Guessed from names and units; what you change is remembered for logs with these columns.'}
      </p>
      {log.refusal && <p className="bench-refusal">{log.refusal}</p>}
      <Choice
        label="Time"
        options={[none, ...opened.names].map((value) => ({
          value,
          label: value === none ? 'none: by rate' : value,
        }))}
        value={mapping.time ?? none}
        onChange={(value) =>
          set(
            value === none
              ? { time: undefined, sampleRate: mapping.sampleRate ?? 100 }
              : { time: value, columns: mapping.columns.filter(({ column }) => column !== value) },
          )
        }
      />
      {mapping.time === undefined ? (
        <BenchNumber
          info={RATE_INFO}
          value={mapping.sampleRate ?? 100}
          onChange={(sampleRate) => set({ sampleRate })}
        />
      ) : (
        <Choice
          label="Time counts in"
          options={TIME_CHOICES}
          value={mapping.timeUnit}
          onChange={(timeUnit) => set({ timeUnit })}
        />
      )}
      <ul className="bench-columns">
        {opened.names
          .filter((name) => name !== mapping.time)
          .map((name) => (
            <ColumnRow key={name} name={name} mapping={mapping} onChange={set} />
          ))}
      </ul>
    </Group>
  );
}

interface ColumnRowProps {
  readonly name: string;
  readonly mapping: ColumnMapping;
  readonly onChange: (change: Partial<ColumnMapping>) => void;
}

function ColumnRow({ name, mapping, onChange }: ColumnRowProps) {
  const id = useId();
  const entry = mapping.columns.find(({ column }) => column === name);
  const others = mapping.columns.filter(({ column }) => column !== name);
  const choose = (text: string): void => {
    const quantity = QUANTITIES.find((each) => each === text);
    if (!quantity) {
      onChange({ columns: others });
      return;
    }
    // One quantity, one column: the other gives it up.
    const rest = others.filter((other) => other.quantity !== quantity);
    const unit = usualUnit(quantity, entry);
    onChange({ columns: [...rest, { column: name, quantity, unit }] });
  };
  return (
    <li>
      <label htmlFor={id}>{name}</label>
      <select id={id} value={entry?.quantity ?? ''} onChange={(event) => choose(event.target.value)}>
        <option value="">not used</option>
        {QUANTITIES.map((quantity) => (
          <option key={quantity} value={quantity}>
            {QUANTITY_WORDS[quantity]}
          </option>
        ))}
      </select>
      <select
        aria-label={`Unit of ${name}`}
        disabled={!entry}
        value={entry?.unit ?? ''}
        onChange={(event) =>
          entry && onChange({ columns: [...others, { ...entry, unit: event.target.value }] })
        }
      >
        {entry ? (
          unitsOf(LOG_QUANTITIES[entry.quantity]).map(({ symbol }) => (
            <option key={symbol} value={symbol}>
              {symbol === '' ? 'as it is' : symbol}
            </option>
          ))
        ) : (
          <option value="">–</option>
        )}
      </select>
    </li>
  );
}

/** The unit the column already had, if the new quantity knows it. */
function usualUnit(quantity: LogQuantity, entry: ColumnMapping['columns'][number] | undefined): string {
  const units = unitsOf(LOG_QUANTITIES[quantity]);
  return (units.find(({ symbol }) => symbol === entry?.unit) ?? units[0])?.symbol ?? '';
}
