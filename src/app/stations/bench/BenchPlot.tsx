import { type PointerEvent, useLayoutEffect, useRef, useState } from 'react';
import uPlot from 'uplot';
import 'uplot/dist/uPlot.min.css';
import { curveStyle } from '../../ribbon/curveStyle';
import { useIsDark } from '../../state/looks';
import { PAGE_COLOURS } from '../../styles/quantityMarks';

export type BenchLook = 'measured' | 'predicted' | 'residual' | 'second' | 'third';

export interface BenchCurve {
  readonly label: string;
  readonly look: BenchLook;
  readonly time: ArrayLike<number>;
  /** In the unit shown; NaN is a gap. */
  readonly values: ArrayLike<number>;
}

export interface BenchPlotProps {
  /** What is plotted, in words. */
  readonly title: string;
  readonly unit: string;
  readonly curves: readonly BenchCurve[];
  readonly height?: number;
  /** Ends of the horizontal axis; the curves' own when absent. */
  readonly span?: readonly [number, number] | undefined;
  readonly acrossUnit?: string;
  /** Both axes by powers of ten. */
  readonly isLogarithmic?: boolean;
  /** A stretch was dragged out; without it the plot is only looked at. */
  readonly onStretch?: ((from: number, to: number) => void) | undefined;
}

const FONT = '12px "Public Sans Variable", sans-serif';
const GUTTER = 52;

function styleOf(look: BenchLook, isDark: boolean): { stroke: string; width: number; dash: number[] } {
  switch (look) {
    case 'measured':
      return { stroke: curveStyle('lead', isDark).stroke, width: 1.25, dash: [] };
    case 'predicted': {
      const { stroke, width } = curveStyle('torque', isDark);
      return { stroke, width, dash: [9, 4] };
    }
    case 'residual':
      return { stroke: curveStyle('momentum', isDark).stroke, width: 1.25, dash: [] };
    case 'second':
      return { stroke: curveStyle('momentum', isDark).stroke, width: 1.5, dash: [8, 3] };
    case 'third':
      return { stroke: curveStyle('leak', isDark).stroke, width: 1.5, dash: [2, 3] };
  }
}

const tick = (value: number): string => {
  const size = Math.abs(value);
  const text = size !== 0 && (size >= 1e5 || size < 1e-3) ? size.toExponential(0) : String(size);
  return value < 0 ? `−${text}` : text;
};

/** All curves on one axis. NaN becomes a gap; where another curve has no point the line goes on. */
function joinCurves(curves: readonly BenchCurve[]): uPlot.AlignedData {
  const tables = curves.map(
    ({ time, values }) =>
      [
        Array.from(time),
        Array.from(values, (value) => (Number.isFinite(value) ? value : null)),
      ] as uPlot.AlignedData,
  );
  return tables.length === 1 ? (tables[0] as uPlot.AlignedData) : uPlot.join(tables);
}

function optionsFor(latest: { readonly current: BenchPlotProps }, isDark: boolean, width: number) {
  const page = isDark ? PAGE_COLOURS.dark : PAGE_COLOURS.light;
  const { curves, height = 170, isLogarithmic = false } = latest.current;
  const distr = isLogarithmic ? 3 : 1;
  const axis = { stroke: page.soft, font: FONT, ticks: { show: false } };
  const grid = { stroke: page.line, width: 1 };
  const options: uPlot.Options = {
    width: Math.max(80, width),
    height,
    padding: [8, 10, 0, 0],
    legend: { show: false },
    cursor: { show: false },
    scales: {
      x: {
        time: false,
        distr,
        ...(isLogarithmic ? {} : { range: (_, low, high) => [...(latest.current.span ?? [low, high])] }),
      },
      y: { distr },
    },
    axes: [
      {
        ...axis,
        grid,
        size: 22,
        gap: 2,
        values: (_, ticks) =>
          ticks.map((at) => (at === null ? '' : `${tick(at)} ${latest.current.acrossUnit ?? 's'}`)),
      },
      {
        ...axis,
        grid,
        size: GUTTER,
        gap: 4,
        space: 22,
        values: (_, ticks) => ticks.map((at) => (at === null ? '' : tick(at))),
      },
    ],
    series: [
      {},
      ...curves.map((curve) => ({
        ...styleOf(curve.look, isDark),
        points: { show: false },
        label: curve.label,
      })),
    ],
  };
  return options;
}

