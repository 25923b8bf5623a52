import { type KeyboardEvent, type PointerEvent, useEffect, useRef, useState } from 'react';
import { LAW_GAINS } from '../../../core/control';
import { type GainReport, mapAxes } from '../../../core/trial';
import { formatNumber } from '../../../core/units';
import type { GainMapView } from '../../../workers';
import { useIsDark } from '../../state/looks';
import { PAGE_COLOURS } from '../../styles/quantityMarks';
import { gainWord } from './ControlFields';

interface GainMapPictureProps {
  readonly map: GainMapView;
  readonly report: GainReport;
  readonly onTry: (gains: Float64Array) => void;
  readonly onTake: (gains: Float64Array) => void;
}

/** Share of the map's width that an arrow key moves the point. */
const KEY_STEP = 0.02;

/** Where two gains hold, the darker the surer; the present ones as a point that can be dragged or moved by keys. */
export function GainMapPicture({ map, report, onTry, onTake }: GainMapPictureProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const box = useRef<HTMLDivElement>(null);
  const isDark = useIsDark();
  const [across, up] = mapAxes(report.loop);
  const names = LAW_GAINS[report.loop.law];
  const [left, right] = [map.across[0] as number, map.across.at(-1) as number];
  const [bottom, top] = [map.up[0] as number, map.up.at(-1) as number];
  const [point, setPoint] = useState<readonly [number, number]>();
  const [x, y] = point ?? [report.gains[across] as number, report.gains[up] as number];
  const isDragging = useRef(false);

  // biome-ignore lint/correctness/useExhaustiveDependencies: other gains put the point where they are
  useEffect(() => setPoint(undefined), [report]);
  useEffect(() => {
    if (canvas.current) drawMap(canvas.current, map, isDark);
  }, [map, isDark]);

  const gainsAt = (px: number, py: number): Float64Array => {
    const gains = Float64Array.from(report.gains);
    gains[across] = px;
    gains[up] = py;
    return gains;
  };
  const move = (px: number, py: number): readonly [number, number] => {
    const clamp = (value: number, a: number, b: number): number =>
      Math.min(Math.max(value, Math.min(a, b)), Math.max(a, b));
    const next = [clamp(px, left, right), clamp(py, bottom, top)] as const;
    setPoint(next);
    onTry(gainsAt(...next));
    return next;
  };
  const placeOf = (event: PointerEvent): readonly [number, number] => {
    const area = (box.current as HTMLDivElement).getBoundingClientRect();
    return [
      left + ((event.clientX - area.left) / area.width) * (right - left),
      top - ((event.clientY - area.top) / area.height) * (top - bottom),
    ];
  };
  const onKeyDown = (event: KeyboardEvent): void => {
    const steps: Readonly<Record<string, readonly [number, number]>> = {
      ArrowLeft: [-1, 0],
      ArrowRight: [1, 0],
      ArrowUp: [0, 1],
      ArrowDown: [0, -1],
    };
    const step = steps[event.key];
    if (!step) return;
    event.preventDefault();
    onTake(
      gainsAt(...move(x + step[0] * KEY_STEP * (right - left), y + step[1] * KEY_STEP * (top - bottom))),
    );
  };

  const show = (value: number): string => formatNumber(value, 3);
  const acrossWord = gainWord(names[across] as string);
  const upWord = gainWord(names[up] as string);
  return (
    <figure className="gain-map">
      <figcaption>
        {upWord} ({show(bottom)} to {show(top)}) upwards, {acrossWord} ({show(left)} to {show(right)}) across.
        Shaded: holds, the darker the larger the margin.
      </figcaption>
      <div className="gain-map-box" ref={box}>
        <canvas ref={canvas} role="img" aria-label="Map of stable gains" />
        <button
          type="button"
          className="gain-point"
          aria-label={`Present gains: ${acrossWord} ${show(x)}, ${upWord} ${show(y)}. Drag, or move with the arrow keys.`}
          style={{
            left: `${(100 * (x - left)) / (right - left)}%`,
            top: `${(100 * (top - y)) / (top - bottom)}%`,
          }}
          onPointerDown={(event) => {
            isDragging.current = true;
            event.currentTarget.setPointerCapture(event.pointerId);
          }}
          onPointerMove={(event) => {
            if (isDragging.current) move(...placeOf(event));
          }}
          onPointerUp={(event) => {
            if (!isDragging.current) return;
            isDragging.current = false;
            onTake(gainsAt(...move(...placeOf(event))));
          }}
          onPointerCancel={() => {
            isDragging.current = false;
            setPoint(undefined);
          }}
          onKeyDown={onKeyDown}
        />
      </div>
      <p className="gain-map-now">
        {acrossWord} <b>{show(x)}</b>, {upWord} <b>{show(y)}</b>
      </p>
    </figure>
  );
}

/** One square a grid point: paper where it fails, the colour of momentum deepening with the margin where it holds. */
function drawMap(canvas: HTMLCanvasElement, map: GainMapView, isDark: boolean): void {
  const columns = map.across.length;
  const rows = map.up.length;
  const size = 6;
  canvas.width = columns * size;
  canvas.height = rows * size;
  const context = canvas.getContext('2d');
  if (!context) return;
  const page = isDark ? PAGE_COLOURS.dark : PAGE_COLOURS.light;
  context.clearRect(0, 0, canvas.width, canvas.height);
  const holds = isDark ? '143, 171, 255' : '47, 78, 161';
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      const value = map.value[r * columns + c] as number;
      if (!(value > 0)) continue;
      context.fillStyle = `rgba(${holds}, ${0.12 + 0.6 * Math.min(1, value)})`;
      context.fillRect(c * size, (rows - 1 - r) * size, size, size);
    }
  }
  drawBorder(context, map, page.fail);
}

function drawBorder(context: CanvasRenderingContext2D, map: GainMapView, colour: string): void {
  const { width, height } = context.canvas;
  const [left, right] = [map.across[0] as number, map.across.at(-1) as number];
  const [bottom, top] = [map.up[0] as number, map.up.at(-1) as number];
  context.strokeStyle = colour;
  context.lineWidth = 2;
  context.beginPath();
  let isOpen = false;
  for (let i = 0; i < map.border.length; i += 2) {
    const x = ((map.border[i] as number) - left) / (right - left);
    const y = ((map.border[i + 1] as number) - bottom) / (top - bottom);
    if (!Number.isFinite(x)) isOpen = false;
    else if (isOpen) context.lineTo(x * width, (1 - y) * height);
    else {
      context.moveTo(x * width, (1 - y) * height);
      isOpen = true;
    }
  }
  context.stroke();
}
