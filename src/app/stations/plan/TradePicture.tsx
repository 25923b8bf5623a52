import { type KeyboardEvent, type MouseEvent, useEffect, useRef } from 'react';
import type { TradeAsk, TradeCell } from '../../../core/planning';
import { useIsDark } from '../../state/looks';

interface TradePictureProps {
  readonly ask: TradeAsk;
  readonly rows: readonly (readonly TradeCell[] | undefined)[];
  readonly at: { readonly column: number; readonly row: number } | undefined;
  readonly onTap: (column: number, row: number) => void;
}

/** Canvas pixels of one cell. */
const CELL = 28;

/** Colour of a spare, light for little and dark for much, one hue so that it reads without colour; as in plan.css. */
export function spareColour(spare: number, isDark: boolean): string {
  const share = Math.min(1, Math.max(0, spare));
  return isDark ? `hsl(222 60% ${30 + 50 * share}%)` : `hsl(222 55% ${88 - 55 * share}%)`;
}

/** The map itself: spare as a shade, hatched where nothing can be planned, struck through where there is no such rig. */
export function TradePicture({ ask, rows, at, onTap }: TradePictureProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const isDark = useIsDark();
  useEffect(() => {
    const context = canvas.current?.getContext('2d');
    if (!context) return;
    context.clearRect(0, 0, ask.columns * CELL, ask.rows * CELL);
    rows.forEach((cells, row) => {
      cells?.forEach((cell, column) => {
        drawCell(context, cell, column * CELL, (ask.rows - 1 - row) * CELL, isDark);
      });
    });
    if (at) {
      context.lineWidth = 4;
      context.strokeStyle = isDark ? '#e6ecee' : '#18222b';
      context.strokeRect(at.column * CELL + 2, (ask.rows - 1 - at.row) * CELL + 2, CELL - 4, CELL - 4);
    }
  }, [ask, rows, at, isDark]);

  const tap = (event: MouseEvent<HTMLCanvasElement>): void => {
    // A press of Enter comes as a click without a place.
    if (event.detail === 0) return;
    const box = event.currentTarget.getBoundingClientRect();
    const column = Math.floor((ask.columns * (event.clientX - box.left)) / box.width);
    const row = ask.rows - 1 - Math.floor((ask.rows * (event.clientY - box.top)) / box.height);
    if (column >= 0 && column < ask.columns && row >= 0 && row < ask.rows) onTap(column, row);
  };
  const onKeyDown = (event: KeyboardEvent): void => {
    const from = at ?? { column: 0, row: 0 };
    const moves: Readonly<Record<string, readonly [number, number]>> = {
      ArrowLeft: [-1, 0],
      ArrowRight: [1, 0],
      ArrowUp: [0, 1],
      ArrowDown: [0, -1],
      Enter: [0, 0],
    };
    const move = moves[event.key];
    if (!move) return;
    event.preventDefault();
    onTap(
      Math.min(ask.columns - 1, Math.max(0, from.column + move[0])),
      Math.min(ask.rows - 1, Math.max(0, from.row + move[1])),
    );
  };
  const done = rows.filter((cells) => cells !== undefined).length;
  return (
    <button
      type="button"
      className="trade-picture"
      aria-label={`Trade map, ${done} of ${ask.rows} rows drawn; arrow keys go from cell to cell`}
      onKeyDown={onKeyDown}
    >
      <canvas ref={canvas} width={ask.columns * CELL} height={ask.rows * CELL} onClick={tap} />
    </button>
  );
}

function drawCell(
  context: CanvasRenderingContext2D,
  cell: TradeCell,
  x: number,
  y: number,
  isDark: boolean,
): void {
  const fail = isDark ? '#ff8a7a' : '#b3211c';
  const soft = isDark ? '#a3b0b7' : '#55616a';
  context.lineWidth = 2;
  if (cell.kind === 'planned' && cell.spare >= 0) {
    context.fillStyle = spareColour(cell.spare, isDark);
    context.fillRect(x, y, CELL - 1, CELL - 1);
    return;
  }
  if (cell.kind === 'planned') {
    // Planned, but a line of the ledger fails: one stroke across.
    context.strokeStyle = fail;
    strokes(context, x, y, [0.5]);
    context.strokeRect(x + 1, y + 1, CELL - 3, CELL - 3);
    return;
  }
  context.strokeStyle = cell.kind === 'impossible' ? fail : soft;
  if (cell.kind === 'impossible') strokes(context, x, y, [0.25, 0.5, 0.75]);
  else {
    context.beginPath();
    context.arc(x + CELL / 2, y + CELL / 2, 3, 0, 2 * Math.PI);
    context.stroke();
  }
}

/** Slanting strokes through the middle of a cell, or beside it, by shares of its width. */
function strokes(context: CanvasRenderingContext2D, x: number, y: number, at: readonly number[]): void {
  context.save();
  context.beginPath();
  context.rect(x, y, CELL - 1, CELL - 1);
  context.clip();
  context.beginPath();
  for (const share of at) {
    const middle = x + (2 * share - 0.5) * CELL;
    context.moveTo(middle - CELL / 2, y + CELL);
    context.lineTo(middle + CELL / 2, y);
  }
  context.stroke();
  context.restore();
}
