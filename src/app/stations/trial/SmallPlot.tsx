interface SmallPlotProps {
  readonly label: string;
  readonly look: 'lean' | 'tilt';
  readonly time: Float64Array;
  readonly values: Float64Array;
  readonly stride?: number;
  /** Half height in the unit of the values. */
  readonly most: number;
}

const WIDTH = 200;
const HEIGHT = 44;
const MOST_POINTS = 200;

/** One curve about its zero line, without scales: for comparing shapes side by side. */
export function SmallPlot({ label, look, time, values, stride = 1, most }: SmallPlotProps) {
  const length = time.at(-1) || 1;
  const every = Math.max(1, Math.ceil(time.length / MOST_POINTS));
  const points: string[] = [];
  for (let k = 0; k < time.length; k += every) {
    const value = Math.max(-1.5, Math.min(1.5, (values[k * stride] ?? 0) / most));
    points.push(
      `${((WIDTH * (time[k] as number)) / length).toFixed(1)},${((HEIGHT / 2) * (1 - value)).toFixed(1)}`,
    );
  }
  return (
    <svg className="small-plot" viewBox={`0 0 ${WIDTH} ${HEIGHT}`} role="img" aria-label={label}>
      <line className="small-plot-zero" x1="0" y1={HEIGHT / 2} x2={WIDTH} y2={HEIGHT / 2} />
      <polyline className={`small-plot-${look}`} points={points.join(' ')} />
    </svg>
  );
}
