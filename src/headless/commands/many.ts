import { readFileSync } from 'node:fs';
import { readRigText } from '../../core/rig';
import {
  type ManyRequest,
  type RunRow,
  runShard,
  setUpTrial,
  summariseMany,
  TOLERANCE_NAMES,
  type Tolerances,
  USUAL_TOLERANCES,
} from '../../core/trial';
import type { Command, CommandOutcome, Options } from '../command';
import { SWITCHED_NAMES, switchesOf } from './trial';

/** "2/4": runs 2, 6, 10 ... counting from 1 and by 4. */
function readShard(options: Options): readonly [number, number] {
  const match = /^(\d+)\/(\d+)$/.exec(options.text('shard'));
  const k = Number(match?.[1]);
  const n = Number(match?.[2]);
  if (match && k >= 1 && k <= n && n <= 1e6) return [k, n];
  options.faults.push(`--shard: "${options.text('shard')}" is not k/n with k from 1 to n.`);
  return [1, 1];
}

/** "mass=0.05;centreAcross=0.01": the rest as usual. */
function readTolerances(options: Options): Tolerances {
  const text = options.text('tolerances');
  if (text === 'usual') return USUAL_TOLERANCES;
  const given: Record<string, number> = {};
  for (const part of text.split(';')) {
    const [name = '', value = ''] = part.split('=').map((word) => word.trim());
    const number = Number(value);
    if (!TOLERANCE_NAMES.some((known) => known === name))
      options.faults.push(`--tolerances: "${name}" is not one of ${TOLERANCE_NAMES.join(', ')}.`);
    else if (value === '' || !(number >= 0 && number <= 1))
      options.faults.push(`--tolerances: ${name}: "${value}" is not a number from 0 to 1.`);
    else given[name] = number;
  }
  return { ...USUAL_TOLERANCES, ...given };
}

const isRow = (value: unknown): value is RunRow =>
  typeof value === 'object' && value !== null && 'run' in value && 'figures' in value && 'drawn' in value;

/** Sums up lines of any number of shards, in whatever order they were put together. */
function merge(path: string): CommandOutcome {
  let text: string;
  try {
    text = readFileSync(path, 'utf8');
  } catch {
    return { kind: 'refused', sentences: [`${path}: there is no such file, or it cannot be read.`] };
  }
  const rows = new Map<number, RunRow>();
  const faults: string[] = [];
  text.split('\n').forEach((line, i) => {
    if (line.trim() === '') return;
    let value: unknown;
    try {
      value = JSON.parse(line);
    } catch {
      value = undefined;
    }
    if (!isRow(value)) faults.push(`${path}: line ${i + 1} is not a run.`);
    else if (rows.has(value.run)) faults.push(`${path}: line ${i + 1} repeats run ${value.run}.`);
    else rows.set(value.run, value);
  });
  if (faults.length > 0) return { kind: 'refused', sentences: faults.slice(0, 20) };
  return { kind: 'done', output: { runs: rows.size, ...summariseMany([...rows.values()]) } };
}

export const manyCommand: Command = {
  name: 'many',
  purpose:
    'many randomised trials; shards of one job print lines that can be put together, and merged by --merge',
  example: 'many public/rigs/strider.json --runs 1000 --shard 1/4 > 1.jsonl',
  options: [
    { name: 'runs', meaning: 'whole number of all shards together', fallback: '1000' },
    { name: 'seed', meaning: 'whole number', fallback: '1' },
    { name: 'shard', meaning: 'k/n: every nth run from the kth; prints one line a run', fallback: 'none' },
    {
      name: 'merge',
      meaning: 'yes: the file is not a rig but lines of shards, to be summed up',
      fallback: 'no',
    },
    { name: 'seconds', meaning: 's of each run', fallback: '5' },
    { name: 'with', meaning: SWITCHED_NAMES.join(', '), fallback: 'both' },
    { name: 'shove-most', meaning: 'N s: a shove out of the blue in every run, up to this', fallback: '0' },
    { name: 'shove-height', meaning: 'm above the ground', fallback: '0.4' },
    { name: 'tolerances', meaning: 'name=half width, parted by semicolons; or usual', fallback: 'usual' },
    { name: 'least', meaning: 'share of runs that must hold, or the command fails', fallback: '0' },
  ],
  reads: 'file',
  run: ({ path, options }) => {
    if (options.choice('merge', ['yes', 'no']) === 'yes') return merge(path);
    const request = readRequest(options);
    const [k, n] = options.text('shard') === 'none' ? [1, 1] : readShard(options);
    const least = options.number('least', 0, 1);
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    let text: string;
    try {
      text = readFileSync(path, 'utf8');
    } catch {
      return { kind: 'refused', sentences: [`${path}: there is no such file, or it cannot be read.`] };
    }
    const read = readRigText(text);
    if (read.kind !== 'read')
      return {
        kind: 'refused',
        sentences: read.kind === 'newer' ? [read.sentence] : read.refusals.map(({ sentence }) => sentence),
      };
    const outcome = setUpTrial(read.rig);
    if (outcome.kind === 'refused')
      return { kind: 'refused', sentences: outcome.refusals.map(({ sentence }) => sentence) };
    const rows = runShard(outcome.setup, request, k - 1, n);
    if (options.text('shard') !== 'none') return { kind: 'done', output: undefined, lines: rows };
    const summary = summariseMany([...rows]);
    return {
      kind: summary.success.rate >= least ? 'done' : 'failing',
      output: { rig: read.rig.name, ...request, ...summary },
    };
  },
};

function readRequest(options: Options): ManyRequest {
  const length = options.number('seconds', 0.05, 3600, 's');
  const most = options.number('shove-most', 0, 1e5, 'N s');
  const height = options.number('shove-height', -5, 20, 'm');
  return {
    seed: Math.round(options.number('seed', 0, Number.MAX_SAFE_INTEGER)),
    runs: Math.round(options.number('runs', 1, 1e7)),
    length,
    tolerances: readTolerances(options),
    shove: most > 0 ? { most, height, from: 0.1 * length, to: 0.5 * length } : undefined,
    switches: switchesOf(options.choice('with', SWITCHED_NAMES)),
  };
}
