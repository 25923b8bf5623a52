import type { Rig } from '../core/rig';

/** What a command came to. `failing` is a rig that fails its own limits; `refused` a bad file or option. */
export type CommandOutcome =
  | {
      readonly kind: 'done';
      readonly output: unknown;
      readonly csv?: string;
      /** In place of the output: one JSON value a line, printed as each is ready, so that files can be put together. */
      readonly lines?: Iterable<unknown>;
    }
  | { readonly kind: 'failing'; readonly output: unknown; readonly csv?: string }
  | { readonly kind: 'refused'; readonly sentences: readonly string[] };

/** An option of a command: `--name value`. */
export interface OptionSpec {
  readonly name: string;
  readonly meaning: string;
  /** Shown and used when the option is not given; required when undefined. */
  readonly fallback?: string;
}

export interface Command {
  readonly name: string;
  readonly purpose: string;
  readonly example: string;
  readonly options: readonly OptionSpec[];
  /** What the first argument is: a rig, or some other file the command reads itself. */
  readonly reads: 'rig' | 'file';
  readonly run: (input: CommandInput) => CommandOutcome | Promise<CommandOutcome>;
}

export interface CommandInput {
  /** Present when the command reads a rig. */
  readonly rig: Rig;
  readonly path: string;
  readonly options: Options;
}

/** Options as given, read with a sentence for each that is not right. */
export class Options {
  readonly faults: string[] = [];
  constructor(private readonly values: ReadonlyMap<string, string>) {}

  text(name: string): string {
    return this.values.get(name) ?? '';
  }

  /** A number in a range; a wrong one is noted as a fault and its lower bound returned. */
  number(name: string, min: number, max: number, unit = ''): number {
    const given = this.text(name);
    const value = Number(given);
    if (given !== '' && Number.isFinite(value) && value >= min && value <= max) return value;
    this.faults.push(`--${name}: "${given}" is not a number from ${min} to ${max}${unit && ` ${unit}`}.`);
    return min;
  }

  choice<T extends string>(name: string, choices: readonly T[]): T {
    const given = this.text(name);
    const found = choices.find((choice) => choice === given);
    if (found !== undefined) return found;
    this.faults.push(`--${name}: "${given}" is not one of ${choices.join(', ')}.`);
    return choices[0] as T;
  }
}
