import { useId } from 'react';

export interface ChoiceOption<T extends string | number> {
  readonly value: T;
  readonly label: string;
}

interface ChoiceProps<T extends string | number> {
  readonly label: string;
  readonly options: readonly ChoiceOption<T>[];
  readonly value: T | undefined;
  readonly isReadOnly?: boolean | undefined;
  readonly onChange: (value: T) => void;
}

/** More options than this, or longer words, and they go into a list that drops down. */
const MOST_BUTTONS = 5;
const MOST_LETTERS = 34;

/** One of several: a row of buttons while they fit, a list when there are many. */
export function Choice<T extends string | number>(props: ChoiceProps<T>) {
  const letters = props.options.reduce((sum, option) => sum + option.label.length + 2, 0);
  const fits = props.options.length <= MOST_BUTTONS && letters <= MOST_LETTERS;
  return fits ? <ButtonChoice {...props} /> : <ListChoice {...props} />;
}

function ButtonChoice<T extends string | number>({
  label,
  options,
  value,
  isReadOnly,
  onChange,
}: ChoiceProps<T>) {
  return (
    <fieldset className="choice" disabled={isReadOnly}>
      <legend>{label}</legend>
      <div className="choice-row">
        {options.map((option) => (
          <button
            key={option.value}
            type="button"
            aria-pressed={option.value === value}
            onClick={() => option.value !== value && onChange(option.value)}
          >
            {option.label}
          </button>
        ))}
      </div>
    </fieldset>
  );
}

function ListChoice<T extends string | number>({
  label,
  options,
  value,
  isReadOnly,
  onChange,
}: ChoiceProps<T>) {
  const id = useId();
  return (
    <div className="list-choice">
      <label htmlFor={id}>{label}</label>
      <select
        id={id}
        disabled={isReadOnly}
        value={options.findIndex((option) => option.value === value)}
        onChange={(event) => {
          const option = options[Number(event.target.value)];
          if (option) onChange(option.value);
        }}
      >
        {value === undefined && <option value={-1}>–</option>}
        {options.map((option, index) => (
          <option key={option.value} value={index}>
            {option.label}
          </option>
        ))}
      </select>
    </div>
  );
}
