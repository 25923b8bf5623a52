import { createReadStream } from 'node:fs';
import {
  applyMapping,
  type ColumnMapping,
  type Estimate,
  type Identification,
  type IdentifyKind,
  type IdentifyRequest,
  identifyLog,
  LOG_QUANTITIES,
  type LogQuantity,
  type LogTable,
  readLog,
  suggestMapping,
  TIME_UNITS,
  type TimeUnit,
} from '../../core/bench';
import type { Command, Options } from '../command';

const KINDS: readonly IdentifyKind[] = [
  'decay',
  'toppling',
  'pendulum',
  'coastDown',
  'spinUp',
  'servoStep',
  'servoSweep',
  'stillSensor',
  'closedLoop',
];

/** Numbers an identification may need besides the log, all SI; each option may be left out. */
const NUMBERS = [
  ['stiffness', 'N·m/rad: restoring (decay) or toppling stiffness'],
  ['inertia', 'kg·m²: of the body, or of wheel and rotor'],
  ['weight', 'N'],
  ['mass', 'kg: all that hangs (pendulum)'],
  ['radius', 'm: of the threads from the axis (pendulum)'],
  ['length', 'm: of the threads (pendulum)'],
  ['voltage', 'V: at the motor, where the log has none'],
  ['current-limit', 'A'],
  ['delay', 's: of the servo'],
  ['lag', 's: of the servo'],
  ['backlash', 'rad: of the servo'],
  ['momentum', 'N·m·s: of the whole array'],
  ['centre', 'm: centre of mass to the left'],
] as const;

type NumberName = (typeof NUMBERS)[number][0];

/** "roll=angle_x:deg;time=stamp:ms": which column is what. */
function readMap(text: string, table: LogTable): ColumnMapping | string {
  if (text === 'guess') return suggestMapping(table);
  let time: string | undefined;
  let timeUnit: TimeUnit = 's';
  const columns: { column: string; quantity: LogQuantity; unit: string }[] = [];
  for (const part of text.split(';')) {
    const match = /^\s*(\w+)\s*=\s*(.+?)\s*(?::\s*([^:]+?)\s*)?$/.exec(part);
    if (!match) return `--columns: "${part}" is not of the form quantity=column:unit.`;
    const [, what, column, unit] = match as unknown as [string, string, string, string | undefined];
    if (what === 'time') {
      time = column;
      if (unit !== undefined && !(unit in TIME_UNITS)) return `--columns: "${unit}" is not one of s, ms, us.`;
      timeUnit = (unit ?? 's') as TimeUnit;
    } else if (what in LOG_QUANTITIES)
      columns.push({ column, quantity: what as LogQuantity, unit: unit ?? 'rad' });
    else return `--columns: "${what}" is not one of time, ${Object.keys(LOG_QUANTITIES).join(', ')}.`;
  }
  return { time, timeUnit, columns };
}

function buildRequest(kind: IdentifyKind, options: Options): IdentifyRequest | readonly string[] {
  const missing: string[] = [];
  const given = (name: NumberName): number | undefined =>
    options.text(name) === 'none' ? undefined : options.number(name, -1e9, 1e9);
  const need = (name: NumberName): number => {
    const value = given(name);
    if (value === undefined) missing.push(`--${name}: must be given to identify ${kind}.`);
    return value ?? 1;
  };
  const as = (name: NumberName): { value: number } | undefined => {
    const value = given(name);
    return value === undefined ? undefined : { value };
  };
  const keep = <T extends object>(fields: T): T =>
    Object.fromEntries(Object.entries(fields).filter(([, value]) => value !== undefined)) as T;
  const make = (): IdentifyRequest => {
    switch (kind) {
      case 'decay':
        return {
          kind,
          options: keep({
            stiffness: as('stiffness'),
            inertia: as('inertia'),
            weight: as('weight'),
          }) as object,
        };
      case 'toppling':
        return { kind, options: keep({ stiffness: as('stiffness') }) as object };
      case 'pendulum':
        return {
          kind,
          options: {},
          setup: {
            kind: 'bifilar',
            mass: { value: need('mass') },
            radius: { value: need('radius') },
            length: { value: need('length') },
          },
        };
      case 'coastDown':
        return { kind, options: keep({ inertia: as('inertia') }) as object };
      case 'spinUp': {
        const limit = given('current-limit');
        const voltage = given('voltage');
        return {
          kind,
          ...(voltage === undefined ? {} : { voltage }),
          options: {
            inertia: { value: need('inertia') },
            ...(limit === undefined ? {} : { currentLimit: limit }),
          },
        };
      }
      case 'servoStep':
        return { kind, backlash: given('backlash') ?? 0 };
      case 'servoSweep':
        return { kind, dynamics: { delay: { value: need('delay') }, lag: { value: need('lag') } } };
      case 'stillSensor':
        return { kind };
      case 'closedLoop':
        return {
          kind,
          options: {},
          rig: {
            inertia: need('inertia'),
            momentum: need('momentum'),
            lag: need('lag'),
            delay: need('delay'),
            centreOffset: given('centre') ?? 0,
            stiffness: need('stiffness'),
            weight: need('weight'),
          },
        };
    }
  };
  const request = make();
  const faults = [...options.faults, ...missing];
  return faults.length > 0 ? faults : request;
}

const estimateRow = (e: Estimate): string =>
  [`"${e.name}"`, e.value, e.low, e.high, e.unit, e.verdict ?? ''].join(',');

export const identifyCommand: Command = {
  name: 'identify',
  purpose: 'what a bench log says of the numbers, each with its 95 % interval, or why it cannot say',
  example: 'identify decay.csv --kind decay --columns "time=t:s;roll=heel:deg" --inertia 0.8',
  options: [
    { name: 'kind', meaning: KINDS.join(', ') },
    { name: 'columns', meaning: 'quantity=column:unit, parted by semicolons; or guess', fallback: 'guess' },
    ...NUMBERS.map(([name, meaning]) => ({ name, meaning, fallback: 'none' })),
  ],
  reads: 'file',
  run: async ({ path, options }) => {
    const kind = options.choice('kind', KINDS);
    const request = buildRequest(kind, options);
    if (!('kind' in request)) return { kind: 'refused', sentences: request };
    let log: Awaited<ReturnType<typeof readLog>>;
    try {
      log = await readLog(createReadStream(path));
    } catch {
      return { kind: 'refused', sentences: [`${path}: there is no such file, or it cannot be read.`] };
    }
    if (log.kind !== 'read')
      return {
        kind: 'refused',
        sentences: [log.kind === 'refused' ? log.sentence : 'Reading was broken off.'],
      };
    const mapping = readMap(options.text('columns'), log.table);
    if (typeof mapping === 'string') return { kind: 'refused', sentences: [mapping] };
    const mapped = applyMapping(log.table, mapping);
    if (mapped.kind === 'refused') return { kind: 'refused', sentences: [mapped.sentence] };
    const outcome: Identification = identifyLog(mapped.log, request);
    if (outcome.kind === 'refused')
      return { kind: 'failing', output: { kind, mapping, sentence: outcome.sentence } };
    const { estimates, patches, residualSpread } = outcome;
    return {
      kind: 'done',
      output: {
        kind,
        mapping,
        estimates,
        patches,
        residualSpread,
        remarks: [...log.remarks, ...mapped.log.remarks, ...outcome.remarks],
      },
      csv: `${['name,value,low,high,unit,verdict', ...estimates.map(estimateRow)].join('\r\n')}\r\n`,
    };
  },
};
