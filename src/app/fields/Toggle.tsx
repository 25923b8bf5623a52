interface ToggleProps {
  readonly label: string;
  /** What it means, in a few words, under the label. */
  readonly hint?: string;
  readonly isOn: boolean;
  readonly onChange: (isOn: boolean) => void;
}

/** Something that is on or off, said in words as well as shown. */
export function Toggle({ label, hint, isOn, onChange }: ToggleProps) {
  return (
    <button
      type="button"
      className="toggle"
      role="switch"
      aria-checked={isOn}
      onClick={() => onChange(!isOn)}
    >
      <span className="toggle-words">
        {label}
        {hint && <small>{hint}</small>}
      </span>
      <span className="toggle-state" aria-hidden>
        <b>{isOn ? 'on' : 'off'}</b>
      </span>
    </button>
  );
}
