import { useId, useState } from 'react';

interface TextFieldProps {
  readonly label: string;
  readonly value: string;
  readonly longest: number;
  readonly isReadOnly?: boolean | undefined;
  readonly onChange: (value: string) => void;
}

/** A name. It is taken when the field is left or Enter pressed; an empty one is not taken. */
export function TextField({ label, value, longest, isReadOnly, onChange }: TextFieldProps) {
  const id = useId();
  const [typed, setTyped] = useState<string>();
  const take = (): void => {
    const text = typed?.trim();
    setTyped(undefined);
    if (text && text !== value) onChange(text);
  };
  return (
    <div className="text-field">
      <label htmlFor={id}>{label}</label>
      <input
        id={id}
        value={typed ?? value}
        maxLength={longest}
        readOnly={isReadOnly}
        autoComplete="off"
        onChange={(event) => setTyped(event.target.value)}
        onBlur={take}
        onKeyDown={(event) => {
          if (event.key === 'Enter') take();
          if (event.key === 'Escape') setTyped(undefined);
        }}
      />
    </div>
  );
}
