import { type Dimension, findUnit, unitsOf } from '../../units';
import type { LogTable } from './logReader';
import { guessTimeUnit, readClock, type TimeUnit } from './logTime';

/** What a column of a log can be, with its dimension. */
export const LOG_QUANTITIES = {
  roll: 'angle',
  pitch: 'angle',
  yaw: 'angle',
  rollRate: 'angularRate',
  pitchRate: 'angularRate',
  yawRate: 'angularRate',
  accelerationX: 'acceleration',
  accelerationY: 'acceleration',
  accelerationZ: 'acceleration',
  vibration: 'acceleration',
  tiltCommand: 'angle',
  tilt: 'angle',
  tiltRate: 'angularRate',
  wheelSpeed: 'spinRate',
  motorCurrent: 'current',
  motorVoltage: 'voltage',
  turnMark: 'ratio',
  moment: 'torque',
} as const satisfies Record<string, Dimension>;

export type LogQuantity = keyof typeof LOG_QUANTITIES;

/** Which column is what, in which unit. Plain data: kept with the names of the columns it was made for. */
export interface ColumnMapping {
  /** Name of the time column; undefined when the log has none and `sampleRate` (Hz) stands in. */
  readonly time: string | undefined;
  readonly timeUnit: TimeUnit;
  readonly sampleRate?: number;
  readonly columns: readonly {
    readonly column: string;
    readonly quantity: LogQuantity;
    readonly unit: string;
  }[];
}

/** A log in SI units, on one rising clock. */
export interface BenchLog {
  readonly time: Float64Array;
  readonly step: number;
  readonly quantities: Readonly<Partial<Record<LogQuantity, Float64Array>>>;
  readonly remarks: readonly string[];
}

export type MappingOutcome =
  | { readonly kind: 'mapped'; readonly log: BenchLog }
  | { readonly kind: 'refused'; readonly sentence: string };

const NAME_HINTS: readonly (readonly [RegExp, LogQuantity])[] = [
  [/(tilt|gimbal|servo).*(cmd|command|target|set)|(cmd|command|target).*(tilt|gimbal|servo)/, 'tiltCommand'],
  [/(tilt|gimbal|servo).*(rate|vel|speed)/, 'tiltRate'],
  [/tilt|gimbal|servo/, 'tilt'],
  [/(roll).*(rate|vel)|gyro.?x|gx|omega.?x|^p$/, 'rollRate'],
  [/(pitch).*(rate|vel)|gyro.?y|gy|omega.?y|^q$/, 'pitchRate'],
  [/(yaw).*(rate|vel)|gyro.?z|gz|omega.?z|^r$/, 'yawRate'],
  [/roll|heel|^phi$/, 'roll'],
  [/pitch|trim|^theta$/, 'pitch'],
  [/yaw|heading|^psi$/, 'yaw'],
  [/vib/, 'vibration'],
  [/acc.*x|^ax$/, 'accelerationX'],
  [/acc.*y|^ay$/, 'accelerationY'],
  [/acc.*z|^az$/, 'accelerationZ'],
  [/rpm|wheel|spin|rotor/, 'wheelSpeed'],
  [/curr|amp|^i$/, 'motorCurrent'],
  [/volt|^v$|^u$/, 'motorVoltage'],
  [/mark|tach|index|once/, 'turnMark'],
  [/moment|torque/, 'moment'],
];

const UNIT_WORDS: Readonly<Record<string, string>> = {
  'deg/s': '°/s',
  dps: '°/s',
  'degree/s': '°/s',
  degrees: 'deg',
  degree: 'deg',
  radians: 'rad',
  g: 'g₀',
  'm/s2': 'm/s²',
  'm/s^2': 'm/s²',
  'n*m': 'N·m',
  nm: 'N·m',
  a: 'A',
  ma: 'mA',
  v: 'V',
  mv: 'mV',
  hz: 'Hz',
  '1/min': 'rpm',
  'r/min': 'rpm',
  percent: '%',
};

/** Finds the unit of a dimension that a header text means ("deg/s", "dps", "RPM"); undefined when none does. */
export function findWrittenUnit(dimension: Dimension, text: string): string | undefined {
  const word = text.trim();
  const known = UNIT_WORDS[word.toLowerCase()] ?? word;
  return (
    findUnit(dimension, known)?.symbol ??
    unitsOf(dimension).find((u) => u.symbol.toLowerCase() === known.toLowerCase())?.symbol
  );
}

