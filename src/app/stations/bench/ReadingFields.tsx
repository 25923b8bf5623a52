import { useState } from 'react';
import { angleOf, type LogQuantity, sizeOf } from '../../../core/bench';
import { formatNumber } from '../../../core/units';
import { BenchNumber } from './BenchNumber';
import { BALANCE_INFO, type Reading, useBalanceForm } from './balanceForm';
import { logHolder, useBenchLog } from './benchLog';

interface ReadingFieldsProps {
  /** Undefined when there is only one. */
  readonly sensor: number | undefined;
  readonly reading: Reading | undefined;
  readonly onChange: (reading: Reading) => void;
}

const SIGNALS: readonly LogQuantity[] = ['vibration', 'accelerationX', 'accelerationY', 'accelerationZ'];

/** Amplitude and angle of the vibration at wheel speed: typed, or out of the raw log that is open. */
export function ReadingFields({ sensor, reading, onChange }: ReadingFieldsProps) {
  const log = useBenchLog((state) => state.log);
  const [said, setSaid] = useState<{ readonly isRefusal: boolean; readonly sentences: readonly string[] }>();
  if (!reading) return null;
  const name = sensor === undefined ? '' : `, sensor ${sensor + 1}`;
  const quantities = log?.mapped?.quantities ?? [];
  const signals = SIGNALS.filter((each) => quantities.includes(each));
  const signal = signals[Math.min(sensor ?? 0, signals.length - 1)];

  const read = async (): Promise<void> => {
    const holder = logHolder();
    if (!holder || !log || !signal) return;
    const outcome = await holder.calls.readTurns(signal, log.cut.from, log.cut.to);
    if (outcome.kind === 'refused') {
      setSaid({ isRefusal: true, sentences: [outcome.sentence] });
      return;
    }
    const { form } = { form: useBalanceForm.getState() };
    form.set({ readingError: Math.max(form.readingError, outcome.halfWidth) });
    onChange({ amplitude: sizeOf(outcome.reading), angle: angleOf(outcome.reading) });
    setSaid({
      isRefusal: false,
      sentences: [
        `From ${log.file}: ${outcome.turns} turns at ${formatNumber((outcome.speed * 30) / Math.PI, 4)} rpm, sure to ± ${formatNumber(outcome.halfWidth, 2)} m/s².`,
        ...outcome.remarks,
      ],
    });
  };

  return (
    <div className="balance-reading">
      <BenchNumber
        info={{ ...BALANCE_INFO.amplitude, label: `Amplitude${name}` }}
        value={reading.amplitude}
        onChange={(amplitude) => onChange({ ...reading, amplitude })}
      />
      <BenchNumber
        info={{ ...BALANCE_INFO.angle, label: `Angle${name}` }}
        value={reading.angle}
        onChange={(angle) => onChange({ ...reading, angle })}
      />
      {log && (
        <button type="button" className="wide" disabled={!signal} onClick={() => void read()}>
          {signal ? `Read it from ${log.file}` : 'The open log has no vibration column'}
        </button>
      )}
      {said?.sentences.map((sentence) => (
        <p key={sentence} className={said.isRefusal ? 'bench-refusal' : 'aside'}>
          {sentence}
        </p>
      ))}
    </div>
  );
}
