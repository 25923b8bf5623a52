interface CourseStripProps {
  readonly label: string;
  readonly time: ArrayLike<number>;
  /** Each as long as `time`. */
  readonly values: readonly ArrayLike<number>[];
  readonly names: readonly string[];
  readonly unit: string;
  readonly acrossUnit?: string;
}

const WIDTH = 300;
const HEIGHT = 96;
const TOP = 8;
const BOTTOM = 18;
const LEFT = 40;
/** Points drawn of a curve: as many as the strip has room for. */
const POINTS = 300;
const DASHES = ['', '6 4'] as const;

/** One or two curves over a common axis, small: for a look, not for reading off. */
export function CourseStrip({ label, time, values, names, unit, acrossUnit = 's' }: CourseStripProps) {
  const last = time.length - 1;
  const from = time[0] ?? 0;
  const to = time[last] ?? 1;
  let low = 0;
  let high = 0;
  for (const curve of values) {
    for (let k = 0; k <= last; k++) {
      low = Math.min(low, curve[k] ?? 0);
      high = Math.max(high, curve[k] ?? 0);
    }
  }
  const span = high - low || 1;
  const x = (k: number) => LEFT + ((WIDTH - LEFT - 4) * ((time[k] ?? 0) - from)) / (to - from || 1);
  const y = (value: number) => TOP + ((HEIGHT - TOP - BOTTOM) * (high - value)) / span;
  const stride = Math.max(1, Math.floor(last / POINTS));
  const pathOf = (curve: ArrayLike<number>): string => {
    let path = '';
    for (let k = 0; k <= last; k += stride) {
      path += `${k === 0 ? 'M' : 'L'}${x(k).toFixed(1)} ${y(curve[k] ?? 0).toFixed(1)}`;
    }
    return path;
  };
  return (
    <figure className="strip">
      <figcaption>
        {label}
        {names.length > 1 &&
          names.map((name, i) => (
            <span key={name}>
              <svg width="26" height="8" aria-hidden>
                <line x1="0" y1="4" x2="26" y2="4" className="strip-curve" strokeDasharray={DASHES[i]} />
              </svg>{' '}
              {name}
            </span>
          ))}
      </figcaption>
      <svg
        viewBox={`0 0 ${WIDTH} ${HEIGHT}`}
        role="img"
        aria-label={`${label}, from ${low.toPrecision(3)} to ${high.toPrecision(3)} ${unit}`}
      >
        <line x1={LEFT} x2={WIDTH - 4} y1={y(0)} y2={y(0)} className="strip-axis" />
        {values.map((curve, i) => (
          <path key={names[i]} d={pathOf(curve)} className="strip-curve" strokeDasharray={DASHES[i]} />
        ))}
        <text x={LEFT - 4} y={TOP + 8} textAnchor="end">
          {high.toPrecision(2)}
        </text>
        {low < 0 && (
          <text x={LEFT - 4} y={HEIGHT - BOTTOM} textAnchor="end">
            {low.toPrecision(2)}
          </text>
        )}
        <text x={LEFT} y={HEIGHT - 4}>
          {from.toPrecision(2)}
        </text>
        <text x={WIDTH - 4} y={HEIGHT - 4} textAnchor="end">
          {to.toPrecision(3)} {acrossUnit}
        </text>
      </svg>
    </figure>
  );
}
