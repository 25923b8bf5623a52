/**
 * Sends a schedule or gains line by line, each acknowledged before the next goes out.
 *
 * A command is one line, ">id,word,field,...": ids count up from 1 and never repeat within a session. The device answers
 * "<id,ok" or "<id,no,reason", and must answer a repeated id again without acting twice, for a lost answer is met by
 * sending the same line again. The stop line is the user's own text, goes out at once, unnumbered, ahead of everything, and
 * empties the queue. No clock in here: the caller says what time it is.
 */
export type QueueState =
  | { readonly kind: 'idle' }
  | { readonly kind: 'sending'; readonly done: number; readonly total: number }
  | { readonly kind: 'done'; readonly total: number }
  | {
      readonly kind: 'refused';
      readonly line: string;
      readonly reason: string;
      readonly done: number;
      readonly total: number;
    }
  | {
      readonly kind: 'silent';
      readonly line: string;
      readonly done: number;
      readonly total: number;
      readonly sentence: string;
    }
  | { readonly kind: 'stopped'; readonly done: number; readonly total: number };

export interface CommandQueue {
  readonly state: QueueState;
  /** Takes a batch; refused (false) while another is under way. Nothing goes out before the next poll. */
  start(commands: readonly Command[]): boolean;
  /** Lines to write now, each without its line end; call at least every quarter of the timeout and after each answer. */
  poll(now: number): string[];
  /** An answer from the device. False when it answers nothing that is open. */
  hear(id: number, isDone: boolean, reason: string): boolean;
  /** Drops what is left of the batch and returns the line to write at once. */
  stop(stopLine: string): string;
  /** The port came back: the open command is sent again at the next poll. */
  reconnect(): void;
}

export interface Command {
  /** What to set, a bare word: gain, point, clear. */
  readonly word: string;
  readonly fields: readonly (string | number)[];
}

export interface QueueOptions {
  /** s without an answer before the line is sent again. */
  readonly timeout?: number;
  /** Times a line is sent in all before the device counts as silent. */
  readonly attempts?: number;
}

/** The text of a command, without its line end. Throws on a word or field that would break the line: a programmer's mistake. */
export function encodeCommand(id: number, command: Command): string {
  const fields = command.fields.map((f) => (typeof f === 'number' ? String(f) : f));
  for (const part of [command.word, ...fields]) {
    if (part === '' || /[,\r\n<>#{}]/.test(part)) throw new Error(`"${part}" cannot stand in a command line`);
  }
  for (const f of command.fields)
    if (typeof f === 'number' && !Number.isFinite(f)) throw new Error(`${f} cannot be sent`);
  return `>${[id, command.word, ...fields].join(',')}`;
}

/** Commands that load a schedule: cleared, then one point a line (time s, then one tilt rad a gimbal), then its length. */
export function encodeSchedule(
  time: ArrayLike<number>,
  tilts: readonly ArrayLike<number>[],
  digits = 6,
): Command[] {
  const round = (x: number): number => Number(x.toPrecision(digits));
  const commands: Command[] = [{ word: 'clear', fields: ['schedule'] }];
  for (let i = 0; i < time.length; i++) {
    commands.push({ word: 'point', fields: [i, round(time[i]), ...tilts.map((t) => round(t[i]))] });
  }
  commands.push({ word: 'use', fields: ['schedule', time.length] });
  return commands;
}

/** Commands that set gains by name. */
export const encodeGains = (gains: Readonly<Record<string, number>>): Command[] =>
  Object.entries(gains).map(([name, value]) => ({ word: 'gain', fields: [name, value] }));

export function createCommandQueue(options: QueueOptions = {}): CommandQueue {
  const timeout = options.timeout ?? 0.5;
  const attempts = options.attempts ?? 4;
  let state: QueueState = { kind: 'idle' };
  let batch: readonly { readonly id: number; readonly line: string }[] = [];
  let at = 0;
  let lastId = 0;
  let sentAt = Number.NEGATIVE_INFINITY;
  let tries = 0;
  const progress = (): { done: number; total: number } => ({ done: at, total: batch.length });
  return {
    get state() {
      return state;
    },
    start(commands) {
      if (state.kind === 'sending') return false;
      batch = commands.map((c) => {
        lastId++;
        return { id: lastId, line: encodeCommand(lastId, c) };
      });
      at = 0;
      tries = 0;
      sentAt = Number.NEGATIVE_INFINITY;
      state = batch.length === 0 ? { kind: 'done', total: 0 } : { kind: 'sending', ...progress() };
      return true;
    },
    poll(now) {
      if (state.kind !== 'sending' || now - sentAt < timeout) return [];
      const { line } = batch[at];
      if (tries >= attempts) {
        const sentence = `The device does not answer "${line}" (sent ${attempts} times, ${timeout} s each): ${at} of ${batch.length} lines are through.`;
        state = { kind: 'silent', line, ...progress(), sentence };
        return [];
      }
      tries++;
      sentAt = now;
      return [line];
    },
    hear(id, isDone, reason) {
      if (state.kind !== 'sending' || batch[at].id !== id || tries === 0) return false;
      if (!isDone) {
        state = { kind: 'refused', line: batch[at].line, reason, ...progress() };
        return true;
      }
      at++;
      tries = 0;
      sentAt = Number.NEGATIVE_INFINITY;
      state = at === batch.length ? { kind: 'done', total: at } : { kind: 'sending', ...progress() };
      return true;
    },
    stop(stopLine) {
      if (state.kind === 'sending') state = { kind: 'stopped', ...progress() };
      return stopLine;
    },
    reconnect() {
      tries = 0;
      sentAt = Number.NEGATIVE_INFINITY;
    },
  };
}
