import { useEffect, useState } from 'react';
import { Choice } from '../../fields/Choice';
import { TextField } from '../../fields/TextField';
import type { LinkSnapshot } from '../../link/linkSession';
import { missingSerial } from '../../link/webSerialPort';
import { Group } from '../../sheet/Group';
import { LinkFormats } from './LinkFormats';
import { LinkSend } from './LinkSend';
import { LivePlot } from './LivePlot';
import {
  clearRecording,
  connect,
  disconnect,
  endLink,
  lookAtLink,
  openRecordingAsLog,
  pullCable,
  release,
  saveRecording,
  useLink,
} from './linkDesk';

/** ms between two looks at the link. */
const LOOK = 100;
const RATES = [9600, 57_600, 115_200, 230_400, 460_800, 921_600] as const;

/** The live link: connect, watch, record, send, release. */
export function LinkPanel() {
  const shown = useLink((link) => link.shown);
  const refusal = useLink((link) => link.refusal);
  useEffect(() => {
    const timer = setInterval(lookAtLink, LOOK);
    return () => clearInterval(timer);
  }, []);
  const isConnected = shown?.state === 'connected';
  return (
    <>
      {isConnected && <Release shown={shown} />}
      {isConnected && (
        <p className="aside">
          It asks the device’s firmware to let go. It is no emergency stop: keep the power switch in reach.
        </p>
      )}
      <DeviceChoice isFixed={shown !== undefined} />
      {refusal && <p className="bench-refusal">{refusal}</p>}
      <Connection shown={shown} />
      {shown && <Stream shown={shown} />}
      {shown && <LinkSend shown={shown} />}
      <LinkFormats />
    </>
  );
}

/** Always at hand, first in the sheet: one press sends the stop line ahead of everything. */
function Release({ shown }: { readonly shown: LinkSnapshot }) {
  const stopLine = useLink((link) => link.stopLine);
  return (
    <div className="link-release">
      <button type="button" onClick={release}>
        <b>Release</b>
        <small>sends “{stopLine}” at once</small>
      </button>
      {shown.stop && (
        <p role="status">
          {shown.stop === 'sent'
            ? `“${stopLine}” was sent; whatever was being sent was dropped.`
            : `“${stopLine}” could not be sent: take the power off.`}
        </p>
      )}
    </div>
  );
}

function DeviceChoice({ isFixed }: { readonly isFixed: boolean }) {
  const { device, baudRate, format, speed, stopLine } = useLink();
  const missing = missingSerial();
  return (
    <>
      <Choice
        label="Device"
        isReadOnly={isFixed}
        options={[
          { value: 'simulator', label: 'simulator' },
          { value: 'serial', label: 'serial port' },
        ]}
        value={device}
        onChange={(next) => useLink.setState({ device: next })}
      />
      {device === 'serial' && missing && <p className="bench-refusal">{missing}</p>}
      {device === 'serial' && !missing && (
        <Choice
          label="Bits a second"
          isReadOnly={isFixed}
          options={RATES.map((value) => ({ value, label: String(value) }))}
          value={RATES.find((rate) => rate === baudRate)}
          onChange={(next) => useLink.setState({ baudRate: next })}
        />
      )}
      {device === 'simulator' && (
        <>
          <Choice
            label="It speaks"
            isReadOnly={isFixed}
            options={[
              { value: 'csv', label: 'CSV lines' },
              { value: 'json', label: 'JSON lines' },
            ]}
            value={format}
            onChange={(next) => useLink.setState({ format: next })}
          />
          <Choice
            label="Its clock, 1000 lines a second of it"
            isReadOnly={isFixed}
            options={[
              { value: 1, label: 'real time' },
              { value: 10, label: 'ten times' },
            ]}
            value={speed}
            onChange={(next) => useLink.setState({ speed: next })}
          />
        </>
      )}
      <TextField
        label="Stop line"
        longest={80}
        isReadOnly={isFixed && device === 'simulator'}
        value={stopLine}
        onChange={(next) => useLink.setState({ stopLine: next })}
      />
    </>
  );
}

function Connection({ shown }: { readonly shown: LinkSnapshot | undefined }) {
  const device = useLink((link) => link.device);
  const simulator = useLink((link) => link.simulator);
  const isConnected = shown?.state === 'connected';
  const canConnect = device === 'simulator' || missingSerial() === undefined;
  return (
    <div className="link-connection">
      {!isConnected && (
        <button type="button" className="strong" disabled={!canConnect} onClick={() => void connect()}>
          {shown ? 'Connect again' : 'Connect'}
        </button>
      )}
      {isConnected && (
        <button type="button" onClick={() => void disconnect()}>
          Disconnect
        </button>
      )}
      {isConnected && device === 'simulator' && (
        <button type="button" onClick={pullCable}>
          Pull the cable
        </button>
      )}
      {shown && !isConnected && (
        <button type="button" className="quiet" onClick={endLink}>
          End the session
        </button>
      )}
      <p className="aside">Connecting sends nothing: it only listens.{simulator && ` ${simulator}`}</p>
    </div>
  );
}

const whole = (count: number): string => count.toLocaleString('en-GB');

function Stream({ shown }: { readonly shown: LinkSnapshot }) {
  const { counts, state } = shown;
  const [isOpened, setOpened] = useState(false);
  return (
    <Group title={state === 'connected' ? 'Recording' : 'Recorded; the line is gone'}>
      <LivePlot shown={shown} />
      <dl className="link-counts">
        <Count word="rows" count={counts.rows} />
        <Count word="lost on the line" count={counts.missing} isBad={counts.missing > 0} />
        <Count word="unreadable" count={counts.bad} isBad={counts.bad > 0} />
        <Count word="breaks" count={counts.breaks} />
      </dl>
      {counts.missing > 0 && (
        <p className="aside">
          Lost: the device’s counter went on while nobody received. What was recorded before stays.
        </p>
      )}
      {shown.faults.slice(0, 3).map((sentence) => (
        <p key={sentence} className="bench-remark">
          {sentence}
        </p>
      ))}
      {shown.said.length > 0 && <pre className="link-said">{shown.said.join('\n')}</pre>}
      <div className="link-connection">
        <button type="button" disabled={shown.rows === 0} onClick={saveRecording}>
          Save as CSV
        </button>
        <button
          type="button"
          disabled={shown.rows === 0}
          onClick={() => void openRecordingAsLog().then(() => setOpened(true))}
        >
          Open as the log
        </button>
        <button type="button" className="quiet" onClick={clearRecording}>
          New recording
        </button>
      </div>
      {isOpened && <p className="aside">Opened under Log, as far as it had come.</p>}
    </Group>
  );
}

interface CountProps {
  readonly word: string;
  readonly count: number;
  readonly isBad?: boolean;
}

const Count = ({ word, count, isBad = false }: CountProps) => (
  <div>
    <dt>{word}</dt>
    <dd className={isBad ? 'word-fails' : ''}>{whole(count)}</dd>
  </div>
);
