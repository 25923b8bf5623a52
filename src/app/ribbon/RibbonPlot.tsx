import { useEffect, useLayoutEffect, useRef } from 'react';
import uPlot from 'uplot';
import 'uplot/dist/uPlot.min.css';
import { formatNumber } from '../../core/units';
import { useIsDark } from '../state/looks';
import { stream } from '../state/stream';
import { PAGE_COLOURS } from '../styles/quantityMarks';
import { curveStyle } from './curveStyle';
import { drawLimits } from './drawLimits';
import { indexAt, type RibbonPlotData } from './ribbonCurves';

/** CSS pixels at the left of every plot for its scale, and at the right so that the last number is not cut. */
const GUTTER_LEFT = 46;
const GUTTER_RIGHT = 18;

interface RibbonPlotProps {
  readonly data: RibbonPlotData;
  /** s. */
  readonly length: number;
  readonly hasTimeAxis: boolean;
}

const columns = (data: RibbonPlotData): uPlot.AlignedData =>
  [data.time, ...data.curves.map((curve) => curve.values)] as uPlot.AlignedData;

/** What must be built anew rather than fed with other data. */
const structureOf = (data: RibbonPlotData): string =>
  `${data.unit}|${data.curves.map((curve) => `${curve.look}:${curve.label}`).join('|')}`;

const FONT = '12px "Public Sans Variable", sans-serif';

function optionsFor(
  latest: { readonly current: RibbonPlotProps },
  isDark: boolean,
  size: DOMRect,
): uPlot.Options {
  const page = isDark ? PAGE_COLOURS.dark : PAGE_COLOURS.light;
  const axis = { stroke: page.soft, font: FONT, ticks: { show: false } };
  const { data, hasTimeAxis } = latest.current;
  return {
    width: Math.max(80, size.width),
    height: Math.max(40, size.height),
    padding: [4, GUTTER_RIGHT, hasTimeAxis ? 0 : 4, 0],
    legend: { show: false },
    cursor: { show: false },
    scales: {
      x: { time: false, range: () => [0, Math.max(latest.current.length, 1e-3)] },
      y: { range: () => [...latest.current.data.range] as [number, number] },
    },
    axes: [
      {
        ...axis,
        show: hasTimeAxis,
        size: 20,
        gap: 2,
        grid: { stroke: page.line, width: 1 },
        values: (_, ticks) => ticks.map((tick) => `${tick} s`),
      },
      {
        ...axis,
        size: GUTTER_LEFT,
        gap: 4,
        space: 18,
        grid: { stroke: page.line, width: 1 },
        values: (_, ticks) => ticks.map((tick) => (tick < 0 ? `−${-tick}` : String(tick))),
      },
    ],
    series: [
      {},
      ...data.curves.map((curve) => {
        const style = curveStyle(curve.look, isDark);
        return { ...style, dash: [...style.dash], points: { show: false }, label: curve.label };
      }),
    ],
    hooks: { drawAxes: [(plot) => drawLimits(plot, latest.current.data.limits, page.fail)] },
  };
}

/** One band of curves. New data are fed in; the plot is built anew only when its lines or the theme change. */
export function RibbonPlot(props: RibbonPlotProps) {
  const box = useRef<HTMLDivElement>(null);
  const plot = useRef<uPlot>(undefined);
  const latest = useRef(props);
  const isDark = useIsDark();
  const structure = structureOf(props.data);

  // In this order within one commit: what is newest, then a new plot if one is called for, then the data.
  useLayoutEffect(() => {
    latest.current = props;
  }, [props]);

  // biome-ignore lint/correctness/useExhaustiveDependencies: the structure stands for all that calls for a new plot
  useLayoutEffect(() => {
    const holder = box.current;
    if (!holder) return;
    const size = holder.getBoundingClientRect();
    const made = new uPlot(optionsFor(latest, isDark, size), columns(latest.current.data), holder);
    plot.current = made;
    const sizes = new ResizeObserver(() => {
      const { width, height } = holder.getBoundingClientRect();
      if (width > 0 && height > 0) made.setSize({ width, height });
    });
    sizes.observe(holder);
    return () => {
      sizes.disconnect();
      made.destroy();
      plot.current = undefined;
    };
  }, [structure, isDark, props.hasTimeAxis]);

  useLayoutEffect(() => {
    plot.current?.setData(columns(props.data));
  }, [props.data]);

  return (
    <figure className="plot" aria-label={`${props.data.title} over time, ${props.data.unit}`}>
      <figcaption className="plot-head">
        <b>{props.data.title}</b>
        <Readouts data={props.data} />
      </figcaption>
      <div className="plot-box" ref={box} />
    </figure>
  );
}

/** The curves' values at the playhead, each beside a sample of its line. Written straight to the page, frame by frame. */
function Readouts({ data }: { readonly data: RibbonPlotData }) {
  const isDark = useIsDark();
  const holder = useRef<HTMLSpanElement>(null);
  const named = data.curves.filter(
    (curve, index) => data.curves.findIndex((other) => other.label === curve.label) === index,
  );

  useEffect(() => {
    const write = (): void => {
      const at = indexAt(data.time, stream.seconds);
      holder.current?.querySelectorAll('output').forEach((output, index) => {
        const value = named[index]?.values[at];
        const text = value === null || value === undefined ? '–' : formatNumber(value, 3);
        if (output.textContent !== text) output.textContent = text;
      });
    };
    write();
    return stream.onFrame(write);
  });

  return (
    <span className="readouts" ref={holder}>
      {named.map((curve) => {
        const style = curveStyle(curve.look, isDark);
        return (
          <span key={curve.label}>
            <svg width="26" height="10" aria-hidden>
              <line
                x1="0"
                y1="5"
                x2="26"
                y2="5"
                stroke={style.stroke}
                strokeWidth={style.width}
                strokeDasharray={style.dash.join(' ')}
              />
            </svg>
            {curve.label} <output aria-live="off" />
          </span>
        );
      })}
      <span>{data.unit}</span>
    </span>
  );
}
