/** The link as the sheet drives it: one session, a port or the simulator behind it, and what was made of the recording. */
import { create } from 'zustand';
import { createLoopbackDevice, encodeGains, encodeSchedule, type LoopbackOptions } from '../../../core/bench';
import { fileNameFor, offerFile } from '../../files/offerFile';
import { createLinkSession, type LinkSession, type LinkSnapshot } from '../../link/linkSession';
import { createRigBody } from '../../link/loopbackBody';
import { createLoopbackPlug, type LoopbackPlug } from '../../link/loopbackPort';
import { openWebSerial } from '../../link/webSerialPort';
import { useDocument } from '../../state/document';
import { stream } from '../../state/stream';
import { openLog } from './benchLog';

export interface LinkChoices {
  readonly device: 'serial' | 'simulator';
  readonly baudRate: number;
  readonly format: LoopbackOptions['format'];
  /** Hz, of the simulator. */
  readonly rate: number;
  /** Device seconds a second, of the simulator. */
  readonly speed: number;
  readonly stopLine: string;
}

interface LinkDesk extends LinkChoices {
  readonly shown: LinkSnapshot | undefined;
  readonly refusal: string | undefined;
  /** What the simulator runs, in words; undefined until it was plugged in. */
  readonly simulator: string | undefined;
}

export const useLink = create<LinkDesk>()(() => ({
  device: 'simulator',
  baudRate: 115_200,
  format: 'csv',
  rate: 1000,
  speed: 1,
  stopLine: 'STOP',
  shown: undefined,
  refusal: undefined,
  simulator: undefined,
}));

let session: LinkSession | undefined;
let plug: LoopbackPlug | undefined;

export const linkSession = (): LinkSession | undefined => session;

/** Shows how things stand; called at the plot's pace, not at the device's. */
export const lookAtLink = (): void => {
  if (session) useLink.setState({ shown: session.snapshot() });
};

const theSession = (): LinkSession => {
  session ??= createLinkSession(() => performance.now() / 1000);
  return session;
};

/** Connects the first time or again: the recording goes on where it broke off. */
export async function connect(): Promise<void> {
  const { device, baudRate } = useLink.getState();
  useLink.setState({ refusal: undefined });
  if (device === 'serial') {
    const opening = await openWebSerial(baudRate);
    if (opening.kind === 'refused') useLink.setState({ refusal: opening.sentence });
    else theSession().connect(opening.port);
  } else {
    plug ??= makeSimulator();
    if (plug) theSession().connect(plug.plugIn());
  }
  lookAtLink();
}

function makeSimulator(): LoopbackPlug | undefined {
  const { rate, format, speed, stopLine } = useLink.getState();
  const outcome = createRigBody(useDocument.getState().rig, stream.shown?.motion);
  if (outcome.kind === 'refused') {
    useLink.setState({ refusal: outcome.sentence });
    return undefined;
  }
  useLink.setState({ simulator: outcome.sentence });
  return createLoopbackPlug(createLoopbackDevice(outcome.body, { rate, format, stopLine }), speed);
}

export async function disconnect(): Promise<void> {
  await session?.disconnect();
  lookAtLink();
}

/** As if the simulator's cable were pulled. */
export function pullCable(): void {
  plug?.unplug();
  lookAtLink();
}

/** Ends session and simulator, so that device or form can be chosen anew. */
export function endLink(): void {
  session?.close();
  session = undefined;
  plug = undefined;
  useLink.setState({ shown: undefined, simulator: undefined, refusal: undefined });
}

export function release(): void {
  session?.release(useLink.getState().stopLine);
  lookAtLink();
}

export function sendSchedule(): void {
  const plan = stream.shown?.plan;
  if (plan?.kind !== 'planned') return;
  const { time, tilt, gyros } = plan.course;
  const tilts = Array.from({ length: gyros }, (_, g) =>
    Float64Array.from(time, (_t, i) => tilt[i * gyros + g] as number),
  );
  session?.send(encodeSchedule(time, tilts));
  lookAtLink();
}

export function sendGains(gains: Readonly<Record<string, number>>): void {
  session?.send(encodeGains(gains));
  lookAtLink();
}

export function clearRecording(): void {
  session?.clear();
  lookAtLink();
}

/** The recording as a CSV text, whatever the device spoke. */
function recordingText(): string | undefined {
  const recording = session?.recording;
  if (!recording || recording.rows === 0) return undefined;
  const { names, rows } = recording;
  const columns = names.map((name) => recording.read(name, 0) ?? new Float64Array(rows));
  const lines = [names.join(',')];
  for (let i = 0; i < rows; i++) {
    lines.push(
      columns
        .map((column) => {
          const value = column[i] as number;
          return Number.isNaN(value) ? '' : String(value);
        })
        .join(','),
    );
  }
  return `${lines.join('\r\n')}\r\n`;
}

const recordingName = (): string => fileNameFor(`${useDocument.getState().rig.name} recording`, 'csv');

export function saveRecording(): void {
  const text = recordingText();
  if (text !== undefined) offerFile(recordingName(), text, 'text/csv');
}

/** Opens what was recorded so far as the bench's log. */
export async function openRecordingAsLog(): Promise<void> {
  const text = recordingText();
  if (text !== undefined) await openLog(new File([text], recordingName(), { type: 'text/csv' }));
}
