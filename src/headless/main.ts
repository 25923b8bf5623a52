/**
 * The same work without a browser: `npm run rig -- <command> <file> [--option value ...]`.
 * Prints JSON, or CSV with `--csv`. Exit codes: 0 done, 1 the rig fails its own limits, 2 bad file or option.
 */
import { readFileSync } from 'node:fs';
import { readRigText } from '../core/rig';
import { type Command, Options } from './command';
import { COMMANDS } from './commands';

const say = (lines: readonly string[]): void => {
  for (const line of lines) process.stderr.write(`${line}\n`);
};

function usage(): readonly string[] {
  return [
    'npm run rig -- <command> <file> [--option value ...] [--csv]',
    ...COMMANDS.map((command) => `  ${command.name.padEnd(10)} ${command.purpose}`),
    'npm run rig -- <command> --help shows its options.',
  ];
}

const help = (command: Command): readonly string[] => [
  `${command.name}: ${command.purpose}`,
  `example: npm run rig -- ${command.example}`,
  ...command.options.map(
    ({ name, meaning, fallback }) =>
      `  --${name.padEnd(12)} ${meaning}${fallback === undefined ? ' (must be given)' : ` (${fallback})`}`,
  ),
];

interface Arguments {
  readonly files: readonly string[];
  readonly given: ReadonlyMap<string, string>;
  readonly wantsCsv: boolean;
  readonly faults: readonly string[];
}

function readArguments(command: Command, words: readonly string[]): Arguments {
  const files: string[] = [];
  const faults: string[] = [];
  const given = new Map(
    command.options.flatMap(({ name, fallback }) => (fallback === undefined ? [] : [[name, fallback]])),
  );
  let wantsCsv = false;
  for (let i = 0; i < words.length; i++) {
    const word = words[i] as string;
    if (word === '--csv') wantsCsv = true;
    else if (!word.startsWith('--')) files.push(word);
    else if (!command.options.some(({ name }) => `--${name}` === word))
      faults.push(`${word}: ${command.name} has no such option.`);
    else if (words[i + 1] === undefined) faults.push(`${word}: a value must follow.`);
    else given.set(word.slice(2), words[++i] as string);
  }
  for (const { name } of command.options) if (!given.has(name)) faults.push(`--${name}: must be given.`);
  if (files.length !== 1) faults.push(`${command.name} reads one file, and ${files.length} were given.`);
  return { files, given, wantsCsv, faults };
}

/** JSON with typed arrays as plain lists, and numbers that JSON lacks as words. */
const asJson = (value: unknown): string =>
  JSON.stringify(
    value,
    (_key, item: unknown) => {
      if (ArrayBuffer.isView(item)) return Array.from(item as unknown as ArrayLike<number>);
      if (typeof item === 'number' && !Number.isFinite(item)) return String(item);
      return item;
    },
    1,
  );

async function main(words: readonly string[]): Promise<number> {
  const command = COMMANDS.find(({ name }) => name === words[0]);
  if (!command) {
    say(words.length === 0 ? usage() : [`"${words[0]}" is no command.`, ...usage()]);
    return 2;
  }
  if (words.includes('--help')) {
    say(help(command));
    return 0;
  }
  const { files, given, wantsCsv, faults } = readArguments(command, words.slice(1));
  if (faults.length > 0) {
    say(faults);
    return 2;
  }
  const path = files[0] as string;
  const input = { path, options: new Options(given) };
  let outcome: Awaited<ReturnType<Command['run']>>;
  if (command.reads === 'rig') {
    let text: string;
    try {
      text = readFileSync(path, 'utf8');
    } catch {
      say([`${path}: there is no such file, or it cannot be read.`]);
      return 2;
    }
    const read = readRigText(text);
    if (read.kind !== 'read') {
      say(read.kind === 'newer' ? [read.sentence] : read.refusals.map(({ sentence }) => sentence));
      return 2;
    }
    outcome = await command.run({ ...input, rig: read.rig });
  } else {
    outcome = await command.run({ ...input, rig: undefined as never });
  }
  if (outcome.kind === 'refused') {
    say(outcome.sentences);
    return 2;
  }
  if (wantsCsv && outcome.csv === undefined) {
    say([`${command.name} has no table to print as CSV.`]);
    return 2;
  }
  if (outcome.kind === 'done' && outcome.lines && !wantsCsv) {
    for (const line of outcome.lines) process.stdout.write(`${JSON.stringify(line)}\n`);
    return 0;
  }
  process.stdout.write(wantsCsv ? (outcome.csv as string) : `${asJson(outcome.output)}\n`);
  return outcome.kind === 'failing' ? 1 : 0;
}

// A reader that has seen enough (such as `head`) closes the pipe: that is no fault.
process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  if (error.code !== 'EPIPE') throw error;
  process.exit();
});

process.exitCode = await main(process.argv.slice(2));
