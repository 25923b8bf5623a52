import type { CalculationSheet } from './calculationSheet';
import type { SheetGrounds, SheetRow, SheetSection } from './sheetRows';
import { escapeXml as e } from './text';

/** Paper and ink on A4, whatever the screen looks like. Every rule is held inside the sheet. */
export const SHEET_STYLE = `
@page { size: A4; margin: 16mm 15mm; @bottom-right { content: counter(page) " of " counter(pages); font: 8pt system-ui, sans-serif; } }
.calculation-sheet { background: #fff; color: #111; font: 9.5pt/1.35 system-ui, sans-serif; font-variant-numeric: tabular-nums; color-scheme: light; overflow-wrap: anywhere; }
.calculation-sheet h1 { font-size: 19pt; margin: 0 0 1mm; }
.calculation-sheet h2 { font-size: 12pt; margin: 6mm 0 1.5mm; border-bottom: 0.4mm solid #111; break-after: avoid; }
.calculation-sheet p, .calculation-sheet ul { margin: 0 0 1.5mm; }
.calculation-sheet ul { padding-left: 5mm; list-style: disc; }
.calculation-sheet li { margin-bottom: 0.8mm; }
.calculation-sheet h2 + p { break-after: avoid; }
.calculation-sheet .imprint { color: #333; font-size: 8.5pt; }
.calculation-sheet .imprint code { font-size: 8pt; }
.calculation-sheet .cautions { border: 0.6mm solid #111; padding: 2mm 3mm; margin: 4mm 0; break-inside: avoid; }
.calculation-sheet .cautions h2 { margin-top: 0; }
.calculation-sheet .cautions small { display: block; color: #333; }
.calculation-sheet table { width: 100%; border-collapse: collapse; table-layout: fixed; }
.calculation-sheet th, .calculation-sheet td { text-align: left; vertical-align: top; padding: 0.8mm 1.5mm 0.8mm 0; }
.calculation-sheet thead th { font-size: 8pt; border-bottom: 0.2mm solid #111; }
.calculation-sheet tbody { break-inside: avoid; border-bottom: 0.1mm solid #bbb; }
.calculation-sheet tbody th { font-weight: 600; }
.calculation-sheet .what { width: 43%; }
.calculation-sheet .grounds td { font-size: 8pt; color: #333; padding-top: 0; }
.calculation-sheet .formula { font-family: ui-serif, serif; font-size: 9pt; color: #111; }
.calculation-sheet .fails { font-weight: 700; text-decoration: underline double; }
.calculation-sheet .entries { columns: 2; column-gap: 7mm; margin: 0; font-size: 8.5pt; }
.calculation-sheet .entries div { display: flex; justify-content: space-between; gap: 3mm; break-inside: avoid; border-bottom: 0.1mm solid #bbb; padding: 0.4mm 0; }
.calculation-sheet .entries dd { margin: 0; text-align: right; }
.calculation-sheet .entries small { display: block; font-size: 6.5pt; color: #555; }
.calculation-sheet figure { margin: 3mm 0; break-inside: avoid; }
.calculation-sheet figure svg, .calculation-sheet figure img { display: block; width: 100%; height: auto; max-height: 88mm; object-fit: contain; }
.calculation-sheet figcaption { font-size: 8pt; color: #333; }
.calculation-sheet .signing { display: flex; gap: 8mm; margin-top: 4mm; break-inside: avoid; }
.calculation-sheet .signing span { flex: 1; border-bottom: 0.2mm solid #111; padding-top: 7mm; font-size: 8pt; }
`;

/** A picture for the sheet: an SVG text as it is, or the address of an image (a data address where it must last). */
export type SheetPicture =
  | { readonly kind: 'svg'; readonly caption: string; readonly svg: string }
  | { readonly kind: 'image'; readonly caption: string; readonly address: string };

function groundsLine({ of, formula, inputs, source }: SheetGrounds): string {
  const which = of ? `<b>${e(of)}</b> ` : '';
  const list = inputs.length > 0 ? ` Inputs: ${inputs.map(e).join('; ')}.` : '';
  return `<tr class="grounds"><td colspan="4">${which}<span class="formula">${e(formula)}</span>.${list} Source: ${e(source)}.</td></tr>`;
}

