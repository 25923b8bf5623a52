import { useLayoutEffect, useRef } from 'react';
import uPlot from 'uplot';
import 'uplot/dist/uPlot.min.css';
import type { GyroSpinSheet, SpinUpCurve } from '../../../core/physics';
import { fromSI, unitFor } from '../../../core/units';
import { curveStyle } from '../../ribbon/curveStyle';
import { drawLimits } from '../../ribbon/drawLimits';
import { useIsDark } from '../../state/looks';
import { useSession } from '../../state/session';
import { PAGE_COLOURS } from '../../styles/quantityMarks';

const HEIGHT = 190;
const FONT = '12px "Public Sans Variable", sans-serif';
const DASH = [7, 4];

interface Columns {
  readonly data: uPlot.AlignedData;
  /** In the unit shown. */
  readonly safeSpeed: number;
  readonly topOfScale: number;
}

function columnsOf(curve: SpinUpCurve, safe: number, symbol: string): Columns {
  const speed = curve.speed.map((value) => fromSI(value, 'spinRate', symbol));
  const safeSpeed = fromSI(safe, 'spinRate', symbol);
  const last = speed.at(-1) ?? 0;
  return {
    data: [curve.time, speed, curve.current] as unknown as uPlot.AlignedData,
    safeSpeed,
    // The safe speed is in the picture when the wheel comes near it.
    topOfScale: Math.max(1, last, safeSpeed < 1.6 * last ? 1.05 * safeSpeed : 0) * 1.05,
  };
}

function optionsFor(latest: { readonly current: Columns }, isDark: boolean, width: number): uPlot.Options {
  const page = isDark ? PAGE_COLOURS.dark : PAGE_COLOURS.light;
  const axis = { stroke: page.soft, font: FONT, ticks: { show: false } };
  const grid = { stroke: page.line, width: 1 };
  const speed = curveStyle('lead', isDark);
  return {
    width,
    height: HEIGHT,
    padding: [8, 4, 0, 0],
    legend: { show: false },
    cursor: { show: false },
    scales: {
      x: { time: false },
      y: { range: () => [0, latest.current.topOfScale] },
      current: { range: (_, _low, high) => [0, Math.max(1e-3, (high ?? 1) * 1.15)] },
    },
    axes: [
      { ...axis, size: 22, gap: 2, grid, values: (_, ticks) => ticks.map((tick) => `${tick} s`) },
      { ...axis, size: 52, gap: 4, grid },
      { ...axis, scale: 'current', side: 1, size: 40, gap: 4, grid: { show: false } },
    ],
    series: [
      {},
      { ...speed, dash: [], points: { show: false }, label: 'Speed' },
      {
        scale: 'current',
        stroke: isDark ? '#ff9d57' : '#b5490b',
        width: 2,
        dash: DASH,
        points: { show: false },
        label: 'Current',
      },
    ],
    hooks: { drawAxes: [(plot) => drawLimits(plot, [latest.current.safeSpeed], page.fail)] },
  };
}

/** Speed and winding current over the spin-up; the safe speed as a limit where it is near. */
export function SpinCurve({ sheet }: { readonly sheet: GyroSpinSheet }) {
  const symbol = unitFor(
    'spinRate',
    useSession((session) => session.units.spinRate),
  ).symbol;
  if (!sheet.spinUp) return null;
  return (
    <figure className="spin-curve" aria-label={`Spin-up: speed in ${symbol} and current in A over time`}>
      <figcaption>
        <span data-curve="speed">Speed, {symbol}</span>
        <span data-curve="current">Current, A</span>
      </figcaption>
      <CurvePlot columns={columnsOf(sheet.spinUp, sheet.safeSpeed[0], symbol)} />
    </figure>
  );
}

function CurvePlot({ columns }: { readonly columns: Columns }) {
  const box = useRef<HTMLDivElement>(null);
  const plot = useRef<uPlot>(undefined);
  const latest = useRef(columns);
  const isDark = useIsDark();

  useLayoutEffect(() => {
    const holder = box.current;
    if (!holder) return;
    const made = new uPlot(optionsFor(latest, isDark, holder.clientWidth), latest.current.data, holder);
    plot.current = made;
    const sizes = new ResizeObserver(() => {
      if (holder.clientWidth > 0) made.setSize({ width: holder.clientWidth, height: HEIGHT });
    });
    sizes.observe(holder);
    return () => {
      sizes.disconnect();
      made.destroy();
      plot.current = undefined;
    };
  }, [isDark]);

  useLayoutEffect(() => {
    latest.current = columns;
    plot.current?.setData(columns.data);
  }, [columns]);

  return <div className="spin-curve-box" ref={box} />;
}
