/** Rows of the calculation sheet: each number with its limit, what is spare, and what it stands on. */
import type { GyroSpinSheet, SpinSheet } from '../physics';
import type { LedgerLine } from '../planning';
import { quantityInfo, type Rig, RigSchema, schemaAt } from '../rig';
import type { GainOutcome } from '../trial';
import { type Dimension, type Figure, formatNumber, formatQuantity } from '../units';
import { LAW_SENTENCES, listGains } from './controlNumbers';

/** Formula, inputs and source of one number. */
export interface SheetGrounds {
  /** Which number, where a row has two: `ask` or `have`. */
  readonly of?: string;
  readonly formula: string;
  readonly inputs: readonly string[];
  readonly source: string;
}

export interface SheetRow {
  readonly label: string;
  readonly result: string;
  readonly limit?: string;
  /** As a percentage; negative: it fails. */
  readonly spare?: string;
  readonly isFailing?: boolean;
  readonly note?: string;
  readonly grounds: readonly SheetGrounds[];
}

export interface SheetSection {
  readonly title: string;
  readonly notes: readonly string[];
  readonly rows: readonly SheetRow[];
  /** True for rows that are a label and a value and nothing else. */
  readonly isPlain?: boolean;
}

const DIGITS = 4;

/** SI; what rounding leaves of a zero. */
const DUST = 1e-13;

/** In the usual unit, or in one that suits its size: on paper no one can ask for another. */
export function sheetQuantity(si: number, dimension: Dimension): string {
  const size = Math.abs(si);
  if (size < DUST) return formatQuantity(0, dimension);
  const symbol =
    dimension === 'time' && size >= 7200
      ? 'h'
      : dimension === 'length' && size >= 10
        ? 'm'
        : dimension === 'length' && size < 1e-5
          ? 'µm'
          : dimension === 'inertia' && size < 1e-3
            ? 'kg·cm²'
            : undefined;
  return formatQuantity(si, dimension, symbol, DIGITS);
}

const groundsOf = (figure: Figure, of?: string): SheetGrounds => ({
  ...(of ? { of } : {}),
  formula: figure.formula,
  inputs: figure.inputs.map(({ label, value, dimension }) => `${label} ${sheetQuantity(value, dimension)}`),
  source: figure.source,
});

export const figureRow = (figure: Figure): SheetRow => ({
  label: figure.label,
  result: sheetQuantity(figure.value, figure.dimension),
  grounds: [groundsOf(figure)],
});

const percent = (spare: number): string => formatQuantity(spare, 'ratio', '%');

export const ledgerRow = ({ label, ask, have, spare, at }: LedgerLine): SheetRow => ({
  label,
  result: sheetQuantity(ask.value, ask.dimension),
  limit: sheetQuantity(have.value, have.dimension),
  spare: percent(spare),
  isFailing: spare < 0,
  ...(at === undefined ? {} : { note: `tightest at ${sheetQuantity(at, 'time')}` }),
  grounds: [groundsOf(ask, 'ask'), groundsOf(have, 'have')],
});

function stressRows({ stress }: GyroSpinSheet): readonly SheetRow[] {
  return stress.map(({ part, figure, spare, radius }) => {
    const allowed = figure.inputs.find(({ label }) => label === 'Minimum allowable');
    const factor = figure.inputs.find(({ label }) => label === 'Factor on speed squared');
    const limit = allowed && factor ? { limit: sheetQuantity(allowed.value / factor.value, 'stress') } : {};
    return {
      label: `Part ${part + 1}: ${figure.label.toLowerCase()}, at radius ${sheetQuantity(radius, 'length')}`,
      result: sheetQuantity(figure.value, 'stress'),
      ...limit,
      spare: percent(spare),
      isFailing: spare < 0,
      grounds: [groundsOf(figure)],
    };
  });
}

/** Gyros whose sheets say the same, under one title. */
function alikeGyros(
  spin: SpinSheet,
): readonly { readonly names: readonly string[]; readonly sheet: GyroSpinSheet }[] {
  const groups = new Map<string, { names: string[]; sheet: GyroSpinSheet }>();
  for (const sheet of spin.gyros) {
    const { name, ...rest } = sheet;
    const key = JSON.stringify(rest);
    const group = groups.get(key);
    if (group) group.names.push(name);
    else groups.set(key, { names: [name], sheet });
  }
  return [...groups.values()];
}

