import type { Layout } from '../../../core/rig';

/** A wheel seen from the side: rim, spin axis through it, and the gimbal's pivots. */
function Wheel({ x, y, turn }: { readonly x: number; readonly y: number; readonly turn: number }) {
  return (
    <g transform={`translate(${x} ${y}) rotate(${turn})`}>
      <ellipse rx="9" ry="3" />
      <path d="M0 -7V7" />
    </g>
  );
}

const WHEELS: Readonly<Record<Layout, readonly { x: number; y: number; turn: number }[]>> = {
  single: [{ x: 28, y: 14, turn: -18 }],
  'scissored pair': [
    { x: 16, y: 14, turn: -18 },
    { x: 40, y: 14, turn: 18 },
  ],
  'two pairs': [
    { x: 14, y: 9, turn: -18 },
    { x: 42, y: 9, turn: 18 },
    { x: 21, y: 20, turn: 72 },
    { x: 35, y: 20, turn: 108 },
  ],
  pyramid: [
    { x: 12, y: 18, turn: -55 },
    { x: 23, y: 10, turn: -35 },
    { x: 33, y: 10, turn: 35 },
    { x: 44, y: 18, turn: 55 },
  ],
  'reaction wheel': [{ x: 28, y: 14, turn: 90 }],
};

/** A small drawing of where a layout puts its wheels. */
export function LayoutPicture({ layout }: { readonly layout: Layout }) {
  return (
    <svg className="layout-picture" viewBox="0 0 56 28" width="56" height="28" aria-hidden>
      {WHEELS[layout].map((wheel) => (
        <Wheel key={`${wheel.x}-${wheel.y}`} {...wheel} />
      ))}
    </svg>
  );
}
