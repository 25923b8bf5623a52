import { useLayoutEffect, useRef } from 'react';
import uPlot from 'uplot';
import 'uplot/dist/uPlot.min.css';
import type { RightingArms } from '../../../core/physics';
import { fromSI, unitFor } from '../../../core/units';
import { useIsDark } from '../../state/looks';
import { useSession } from '../../state/session';
import { PAGE_COLOURS } from '../../styles/quantityMarks';

const HEIGHT = 200;
const FONT = '12px "Public Sans Variable", sans-serif';

interface Mark {
  readonly angle: number;
  readonly word: string;
  readonly dash: readonly number[];
}

/** Angles worth marking, degrees. */
function marksOf({ deckImmersionAngle, vanishingAngle, lollAngle }: RightingArms): readonly Mark[] {
  const at = (angle: number | undefined, word: string, dash: readonly number[]): readonly Mark[] =>
    angle === undefined ? [] : [{ angle: fromSI(angle, 'angle', '°'), word, dash }];
  return [
    ...at(lollAngle, 'rests here', [2, 3]),
    ...at(deckImmersionAngle, 'deck under', [6, 4]),
    ...at(vanishingAngle, 'arm gone', []),
  ];
}

/** A line up at each marked angle with its word, one below the other so that they never lie on each other. */
function drawMarks(plot: uPlot, marks: readonly Mark[], ink: string, soft: string): void {
  const { ctx, bbox } = plot;
  const scale = devicePixelRatio;
  ctx.save();
  ctx.font = `${12 * scale}px "Public Sans Variable", sans-serif`;
  ctx.textBaseline = 'top';
  const zero = plot.valToPos(0, 'y', true);
  ctx.strokeStyle = soft;
  ctx.lineWidth = scale;
  ctx.beginPath();
  ctx.moveTo(bbox.left, zero);
  ctx.lineTo(bbox.left + bbox.width, zero);
  ctx.stroke();
  marks.forEach(({ angle, word, dash }, k) => {
    const x = plot.valToPos(angle, 'x', true);
    const isRight = x > bbox.left + 0.6 * bbox.width;
    ctx.strokeStyle = ink;
    ctx.fillStyle = ink;
    ctx.setLineDash(dash.map((length) => length * scale));
    ctx.beginPath();
    ctx.moveTo(x, bbox.top);
    ctx.lineTo(x, bbox.top + bbox.height);
    ctx.stroke();
    ctx.textAlign = isRight ? 'right' : 'left';
    ctx.fillText(
      `${word} ${angle.toFixed(0)}°`,
      x + (isRight ? -5 : 5) * scale,
      bbox.top + (3 + 16 * k) * scale,
    );
  });
  ctx.restore();
}

/** Righting arm over heel to 60 degrees. */
export function RightingPlot({ arms }: { readonly arms: RightingArms }) {
  const chosen = useSession((session) => session.units.length);
  const { symbol } = unitFor('length', chosen);
  const isDark = useIsDark();
  const box = useRef<HTMLDivElement>(null);
  useLayoutEffect(() => {
    const holder = box.current;
    if (!holder) return;
    const page = isDark ? PAGE_COLOURS.dark : PAGE_COLOURS.light;
    const axis = {
      stroke: page.soft,
      font: FONT,
      ticks: { show: false },
      grid: { stroke: page.line, width: 1 },
    };
    const angles = Array.from(arms.angle, (angle) => fromSI(angle, 'angle', '°'));
    const heights = Array.from(arms.arm, (arm) => fromSI(arm, 'length', symbol));
    const plot = new uPlot(
      {
        width: holder.clientWidth,
        height: HEIGHT,
        padding: [8, 8, 0, 0],
        legend: { show: false },
        cursor: { show: false },
        scales: { x: { time: false, range: () => [0, angles.at(-1) ?? 60] } },
        axes: [
          { ...axis, size: 24, gap: 2, values: (_, ticks) => ticks.map((tick) => `${tick}°`) },
          { ...axis, size: 52, gap: 4 },
        ],
        series: [{}, { stroke: page.ink, width: 2, points: { show: false }, label: 'Righting arm' }],
        hooks: { drawAxes: [(drawn) => drawMarks(drawn, marksOf(arms), page.ink, page.soft)] },
      },
      [angles, heights],
      holder,
    );
    const sizes = new ResizeObserver(() => {
      if (holder.clientWidth > 0) plot.setSize({ width: holder.clientWidth, height: HEIGHT });
    });
    sizes.observe(holder);
    return () => {
      sizes.disconnect();
      plot.destroy();
    };
  }, [arms, symbol, isDark]);
  return (
    <figure className="righting" aria-label={`Righting arm in ${symbol} over heel to 60 degrees`}>
      <figcaption>Righting arm GZ, {symbol}, over heel</figcaption>
      <div ref={box} />
    </figure>
  );
}
