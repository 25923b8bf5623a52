/** The browser's own serial port behind the port the core knows. */
import type { SerialPort as CorePort } from '../../core/bench';

export type PortOpening =
  | { readonly kind: 'open'; readonly port: CorePort }
  | { readonly kind: 'refused'; readonly sentence: string };

/** Why there is no serial port in this browser; undefined where there is. */
export function missingSerial(): string | undefined {
  if (!isSecureContext) return 'A serial port needs a page from a secure address (https, or this machine).';
  if (!('serial' in navigator))
    return 'This browser has no serial port. Chromium-based browsers on a computer have one (Web Serial); most on tablets and phones do not. The simulator works everywhere.';
  return undefined;
}

const because = (error: unknown): string => (error instanceof Error ? error.message : String(error));

/** Bytes the browser may hold between two looks of ours: half a second of a fast device. */
const BUFFER = 65_536;

/** Asks the user which port, and opens it. Must be called from a press of a button. */
export async function openWebSerial(baudRate: number): Promise<PortOpening> {
  const missing = missingSerial();
  if (missing) return { kind: 'refused', sentence: missing };
  let chosen: SerialPort;
  try {
    chosen = await navigator.serial.requestPort();
  } catch {
    return { kind: 'refused', sentence: 'No port was chosen.' };
  }
  try {
    await chosen.open({ baudRate, bufferSize: BUFFER });
  } catch (error) {
    return {
      kind: 'refused',
      sentence: `The port could not be opened: ${because(error)} Close whatever else uses it, or plug it in again.`,
    };
  }
  return { kind: 'open', port: wrapPort(chosen) };
}

/** Reads until the port is gone. A framing or overrun fault of the line ends a stream, not the port: it is read on. */
function wrapPort(port: SerialPort): CorePort {
  const listeners = new Set<(bytes: Uint8Array) => void>();
  const mourners = new Set<() => void>();
  let reader: ReadableStreamDefaultReader<Uint8Array> | undefined;
  let isClosing = false;
  let isGone = false;
  let lastWrite: Promise<void> = Promise.resolve();

  const pump = async (): Promise<void> => {
    while (port.readable && !isClosing) {
      reader = port.readable.getReader();
      try {
        for (;;) {
          const { value, done } = await reader.read();
          if (done) break;
          for (const listen of listeners) listen(value);
        }
      } catch {
        // The stream broke: `readable` tells whether the port went with it.
      } finally {
        reader.releaseLock();
      }
    }
    isGone = true;
    for (const mourn of mourners) mourn();
  };
  const pumping = pump();

  const write = async (bytes: Uint8Array): Promise<void> => {
    if (isGone || !port.writable) throw new Error('The port is gone.');
    const writer = port.writable.getWriter();
    try {
      await writer.write(bytes);
    } finally {
      writer.releaseLock();
    }
  };

  return {
    write: (bytes) => {
      // One after another, whatever became of the one before.
      lastWrite = lastWrite.catch(() => undefined).then(() => write(bytes));
      return lastWrite;
    },
    onBytes: (listen) => {
      listeners.add(listen);
      return () => listeners.delete(listen);
    },
    onGone: (mourn) => {
      mourners.add(mourn);
      return () => mourners.delete(mourn);
    },
    close: async () => {
      isClosing = true;
      await reader?.cancel().catch(() => undefined);
      await pumping;
      await port.close().catch(() => undefined);
    },
  };
}
