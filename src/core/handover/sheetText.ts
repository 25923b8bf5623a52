import type { CalculationSheet } from './calculationSheet';
import type { SheetRow } from './sheetRows';

const LABEL = 46;
const NUMBER = 18;

function rowLines(row: SheetRow): readonly string[] {
  const spare = row.spare === undefined ? '' : `${row.spare}${row.isFailing ? ' FAILS' : ''}`;
  const label = row.grounds.length === 0 && row.note ? `${row.label} (${row.note})` : row.label;
  const head = `${label.padEnd(LABEL)} ${row.result.padEnd(NUMBER)} ${(row.limit ?? '').padEnd(NUMBER)} ${spare}`;
  const grounds = row.grounds.flatMap(({ of, formula, inputs, source }) => [
    `    ${of ? `${of}: ` : ''}${formula}`,
    ...(inputs.length > 0 ? [`      inputs: ${inputs.join('; ')}`] : []),
    `      source: ${source}`,
  ]);
  return [head.trimEnd(), ...(row.note && row.grounds.length > 0 ? [`    ${row.note}`] : []), ...grounds];
}

/** The sheet as plain text, one row a line, its grounds set in below. */
export function writeSheetText(sheet: CalculationSheet): string {
  const rule = (title: string): readonly string[] => ['', title, '='.repeat(title.length)];
  const lines = [
    `${sheet.title}: calculation sheet`,
    `${sheet.program}, ${sheet.date}`,
    `Rig SHA-256 ${sheet.sha256}`,
    '',
    ...sheet.verdicts.map(({ holds, sentence }) => `${holds ? 'Holds' : 'FAILS'}: ${sentence}`),
    ...(sheet.cautions.length > 0 ? rule('Cautions') : []),
    ...sheet.cautions.flatMap(({ sentence, because }) => [`! ${sentence}`, `  Because: ${because}.`]),
    ...sheet.sections.flatMap(({ title, notes, rows }) => [
      ...rule(title),
      ...notes,
      ...(rows.length > 0
        ? [`${'Quantity'.padEnd(LABEL)} ${'Result'.padEnd(NUMBER)} ${'Limit'.padEnd(NUMBER)} Spare`]
        : []),
      ...rows.flatMap(rowLines),
    ]),
  ];
  return `${lines.join('\n')}\n`;
}
