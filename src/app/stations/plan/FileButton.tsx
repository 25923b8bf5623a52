import { useRef } from 'react';

interface FileButtonProps {
  readonly label: string;
  readonly isReadOnly?: boolean;
  readonly onText: (text: string) => void;
}

/** A button that asks for a CSV file and hands over its text. */
export function FileButton({ label, isReadOnly = false, onText }: FileButtonProps) {
  const input = useRef<HTMLInputElement>(null);
  return (
    <>
      <button type="button" className="wide" disabled={isReadOnly} onClick={() => input.current?.click()}>
        {label}
      </button>
      <input
        ref={input}
        type="file"
        accept=".csv,.txt,text/csv"
        aria-label={label}
        hidden
        onChange={async (event) => {
          const field = event.currentTarget;
          const file = field.files?.[0];
          if (file) onText(await file.text());
          field.value = '';
        }}
      />
    </>
  );
}