function rowBody(row: SheetRow): string {
  const spare =
    row.spare === undefined
      ? ''
      : row.isFailing
        ? `<span class="fails">${e(row.spare)} fails</span>`
        : e(row.spare);
  const note = row.note ? ` <small>(${e(row.note)})</small>` : '';
  return `<tbody><tr><th scope="row">${e(row.label)}${note}</th><td>${e(row.result)}</td><td>${e(row.limit ?? '')}</td><td>${spare}</td></tr>${row.grounds.map(groundsLine).join('')}</tbody>`;
}

/** In two columns, each with the field's name in the file below its label. */
function plainHtml({ title, rows }: SheetSection): string {
  const entries = rows.map(({ label, result, note }) => {
    const path = note ? `<small>${e(note)}</small>` : '';
    return `<div><dt>${e(label)}${path}</dt><dd>${e(result)}</dd></div>`;
  });
  return `<section><h2>${e(title)}</h2><dl class="entries">${entries.join('')}</dl></section>`;
}

function sectionHtml(section: SheetSection): string {
  if (section.isPlain) return plainHtml(section);
  const { title, notes, rows } = section;
  const table =
    rows.length === 0
      ? ''
      : `<table><thead><tr><th class="what" scope="col">Quantity</th><th scope="col">Result</th><th scope="col">Limit</th><th scope="col">Spare</th></tr></thead>${rows.map(rowBody).join('')}</table>`;
  return `<section><h2>${e(title)}</h2>${notes.map((note) => `<p>${e(note)}</p>`).join('')}${table}</section>`;
}

const pictureHtml = (picture: SheetPicture): string => {
  const inside =
    picture.kind === 'svg' ? picture.svg : `<img alt="${e(picture.caption)}" src="${e(picture.address)}">`;
  // A plot has its title inside it.
  const words = picture.caption ? `<figcaption>${e(picture.caption)}</figcaption>` : '';
  return `<figure>${inside}${words}</figure>`;
};

/** The sheet's own element, for a page that has SHEET_STYLE already. Everything from the rig is escaped. */
export function sheetBody(sheet: CalculationSheet, pictures: readonly SheetPicture[]): string {
  const [first, ...others] = pictures;
  const verdicts = sheet.verdicts.map(
    ({ holds, sentence }) =>
      `<li>${holds ? 'Holds' : '<span class="fails">Fails</span>'}: ${e(sentence)}</li>`,
  );
  const cautions = sheet.cautions.map(
    ({ sentence, because }) => `<li>${e(sentence)} <small>Because: ${e(because)}.</small></li>`,
  );
  return [
    '<article class="calculation-sheet">',
    `<h1>${e(sheet.title)}: calculation sheet</h1>`,
    `<p class="imprint">${e(sheet.program)} · ${e(sheet.date)}<br>Rig SHA-256 <code>${sheet.sha256}</code></p>`,
    first ? pictureHtml(first) : '',
    `<ul>${verdicts.join('')}</ul>`,
    cautions.length > 0
      ? `<section class="cautions"><h2>Cautions</h2><ul>${cautions.join('')}</ul></section>`
      : '',
    '<div class="signing"><span>Checked by</span><span>Date</span></div>',
    ...sheet.sections.slice(0, 1).map(sectionHtml),
    ...others.map(pictureHtml),
    ...sheet.sections.slice(1).map(sectionHtml),
    '</article>',
  ].join('\n');
}

/** The sheet as a page of its own, to be kept, opened without the program, and printed. */
export const writeSheetHtml = (sheet: CalculationSheet, pictures: readonly SheetPicture[]): string =>
  `<!doctype html>
<html lang="en-GB">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${e(sheet.title)}: calculation sheet</title>
<style>body { margin: 0 auto; max-width: 180mm; }${SHEET_STYLE}</style>
</head>
<body>
${sheetBody(sheet, pictures)}
</body>
</html>
`;