/** Curves over time in the sheet: measured unbroken, predicted dashed. A stretch can be dragged out of it. */
export function BenchPlot(props: BenchPlotProps) {
  const box = useRef<HTMLDivElement>(null);
  const plot = useRef<uPlot>(undefined);
  const latest = useRef(props);
  const isDark = useIsDark();
  const { curves, height = 170, isLogarithmic = false, title, unit } = props;
  const structure = `${height}|${isLogarithmic}|${curves.map(({ look, label }) => look + label).join('|')}`;

  useLayoutEffect(() => {
    latest.current = props;
  });

  // biome-ignore lint/correctness/useExhaustiveDependencies: the structure stands for all that calls for a new plot
  useLayoutEffect(() => {
    const holder = box.current;
    if (!holder) return;
    const made = new uPlot(
      optionsFor(latest, isDark, holder.clientWidth),
      joinCurves(latest.current.curves),
      holder,
    );
    plot.current = made;
    const sizes = new ResizeObserver(() => {
      if (holder.clientWidth > 0) made.setSize({ width: holder.clientWidth, height });
    });
    sizes.observe(holder);
    return () => {
      sizes.disconnect();
      made.destroy();
      plot.current = undefined;
    };
  }, [structure, isDark]);

  useLayoutEffect(() => {
    plot.current?.setData(joinCurves(curves));
  }, [curves]);

  return (
    <figure className="bench-plot" aria-label={`${title}, ${unit}`}>
      <figcaption>
        <b>{title}</b>
        <span>
          {curves.map((curve) => (
            <Key key={curve.label} curve={curve} isDark={isDark} />
          ))}
          <span>{unit}</span>
        </span>
      </figcaption>
      <div className="bench-plot-box" style={{ height }}>
        <div ref={box} />
        {props.onStretch && <Stretcher plot={plot} onStretch={props.onStretch} />}
      </div>
    </figure>
  );
}

function Key({ curve, isDark }: { readonly curve: BenchCurve; readonly isDark: boolean }) {
  const style = styleOf(curve.look, isDark);
  return (
    <span>
      <svg width="24" height="10" aria-hidden>
        <line
          x1="0"
          y1="5"
          x2="24"
          y2="5"
          stroke={style.stroke}
          strokeWidth={style.width}
          strokeDasharray={style.dash.join(' ')}
        />
      </svg>
      {curve.label}
    </span>
  );
}

interface StretcherProps {
  readonly plot: { readonly current: uPlot | undefined };
  readonly onStretch: (from: number, to: number) => void;
}

/** Takes the drag, by mouse, pen or finger; up and down still scrolls the sheet. */
function Stretcher({ plot, onStretch }: StretcherProps) {
  const start = useRef<number>(undefined);
  const [stretch, setStretch] = useState<readonly [number, number]>();
  const placeOf = (event: PointerEvent<HTMLDivElement>): number => {
    const box = event.currentTarget.getBoundingClientRect();
    return Math.max(GUTTER, Math.min(box.width - 10, event.clientX - box.left));
  };
  const drop = (): void => {
    start.current = undefined;
    setStretch(undefined);
  };
  return (
    <div
      className="bench-stretcher"
      data-testid="stretcher"
      onPointerDown={(event) => {
        event.currentTarget.setPointerCapture(event.pointerId);
        start.current = placeOf(event);
      }}
      onPointerMove={(event) => {
        if (start.current === undefined) return;
        const at = placeOf(event);
        setStretch([Math.min(start.current, at), Math.max(start.current, at)]);
      }}
      onPointerUp={() => {
        const drawn = plot.current;
        if (drawn && stretch && stretch[1] - stretch[0] > 6) {
          const valueAt = (pixel: number): number => drawn.posToVal(pixel - drawn.over.offsetLeft, 'x');
          onStretch(valueAt(stretch[0]), valueAt(stretch[1]));
        }
        drop();
      }}
      onPointerCancel={drop}
    >
      {stretch && <div style={{ left: stretch[0], width: stretch[1] - stretch[0] }} />}
    </div>
  );
}