/** Name, with case and separators taken out, and a unit that stands behind the name ("roll_deg", "rate dps"). */
function splitUnitSuffix(name: string): { stem: string; suffix: string } {
  const parts = name.toLowerCase().split(/[\s_.]+/);
  const suffix = parts.length > 1 ? parts[parts.length - 1] : '';
  return { stem: parts.join(' '), suffix };
}

/** Proposes a mapping from the names, units and values of a log; columns it knows nothing of are left out. */
export function suggestMapping(table: LogTable): ColumnMapping {
  const rises = (c: Float64Array): boolean => {
    let up = 0;
    const seen = Math.min(c.length, 2000);
    for (let i = 1; i < seen; i++) if (c[i] > c[i - 1]) up++;
    return seen > 1 && up > 0.9 * (seen - 1);
  };
  const byName = table.names.findIndex((n) =>
    /^(t|time|zeit|temps|tiempo|timestamp|stamp|clock|sec|seconds|ms|us|millis|micros)([\s_.].*)?$/i.test(n),
  );
  const timeIndex = byName >= 0 ? byName : table.names.length > 1 && rises(table.columns[0]) ? 0 : -1;
  const time = timeIndex >= 0 ? table.names[timeIndex] : undefined;
  const timeUnit =
    timeIndex >= 0
      ? guessTimeUnit(table.columns[timeIndex], table.names[timeIndex], table.unitTexts[timeIndex]).unit
      : 's';
  const taken = new Set<LogQuantity>();
  const columns: { column: string; quantity: LogQuantity; unit: string }[] = [];
  table.names.forEach((column, c) => {
    if (c === timeIndex) return;
    const { stem, suffix } = splitUnitSuffix(column);
    const hint = NAME_HINTS.find(([pattern, q]) => pattern.test(stem) && !taken.has(q));
    if (!hint) return;
    const quantity = hint[1];
    const dimension = LOG_QUANTITIES[quantity];
    const unit =
      findWrittenUnit(dimension, table.unitTexts[c]) ??
      findWrittenUnit(dimension, suffix) ??
      unitsOf(dimension)[0].symbol;
    taken.add(quantity);
    columns.push({ column, quantity, unit });
  });
  return { time, timeUnit, columns };
}

/** Key under which a mapping is remembered: logs with the same columns share it. */
export const mappingKey = (names: readonly string[]): string =>
  names.map((n) => n.trim().toLowerCase()).join('\u001f');

/**
 * Applies a mapping: SI units, one rising clock, rows put in order.
 *
 * @returns the log, or a sentence that names the column, the unit or the value at fault
 */
export function applyMapping(table: LogTable, mapping: ColumnMapping): MappingOutcome {
  const refuse = (sentence: string): MappingOutcome => ({ kind: 'refused', sentence });
  let time: Float64Array;
  let order: Uint32Array | undefined;
  let step: number;
  let remarks: readonly string[] = [];
  if (mapping.time === undefined) {
    if (!(mapping.sampleRate && mapping.sampleRate > 0))
      return refuse('The log has no time column: give its sample rate in Hz.');
    step = 1 / mapping.sampleRate;
    time = Float64Array.from({ length: table.rows }, (_, i) => i * step);
  } else {
    const at = table.names.indexOf(mapping.time);
    if (at < 0)
      return refuse(`The log has no time column "${mapping.time}": it has ${table.names.join(', ')}.`);
    const outcome = readClock(table.columns[at], mapping.timeUnit, table.dialect.dataLine);
    if (outcome.kind === 'refused') return outcome;
    ({ time, order, step, remarks } = outcome.clock);
  }
  const quantities: Partial<Record<LogQuantity, Float64Array>> = {};
  for (const { column, quantity, unit } of mapping.columns) {
    const at = table.names.indexOf(column);
    if (at < 0) return refuse(`The log has no column "${column}": it has ${table.names.join(', ')}.`);
    const found = findUnit(LOG_QUANTITIES[quantity], unit);
    if (!found)
      return refuse(
        `Column "${column}": "${unit}" is no unit of ${quantity}; use ${unitsOf(LOG_QUANTITIES[quantity])
          .map((u) => u.symbol)
          .join(', ')}.`,
      );
    if (quantities[quantity]) return refuse(`Column "${column}": ${quantity} is already another column.`);
    const source = table.columns[at];
    const out = new Float64Array(time.length);
    for (let i = 0; i < out.length; i++) out[i] = source[order ? order[i] : i] * found.toSI;
    quantities[quantity] = out;
  }
  return { kind: 'mapped', log: { time, step, quantities, remarks } };
}
