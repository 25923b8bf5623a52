import { formatNumber } from '../../../core/units';

interface DialHole {
  /** rad. */
  readonly angle: number;
  /** kg. */
  readonly mass: number;
}

interface BalanceDialProps {
  readonly name: string;
  /** kg at rad: the weight to add. */
  readonly mass: number;
  readonly angle: number;
  readonly holes: readonly DialHole[];
}

const MIDDLE = 110;
const RIM = 78;
const TICK_STEP = 30;

/** The wheel seen so that it turns anticlockwise: the mark on top, angles on in the direction of rotation. */
const place = (angle: number, radius: number): readonly [number, number] => [
  MIDDLE - radius * Math.sin(angle),
  MIDDLE - radius * Math.cos(angle),
];

/** Where the weight goes, on a small picture of the wheel. */
export function BalanceDial({ name, mass, angle, holes }: BalanceDialProps) {
  const grams = `${formatNumber(mass * 1e3, 3)} g`;
  const degrees = `${((angle * 180) / Math.PI).toFixed(1)}°`;
  const [x, y] = place(angle, RIM);
  const [inX, inY] = place(angle, 16);
  return (
    <svg
      className="balance-dial"
      viewBox="-14 0 248 220"
      role="img"
      aria-label={`${name}: ${grams} at ${degrees}`}
    >
      <circle className="dial-rim" cx={MIDDLE} cy={MIDDLE} r={RIM} />
      <circle className="dial-hub" cx={MIDDLE} cy={MIDDLE} r="8" />
      {Array.from({ length: 360 / TICK_STEP }, (_, k) => {
        const at = (k * TICK_STEP * Math.PI) / 180;
        const [x1, y1] = place(at, RIM + 4);
        const [x2, y2] = place(at, RIM + (k % 3 === 0 ? 12 : 8));
        const [tx, ty] = place(at, RIM + 21);
        return (
          <g key={at}>
            <line className="dial-tick" x1={x1} y1={y1} x2={x2} y2={y2} />
            {k % 3 === 0 && (
              <text className="dial-degrees" x={tx} y={ty + 4}>
                {k * TICK_STEP}°
              </text>
            )}
          </g>
        );
      })}
      <path className="dial-mark" d={`M${MIDDLE - 7} ${MIDDLE - RIM - 4}h14l-7 12z`} />
      <path className="dial-turn" d="M140 100a32 32 0 0 0-16-18M124 82l9 0M124 82l3 8.5" />
      {holes.map((hole) => {
        const [hx, hy] = place(hole.angle, RIM - 12);
        return (
          <circle key={hole.angle} className="dial-hole" data-used={hole.mass > 0} cx={hx} cy={hy} r="5" />
        );
      })}
      <line className="dial-arm" x1={inX} y1={inY} x2={x} y2={y} />
      <circle className="dial-weight" cx={x} cy={y} r="8" />
    </svg>
  );
}
