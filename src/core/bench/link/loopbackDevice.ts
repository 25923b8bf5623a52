import { encodeUtf8 } from '../logs/utf8';
import { createLineAssembler } from './lineAssembler';

/** What the device under a loopback measures and obeys: a trial, or a formula in a test. */
export interface LoopbackBody {
  readonly names: readonly string[];
  /** Writes the values at t (s) into out, in the order of the names. */
  sample(t: number, out: Float64Array): void;
  /** Does what a command says; a reason when it will not. */
  obey(word: string, fields: readonly string[]): string | undefined;
  /** The stop line came. */
  release(): void;
}

export interface LoopbackOptions {
  /** Hz. */
  readonly rate: number;
  readonly format: 'csv' | 'json';
  readonly stopLine: string;
}

/** A device made of code, that speaks and obeys as lineFormat.ts and commandQueue.ts say, so that the link works with no hardware. */
export interface LoopbackDevice {
  /** Bytes the device says between the last call and `now` (s). Sends a counter column "n" before the body's own. */
  say(now: number): Uint8Array;
  /** Bytes sent to it; its answers come out of the next say(). */
  hear(bytes: Uint8Array): void;
  /** Unplugged: what it says meanwhile is lost to the line, as with a real one, and the counter shows it. */
  unplug(): void;
  plugIn(): void;
  /** Samples made so far, heard or not. */
  readonly samples: number;
}

export function createLoopbackDevice(body: LoopbackBody, options: LoopbackOptions): LoopbackDevice {
  const assembler = createLineAssembler();
  const values = new Float64Array(body.names.length);
  const names = ['n', 't', ...body.names];
  let made = 0;
  let needsHeader = true;
  let isPlugged = true;
  let answers: string[] = [];
  let lastId = 0;
  let lastAnswer = '';
  const obey = (text: string): void => {
    if (text === options.stopLine) {
      body.release();
      return;
    }
    const match = /^>(\d+),([^,]+)(?:,(.*))?$/.exec(text);
    if (!match) return;
    const id = Number(match[1]);
    // A repeated id is answered again and not obeyed again.
    if (id !== lastId) {
      const reason = body.obey(match[2], match[3] === undefined ? [] : match[3].split(','));
      lastId = id;
      lastAnswer = reason === undefined ? `<${id},ok` : `<${id},no,${reason}`;
    }
    answers.push(lastAnswer);
  };
  const format = (n: number, t: number): string => {
    if (options.format === 'csv') return [n, t.toFixed(6), ...values].join(',');
    return JSON.stringify(
      Object.fromEntries(
        names.map((name, i) => [name, i === 0 ? n : i === 1 ? Number(t.toFixed(6)) : values[i - 2]]),
      ),
    );
  };
  return {
    say(now) {
      const lines: string[] = [];
      if (isPlugged) lines.push(...answers);
      answers = [];
      if (needsHeader && isPlugged && options.format === 'csv') {
        lines.push(names.join(','));
        needsHeader = false;
      }
      for (; made / options.rate <= now; made++) {
        const t = made / options.rate;
        body.sample(t, values);
        if (isPlugged) lines.push(format(made, t));
      }
      return encodeUtf8(lines.length > 0 ? `${lines.join('\n')}\n` : '');
    },
    hear(bytes) {
      if (!isPlugged) return;
      for (const { text, isWhole } of assembler.push(bytes)) if (isWhole) obey(text);
    },
    unplug() {
      isPlugged = false;
      assembler.breakOff();
      answers = [];
    },
    plugIn() {
      isPlugged = true;
      needsHeader = true;
    },
    get samples() {
      return made;
    },
  };
}
