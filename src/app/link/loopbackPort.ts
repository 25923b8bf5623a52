/** A device made of code behind a port, spoken to by the clock: the link can be tried, and tested, with no hardware. */
import type { LoopbackDevice, SerialPort } from '../../core/bench';

export interface LoopbackPlug {
  /** A port to the device; each plugging in gives a new one. */
  plugIn(): SerialPort;
  /** As if the cable were pulled. */
  unplug(): void;
}

/** ms between two packets of bytes, about a frame. */
const PACKET = 16;

/**
 * @param speed  device seconds a second; above 1 it talks faster than a real one, for trying the link itself
 */
export function createLoopbackPlug(device: LoopbackDevice, speed: number): LoopbackPlug {
  const start = performance.now();
  const now = (): number => ((performance.now() - start) / 1000) * speed;
  let pull: (() => void) | undefined;
  return {
    plugIn() {
      pull?.();
      const listeners = new Set<(bytes: Uint8Array) => void>();
      const mourners = new Set<() => void>();
      let isGone = false;
      // What it measured while nobody listened is lost to the line, as with a real one.
      device.say(now());
      device.plugIn();
      const timer = setInterval(() => {
        const bytes = device.say(now());
        if (bytes.length > 0) for (const listen of listeners) listen(bytes);
      }, PACKET);
      const end = (): void => {
        if (isGone) return;
        isGone = true;
        clearInterval(timer);
        device.unplug();
        for (const mourn of mourners) mourn();
      };
      pull = end;
      return {
        write: async (bytes) => {
          if (isGone) throw new Error('The port is gone.');
          device.hear(bytes);
        },
        onBytes: (listen) => {
          listeners.add(listen);
          return () => listeners.delete(listen);
        },
        onGone: (mourn) => {
          mourners.add(mourn);
          return () => mourners.delete(mourn);
        },
        close: async () => end(),
      };
    },
    unplug: () => pull?.(),
  };
}
