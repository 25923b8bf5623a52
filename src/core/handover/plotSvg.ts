/** Plots as SVG, drawn from the same columns as on the screen. No style sheets: attributes alone, so that any reader shows them. */
import { formatNumber } from '../units';
import { escapeXml } from './text';

export interface PlotLine {
  readonly label: string;
  /** In the unit of the plot's axis. NaN breaks the line. */
  readonly values: ArrayLike<number>;
  /** A limit is drawn thin and broken. */
  readonly isLimit?: boolean;
}

export interface Plot {
  readonly title: string;
  readonly across: { readonly label: string; readonly values: ArrayLike<number> };
  readonly up: string;
  readonly lines: readonly PlotLine[];
}

const WIDTH = 760;
const HEIGHT = 320;
const LEFT = 74;
const RIGHT = 20;
const TOP = 40;
const BOTTOM = 74;

/** Told apart by dash as well as by colour. */
const STROKES = ['#2f4ea1', '#b5490b', '#1c6b4a', '#8f1f7a', '#3b454c', '#7a5b00'] as const;
const DASHES = ['', '9 4', '3 3', '12 3 3 3', '6 2', '2 5'] as const;

/** About `count` round numbers over a range: steps of 1, 2 or 5 times a power of ten. */
export function roundTicks(low: number, high: number, count: number): readonly number[] {
  const span = high - low;
  if (!(span > 0) || !Number.isFinite(span)) return [low];
  const rough = span / count;
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = ([1, 2, 5, 10].find((factor) => factor * power >= rough) ?? 10) * power;
  const ticks: number[] = [];
  for (let k = Math.ceil(low / step - 1e-9); k * step <= high + 1e-9 * span; k++) ticks.push(k * step);
  return ticks;
}

interface Range {
  readonly low: number;
  readonly high: number;
}

function rangeOf(columns: readonly ArrayLike<number>[], margin: number): Range {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const column of columns) {
    for (let i = 0; i < column.length; i++) {
      const value = column[i]!;
      if (!Number.isFinite(value)) continue;
      low = Math.min(low, value);
      high = Math.max(high, value);
    }
  }
  if (!(low <= high)) return { low: 0, high: 1 };
  const span = high - low || Math.abs(high) || 1;
  return { low: low - margin * span, high: high + margin * span };
}

const at = (value: number): string => String(Number(value.toFixed(2)));

function pathOf(
  across: ArrayLike<number>,
  values: ArrayLike<number>,
  x: (v: number) => number,
  y: (v: number) => number,
): string {
  const parts: string[] = [];
  let isDown = false;
  for (let i = 0; i < values.length; i++) {
    const isThere = Number.isFinite(values[i]!) && Number.isFinite(across[i]!);
    if (isThere) parts.push(`${isDown ? 'L' : 'M'}${at(x(across[i]!))} ${at(y(values[i]!))}`);
    isDown = isThere;
  }
  return parts.join('');
}

const text = (x: number, y: number, words: string, anchor: string, more = ''): string =>
  `<text x="${at(x)}" y="${at(y)}" text-anchor="${anchor}"${more}>${escapeXml(words)}</text>`;

/**
 * A plot as an SVG picture on white, 760 x 320.
 *
 * @param plot  columns of one length, each in the unit its axis names
 *
 * O(points).
 */
export function writePlotSvg(plot: Plot): string {
  const { across, lines } = plot;
  const xs = rangeOf([across.values], 0);
  const ys = rangeOf(
    lines.map(({ values }) => values),
    0.06,
  );
  const x = (v: number): number => LEFT + ((v - xs.low) / (xs.high - xs.low || 1)) * (WIDTH - LEFT - RIGHT);
  const y = (v: number): number =>
    HEIGHT - BOTTOM - ((v - ys.low) / (ys.high - ys.low)) * (HEIGHT - TOP - BOTTOM);
  const base = HEIGHT - BOTTOM;
  const grid = [
    ...roundTicks(ys.low, ys.high, 5).flatMap((tick) => [
      `<path d="M${LEFT} ${at(y(tick))}H${WIDTH - RIGHT}" stroke="${Math.abs(tick) < 1e-12 ? '#55616a' : '#d5dad5'}"/>`,
      text(LEFT - 8, y(tick) + 4, formatNumber(tick), 'end'),
    ]),
    ...roundTicks(xs.low, xs.high, 8).flatMap((tick) => [
      `<path d="M${at(x(tick))} ${base}v5" stroke="#55616a"/>`,
      text(x(tick), base + 19, formatNumber(tick), 'middle'),
    ]),
  ];
  const curves = lines.map(({ values, isLimit }, i) => {
    const stroke = isLimit ? '#b3211c' : STROKES[i % STROKES.length];
    const dash = isLimit ? '2 3' : DASHES[i % DASHES.length];
    const dashed = dash ? ` stroke-dasharray="${dash}"` : '';
    return `<path d="${pathOf(across.values, values, x, y)}" fill="none" stroke="${stroke}" stroke-width="${isLimit ? 1.2 : 1.8}"${dashed}/>`;
  });
  const room = (WIDTH - LEFT - RIGHT) / Math.max(1, lines.length);
  const key = lines.flatMap(({ label, isLimit }, i) => {
    const from = LEFT + i * room;
    const stroke = isLimit ? '#b3211c' : STROKES[i % STROKES.length];
    const dash = isLimit ? '2 3' : DASHES[i % DASHES.length];
    return [
      `<path d="M${at(from)} ${HEIGHT - 12}h24" fill="none" stroke="${stroke}" stroke-width="1.8"${dash ? ` stroke-dasharray="${dash}"` : ''}/>`,
      text(from + 30, HEIGHT - 8, label, 'start'),
    ];
  });
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${WIDTH}" height="${HEIGHT}" viewBox="0 0 ${WIDTH} ${HEIGHT}" role="img" aria-label="${escapeXml(plot.title)}" font-family="sans-serif" font-size="12" fill="#18222b">`,
    `<rect width="${WIDTH}" height="${HEIGHT}" fill="#ffffff"/>`,
    text(LEFT, 20, plot.title, 'start', ' font-size="15" font-weight="600"'),
    text(16, (TOP + base) / 2, plot.up, 'middle', ` transform="rotate(-90 16 ${at((TOP + base) / 2)})"`),
    text((LEFT + WIDTH - RIGHT) / 2, base + 36, across.label, 'middle'),
    ...grid,
    `<path d="M${LEFT} ${TOP}V${base}H${WIDTH - RIGHT}" fill="none" stroke="#18222b"/>`,
    ...curves,
    ...key,
    '</svg>',
    '',
  ].join('\n');
}
