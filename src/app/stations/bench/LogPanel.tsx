import { type DragEvent, useId, useRef, useState } from 'react';
import type { LogQuantity } from '../../../core/bench';
import { formatNumber } from '../../../core/units';
import { Choice } from '../../fields/Choice';
import { Group } from '../../sheet/Group';
import { useShown } from '../../state/reading';
import { BenchNumber } from './BenchNumber';
import { alignLog, cancelReading, closeLog, cutLog, type OpenLog, openLog, useBenchLog } from './benchLog';
import { LogColumns } from './LogColumns';
import { LogPlot } from './LogPlot';
import { predictionOf } from './prediction';
import { QUANTITY_WORDS } from './quantityWords';

/** A log: opened, mapped, cut, laid on the plan and looked at. */
export function LogPanel() {
  const log = useBenchLog((state) => state.log);
  const [looked, setLooked] = useState<LogQuantity>();
  const quantities = log?.mapped?.quantities ?? [];
  const quantity = looked && quantities.includes(looked) ? looked : quantities[0];
  return (
    <>
      <LogOpener hasLog={log !== undefined} />
      {log && <LogHead log={log} />}
      {log && quantity && (
        <Group title="What it shows">
          {quantities.length > 1 && (
            <Choice
              label="Quantity"
              options={quantities.map((value) => ({ value, label: QUANTITY_WORDS[value] }))}
              value={quantity}
              onChange={setLooked}
            />
          )}
          <LogPlot log={log} quantity={quantity} />
          <CutFields log={log} />
          <Alignment log={log} quantity={quantity} />
        </Group>
      )}
      {log && <LogColumns log={log} />}
    </>
  );
}

function LogOpener({ hasLog }: { readonly hasLog: boolean }) {
  const id = useId();
  const input = useRef<HTMLInputElement>(null);
  const [isOver, setOver] = useState(false);
  const reading = useBenchLog((state) => state.reading);
  const take = (files: FileList | null): void => {
    const file = files?.[0];
    if (file) void openLog(file);
  };
  const onDrop = (event: DragEvent): void => {
    // Elsewhere on the page a dropped file is a rig.
    event.preventDefault();
    event.stopPropagation();
    setOver(false);
    take(event.dataTransfer.files);
  };
  if (reading) {
    return (
      <div className="bench-reading" role="status">
        <p>
          Reading {reading.file}: {reading.rows.toLocaleString('en-GB')} rows
        </p>
        <progress value={reading.fraction} max={1} aria-label={`Reading ${reading.file}`} />
        <button type="button" onClick={cancelReading}>
          Break off
        </button>
      </div>
    );
  }
  return (
    // biome-ignore lint/a11y/noStaticElementInteractions: a place to drop on; the button inside does the same
    <div
      className="bench-drop"
      data-over={isOver}
      onDragOver={(event) => {
        event.preventDefault();
        setOver(true);
      }}
      onDragLeave={() => setOver(false)}
      onDrop={onDrop}
    >
      <button type="button" className={hasLog ? '' : 'strong'} onClick={() => input.current?.click()}>
        Open a log
      </button>
      <span className="aside">or drop one here: CSV or text of any logger</span>
      <label className="unseen" htmlFor={id}>
        Log file
      </label>
      <input
        ref={input}
        id={id}
        className="unseen"
        type="file"
        tabIndex={-1}
        onChange={(event) => {
          take(event.target.files);
          // The same file may be opened again after it was changed.
          event.target.value = '';
        }}
      />
    </div>
  );
}

const DELIMITER_WORDS: Readonly<Record<string, string>> = {
  ',': 'commas',
  ';': 'semicolons',
  '\t': 'tabs',
  ' ': 'spaces',
  '|': 'bars',
};

/** How the file was written, as it was understood, and what had to be put up with. */
function LogHead({ log }: { readonly log: OpenLog }) {
  const { dialect, rows, remarks } = log.opened;
  const delimiter = DELIMITER_WORDS[dialect.delimiter] ?? `"${dialect.delimiter}"`;
  const seconds = log.mapped ? log.mapped.to - log.mapped.from : undefined;
  const all = [...remarks, ...(log.mapped?.remarks ?? [])];
  return (
    <div className="bench-head">
      <h3>{log.file}</h3>
      <p>
        {rows.toLocaleString('en-GB')} rows
        {seconds !== undefined && log.mapped && (
          <>
            , {formatNumber(seconds, 4)} s at {formatNumber(1 / log.mapped.step, 4)} Hz
          </>
        )}
      </p>
      <p className="aside">
        Parted by {delimiter}, decimal {dialect.decimal === ',' ? 'comma' : 'point'},{' '}
        {dialect.hasHeader ? 'names in a header' : 'no header'}
        {dialect.skippedLines > 0 && `, ${dialect.skippedLines} lines before it passed over`}
      </p>
      {all.length > 0 && (
        <ul className="bench-remarks">
          {all.map((sentence) => (
            <li key={sentence}>{sentence}</li>
          ))}
        </ul>
      )}
      <button type="button" className="quiet" onClick={closeLog}>
        Close the log
      </button>
    </div>
  );
}

function CutFields({ log }: { readonly log: OpenLog }) {
  const { cut, mapped } = log;
  if (!mapped) return null;
  const isWhole = cut.from === mapped.from && cut.to === mapped.to;
  const info = { dimension: 'time', min: mapped.from, max: mapped.to } as const;
  return (
    <>
      <p className="aside">
        Drag across the plot to cut. Everything below the plot, and Identify, uses the cut only.
      </p>
      <BenchNumber
        info={{ ...info, label: 'Cut from' }}
        value={cut.from}
        onChange={(from) => cutLog({ ...cut, from })}
      />
      <BenchNumber
        info={{ ...info, label: 'Cut to' }}
        value={cut.to}
        onChange={(to) => cutLog({ ...cut, to })}
      />
      {!isWhole && (
        <button type="button" className="wide" onClick={() => cutLog()}>
          The whole log again
        </button>
      )}
    </>
  );
}

function Alignment({ log, quantity }: { readonly log: OpenLog; readonly quantity: LogQuantity }) {
  const [isBusy, setBusy] = useState(false);
  const shown = useShown();
  // The prediction is that of the preview on screen: another preview, another answer.
  const hasPrediction = shown !== undefined && predictionOf(quantity) !== undefined;
  const align = async (): Promise<void> => {
    setBusy(true);
    await alignLog(quantity);
    setBusy(false);
  };
  const found = log.alignment;
  return (
    <>
      <button type="button" className="wide" disabled={!hasPrediction || isBusy} onClick={() => void align()}>
        {isBusy ? 'Aligning…' : `Align with the plan by ${QUANTITY_WORDS[quantity].toLowerCase()}`}
      </button>
      {!hasPrediction && (
        <p className="aside">
          The preview says nothing of {QUANTITY_WORDS[quantity].toLowerCase()}, so there is nothing to align
          by.
        </p>
      )}
      {found?.kind === 'aligned' && (
        <p>
          Shifted by {formatNumber(found.shift, 4)} s; correlation {formatNumber(found.correlation, 3)}.
        </p>
      )}
      {found?.kind === 'refused' && <p className="bench-refusal">{found.sentence}</p>}
      {found?.kind === 'aligned' &&
        found.remarks.map((remark) => (
          <p key={remark} className="aside">
            {remark}
          </p>
        ))}
    </>
  );
}