/** What the Spin up station says, wheel by wheel. */
export function spinSections(spin: SpinSheet): readonly SheetSection[] {
  const wheels = alikeGyros(spin).map(({ names, sheet }) => ({
    title: `Wheel of ${names.join(', ')}`,
    notes: [...sheet.failures, `Of the bearing's load, ${sheet.rulingLoad}.`],
    rows: [
      ...sheet.groups.flatMap(({ figures }) => figures.map(figureRow)),
      ...stressRows(sheet),
      ...sheet.shake.map(figureRow),
    ],
  }));
  if (spin.figures.length === 0) return wheels;
  return [
    ...wheels,
    { title: 'All wheels on the one battery', notes: [], rows: spin.figures.map(figureRow) },
  ];
}

const MARGIN_SOURCE = 'Nyquist; Astrom and Murray, Feedback Systems, ch. 10';

/** The law's gains, and how far its loop is from not holding. */
export function gainSection(outcome: GainOutcome): SheetSection {
  const title = 'Gains and margins';
  const list = listGains(outcome);
  if (list.kind === 'none' || outcome.kind === 'none')
    return { title, notes: list.kind === 'none' ? [list.sentence] : [], rows: [] };
  const { verdict, leastSpeed, loop } = outcome.report;
  const source = outcome.design
    ? 'computed for this hardware: found to hold with 30 % more delay and 15 % less gain'
    : 'as the rig names them';
  const gains = list.gains.map(
    ({ name, unit, value }): SheetRow => ({
      label: `Gain ${name}`,
      result: `${formatNumber(value, DIGITS)} ${unit}`,
      grounds: [{ formula: LAW_SENTENCES[list.law], inputs: [], source }],
    }),
  );
  const inputs = [
    `Roll inertia ${sheetQuantity(loop.plant.inertia, 'inertia')}`,
    `Toppling stiffness ${sheetQuantity(loop.plant.stiffness, 'stiffness')}`,
    `Momentum ${sheetQuantity(loop.plant.momentum, 'angularMomentum')}`,
    `Delay ${sheetQuantity(loop.plant.delay, 'time')}`,
    `Loop period ${sheetQuantity(loop.plant.sampleTime, 'time')}`,
  ];
  const row = (label: string, result: string, formula: string): SheetRow => ({
    label,
    result,
    grounds: [{ formula, inputs, source: MARGIN_SOURCE }],
  });
  const notes =
    verdict.kind === 'fails'
      ? [`The linear loop does not hold: it grows at ${formatNumber(verdict.growth)} 1/s.`]
      : [];
  const margins =
    verdict.kind === 'fails'
      ? []
      : [
          row('Gain may grow by', formatNumber(verdict.margins.gainUp), 'least k > 1 with k L(iω) = −1'),
          row(
            'Gain may shrink to',
            formatNumber(verdict.margins.gainDown),
            'greatest k < 1 with k L(iω) = −1',
          ),
          row('Phase margin', sheetQuantity(verdict.margins.phase, 'angle'), 'π + arg L(iω) where |L| = 1'),
          row(
            'Further delay it bears',
            sheetQuantity(verdict.margins.delay, 'time'),
            'phase margin / ω, the least',
          ),
          row('Greatest sensitivity', formatNumber(verdict.margins.sensitivity), 'max |1 / (1 + L(iω))|'),
          row('Slowest decay', `${formatNumber(verdict.decay)} 1/s`, '−ln ρ(A) / T'),
        ];
  const least =
    leastSpeed.kind === 'found'
      ? [row('Holds down to a share of wheel speed', percent(leastSpeed.share), 'ρ(A) = 1 as momentum falls')]
      : [];
  return { title, notes, rows: [...gains, ...margins, ...least] };
}

/** Every number of the rig as it was entered, with its unit: the inputs of all the rest. */
export function entrySection(rig: Rig): SheetSection {
  const rows: SheetRow[] = [];
  const walk = (value: unknown, steps: readonly { key: unknown; holder: unknown }[], path: string): void => {
    if (typeof value === 'object' && value !== null) {
      for (const [key, item] of Object.entries(value)) {
        const isList = Array.isArray(value);
        walk(
          item,
          [...steps, { key: isList ? Number(key) : key, holder: value }],
          isList ? `${path}[${key}]` : path ? `${path}.${key}` : key,
        );
      }
      return;
    }
    const schema = schemaAt(RigSchema, steps);
    const info = schema && typeof value === 'number' ? quantityInfo(schema) : undefined;
    const result = info ? sheetQuantity(value as number, info.dimension) : String(value);
    rows.push({ label: info?.label ?? path, result, ...(info ? { note: path } : {}), grounds: [] });
  };
  walk(rig, [], '');
  return { title: 'The rig as entered', notes: [], rows, isPlain: true };
}
