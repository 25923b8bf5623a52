/** The live link: one session of recording and commands that outlives the cable. */
import {
  type Command,
  type CommandQueue,
  createCommandQueue,
  createRecording,
  type DeviceLine,
  type LiveRecording,
  type QueueState,
  type RecordingCounts,
  type SerialPort,
} from '../../core/bench';

export type LinkState = 'never' | 'connected' | 'gone';

export interface LinkSnapshot {
  readonly state: LinkState;
  readonly counts: RecordingCounts;
  readonly names: readonly string[];
  readonly rows: number;
  readonly queue: QueueState;
  readonly faults: readonly string[];
  /** The newest lines that are not samples, as they came. */
  readonly said: readonly string[];
  /** What became of the stop line last sent; undefined when none was. */
  readonly stop: 'sent' | 'not sent' | undefined;
}

export interface LinkSession {
  readonly recording: LiveRecording;
  connect(port: SerialPort): void;
  disconnect(): Promise<void>;
  /** Sends a batch line by line; false while another is under way or nothing is connected. */
  send(commands: readonly Command[]): boolean;
  /** Sends the stop line at once, ahead of everything. */
  release(stopLine: string): void;
  snapshot(): LinkSnapshot;
  /** Starts the recording anew; the connection stays. */
  clear(): void;
  close(): void;
}

const POLL = 100;
const LINE_END = 10;
const MOST_SAID = 6;

/**
 * A session with nothing connected yet.
 *
 * @param clock  s, rising
 */
export function createLinkSession(clock: () => number): LinkSession {
  const queue: CommandQueue = createCommandQueue();
  const encoder = new TextEncoder();
  let recording = createRecording();
  let port: SerialPort | undefined;
  let leave: (() => void) | undefined;
  let state: LinkState = 'never';
  let said: readonly string[] = [];
  let stop: LinkSnapshot['stop'];
  let isClearing = false;

  const write = (line: string): Promise<void> =>
    port ? port.write(encoder.encode(`${line}\n`)) : Promise.reject(new Error('Nothing is connected.'));
  const poll = (): void => {
    // A write that fails is met by the answer that does not come: the queue sends the line again.
    if (port) for (const line of queue.poll(clock())) void write(line).catch(() => undefined);
  };
  const say = (text: string): void => {
    said = [...said.slice(1 - MOST_SAID), text];
  };
  const take = (line: DeviceLine): void => {
    if (line.kind === 'answer') {
      if (queue.hear(line.id, line.isDone, line.reason)) poll();
    } else if (line.kind === 'note') say(`# ${line.text}`);
    else if (line.kind === 'bad') say(line.sentence);
  };
  /** The old recording ends with a whole line, so that the new one begins with one. */
  const hear = (bytes: Uint8Array): void => {
    let rest = bytes;
    const end = isClearing ? bytes.indexOf(LINE_END) : -1;
    if (end >= 0) {
      for (const line of recording.push(bytes.subarray(0, end + 1))) take(line);
      startAnew();
      rest = bytes.subarray(end + 1);
    }
    for (const line of recording.push(rest)) take(line);
  };
  const startAnew = (): void => {
    const { names } = recording;
    recording = createRecording();
    isClearing = false;
    said = [];
    // The device need not say its header again.
    if (names.length > 0) recording.push(encoder.encode(`${names.join(',')}\n`));
  };
  const lose = (): void => {
    leave?.();
    leave = undefined;
    port = undefined;
    state = 'gone';
    recording.breakOff();
  };
  const timer = setInterval(poll, POLL);

  return {
    get recording() {
      return recording;
    },
    connect(next) {
      if (port) return;
      port = next;
      state = 'connected';
      const quit = [
        next.onBytes(hear),
        next.onGone(() => {
          if (port === next) lose();
        }),
      ];
      leave = () => {
        for (const each of quit) each();
      };
      queue.reconnect();
      poll();
    },
    async disconnect() {
      const old = port;
      if (!old) return;
      lose();
      await old.close();
    },
    send(commands) {
      if (!port || !queue.start(commands)) return false;
      poll();
      return true;
    },
    release(stopLine) {
      stop = undefined;
      write(queue.stop(stopLine)).then(
        () => {
          stop = 'sent';
        },
        () => {
          stop = 'not sent';
        },
      );
    },
    snapshot: () => ({
      state,
      counts: { ...recording.counts },
      names: recording.names,
      rows: recording.rows,
      queue: queue.state,
      faults: recording.faults,
      said,
      stop,
    }),
    clear() {
      if (port) isClearing = true;
      else startAnew();
    },
    close() {
      clearInterval(timer);
      const old = port;
      if (old) {
        lose();
        void old.close();
      }
    },
  };
}
