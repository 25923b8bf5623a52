import { decodeUtf8 } from '../logs/utf8';

/** One line as it came, or what was left of one when the connection broke. */
export interface AssembledLine {
  readonly text: string;
  /** False for a fragment: the connection broke, or the line outgrew the limit, before its end came. */
  readonly isWhole: boolean;
}

export interface LineAssembler {
  /** Lines completed by these bytes, in order. */
  push(bytes: Uint8Array): AssembledLine[];
  /** The connection is gone: what was begun comes out as a fragment, so that nothing received is lost. */
  breakOff(): AssembledLine[];
}

const LONGEST_LINE = 4096;

/**
 * Cuts a stream of bytes into lines at LF, CR LF or CR; empty lines are passed over.
 *
 * Every byte received comes out once: in a line, or in a fragment when the connection breaks or no line end comes within
 * 4096 bytes. Memory: one line.
 */
export function createLineAssembler(longest = LONGEST_LINE): LineAssembler {
  let held = new Uint8Array(256);
  let length = 0;
  const take = (isWhole: boolean, out: AssembledLine[]): void => {
    if (length > 0) out.push({ text: decodeUtf8(held, 0, length), isWhole });
    length = 0;
  };
  return {
    push(bytes) {
      const out: AssembledLine[] = [];
      for (let i = 0; i < bytes.length; i++) {
        const b = bytes[i];
        if (b === 10 || b === 13) {
          take(true, out);
          continue;
        }
        if (length === held.length) {
          const larger = new Uint8Array(2 * held.length);
          larger.set(held);
          held = larger;
        }
        held[length++] = b;
        if (length >= longest) take(false, out);
      }
      return out;
    },
    breakOff() {
      const out: AssembledLine[] = [];
      take(false, out);
      return out;
    },
  };
}
