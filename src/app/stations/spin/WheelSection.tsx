import { useId } from 'react';
import type { StressRow } from '../../../core/physics';
import type { WheelPart } from '../../../core/rig';
import { showQuantity } from '../../sheet/showFigure';
import { useSession } from '../../state/session';
import { outlineWheel, type PartShape, STRESS_BANDS, stressBand } from './wheelOutline';

/** The drawing's own measure; it is scaled to the width of the sheet, where one of these is about a pixel. */
const WIDTH = 320;
const MARGIN_LEFT = 12;
const MARGIN_RIGHT = 78;
const MARGIN_TOP = 30;
const MARGIN_BOTTOM = 34;
const MOST_HEIGHT = 170;
const LEAST_HEIGHT = 22;

interface WheelSectionProps {
  readonly parts: readonly WheelPart[];
  readonly stress: readonly StressRow[];
  readonly selected: number | undefined;
  readonly onSelect: (part: number) => void;
}

interface Place {
  readonly x: (radius: number) => number;
  readonly y: (height: number) => number;
  readonly scale: number;
}

/** Section of the wheel through its axis: parts numbered, hatched the closer the harder they are worked, dimensioned. */
export function WheelSection({ parts, stress, selected, onSelect }: WheelSectionProps) {
  const id = useId();
  const unit = useSession((session) => session.units.length);
  const outline = outlineWheel(parts);
  const length = (value: number): string => showQuantity(value, 'length', unit);
  const across = WIDTH - MARGIN_LEFT - MARGIN_RIGHT;
  const span = Math.max(outline.high - outline.low, 1e-4);
  const scale = Math.min(across / (2 * outline.outerRadius), MOST_HEIGHT / span);
  const height = Math.max(LEAST_HEIGHT, span * scale);
  const axis = MARGIN_LEFT + across / 2;
  const middle = MARGIN_TOP + height / 2;
  const mean = (outline.low + outline.high) / 2;
  const place: Place = {
    scale,
    x: (radius) => axis + radius * scale,
    y: (along) => middle - (along - mean) * scale,
  };
  const total = MARGIN_TOP + height + MARGIN_BOTTOM;
  const share = (part: number): number =>
    Math.max(0, ...stress.filter((row) => row.part === part).map((row) => 1 - row.spare));
  const worst = stress[0];
  const edge = outline.outerRadius;

  return (
    <figure className="wheel-section">
      <svg
        viewBox={`0 0 ${WIDTH} ${total}`}
        role="img"
        aria-label={`Section of the wheel: ${length(2 * edge)} across, ${length(span)} along the axis, ${parts.length} parts${
          worst ? `, part ${worst.part + 1} worked hardest` : ''
        }`}
      >
        <defs>
          {STRESS_BANDS.map((band, index) => (
            <Hatch key={band.words} id={`${id}-${index}`} band={index} />
          ))}
        </defs>
        {outline.shapes.map((shape, index) => (
          <PartDrawing
            // A part's place in the stack is its name.
            // biome-ignore lint/suspicious/noArrayIndexKey: see above
            key={index}
            shape={shape}
            place={place}
            fill={`url(#${id}-${stressBand(share(index))})`}
            isSelected={index === selected}
            isOver={share(index) > 1}
            onSelect={() => onSelect(index)}
          />
        ))}
        <path className="wheel-axis" d={`M${axis} ${MARGIN_TOP - 14}V${MARGIN_TOP + height + 8}`} />
        {outline.shapes.map((shape, index) => (
          <PartNumber
            // biome-ignore lint/suspicious/noArrayIndexKey: as above
            key={index}
            number={index + 1}
            shape={shape}
            place={place}
          />
        ))}
        {outline.boreRadius > 0 && (
          <Across
            left={place.x(-outline.boreRadius)}
            right={place.x(outline.boreRadius)}
            y={MARGIN_TOP - 9}
            words={`⌀ ${length(2 * outline.boreRadius)}`}
            isBeside
          />
        )}
        <Across
          left={place.x(-edge)}
          right={place.x(edge)}
          y={MARGIN_TOP + height + 20}
          words={`⌀ ${length(2 * edge)}`}
        />
        <Along
          x={place.x(edge) + 12}
          top={place.y(outline.high)}
          bottom={place.y(outline.low)}
          words={length(span)}
        />
      </svg>
      <figcaption>
        <span>Stress against what is allowed</span>
        <span className="band-row">
          {STRESS_BANDS.map((band, index) => (
            <span key={band.words}>
              <svg viewBox="0 0 24 16" width="24" height="16" aria-hidden>
                <rect x="0.5" y="0.5" width="23" height="15" fill={`url(#${id}-${index})`} />
              </svg>
              {band.words}
            </span>
          ))}
        </span>
      </figcaption>
    </figure>
  );
}

const SPACING = [0, 12, 7, 4.5, 5] as const;

/** Closer lines for more stress; crossed lines for too much. */
function Hatch({ id, band }: { readonly id: string; readonly band: number }) {
  const step = SPACING[band] ?? 0;
  const size = step || 8;
  return (
    <pattern
      id={id}
      className="band"
      data-band={band}
      width={size}
      height={size}
      patternUnits="userSpaceOnUse"
      patternTransform="rotate(45)"
    >
      <rect width={size} height={size} />
      {step > 0 && <path d={`M0 0V${size}`} />}
      {band === STRESS_BANDS.length - 1 && <path d={`M0 0H${size}`} />}
    </pattern>
  );
}

interface PartDrawingProps {
  readonly shape: PartShape;
  readonly place: Place;
  readonly fill: string;
  readonly isSelected: boolean;
  readonly isOver: boolean;
  readonly onSelect: () => void;
}

/** Both halves of a part. A tap picks it; the keyboard picks it in the list below, which names all parts. */
function PartDrawing({ shape, place, fill, isSelected, isOver, onSelect }: PartDrawingProps) {
  return (
    // biome-ignore lint/a11y/noStaticElementInteractions: a shortcut for the pointer; the list of parts is for the keyboard
    <g
      className="wheel-part"
      data-selected={isSelected || undefined}
      data-over={isOver || undefined}
      onClick={onSelect}
    >
      {[-1, 1].map((side) => (
        <HalfPart key={side} side={side} shape={shape} place={place} fill={fill} />
      ))}
    </g>
  );
}

function HalfPart({
  side,
  shape,
  place,
  fill,
}: {
  readonly side: number;
  readonly shape: PartShape;
  readonly place: Place;
  readonly fill: string;
}) {
  switch (shape.kind) {
    case 'ring': {
      const width = (shape.outer - shape.inner) * place.scale;
      const height = Math.max(1.5, (shape.high - shape.low) * place.scale);
      const x = side > 0 ? place.x(shape.inner) : place.x(-shape.outer);
      return <rect x={x} y={place.y(shape.high)} width={width} height={height} fill={fill} />;
    }
    case 'ball':
      return (
        <circle
          cx={place.x(side * shape.radius)}
          cy={place.y(shape.height)}
          r={(shape.size / 2) * place.scale}
          fill={fill}
        />
      );
    case 'bolt': {
      const x = place.x(side * shape.radius);
      const y = place.y(shape.height);
      return <path className="wheel-bolt" d={`M${x - 5} ${y - 7}h10v4h-3v10h-4v-10h-3z`} />;
    }
  }
}

/** Rings have their number on the right, balls on the left, bolts above: often they lie over one another. */
function numberPlace(shape: PartShape, place: Place): readonly [x: number, y: number] {
  switch (shape.kind) {
    case 'ring':
      return [place.x((shape.inner + shape.outer) / 2), place.y((shape.low + shape.high) / 2) + 4.5];
    case 'ball':
      return [place.x(-shape.radius), place.y(shape.height) + 4.5];
    case 'bolt':
      return [place.x(shape.radius), MARGIN_TOP - 6];
  }
}

function PartNumber({
  number,
  shape,
  place,
}: {
  readonly number: number;
  readonly shape: PartShape;
  readonly place: Place;
}) {
  const [x, y] = numberPlace(shape, place);
  return (
    <text className="wheel-number" x={x} y={y}>
      {number}
    </text>
  );
}

/** A dimension across the axis. Narrow ones have their words beside them. */
function Across(of: {
  readonly left: number;
  readonly right: number;
  readonly y: number;
  readonly words: string;
  readonly isBeside?: boolean;
}) {
  const { left, right, y, words, isBeside = false } = of;
  return (
    <g className="wheel-dimension">
      <path d={`M${left} ${y}H${right}M${left} ${y - 5}v10M${right} ${y - 5}v10`} />
      <text
        x={isBeside ? right + 7 : (left + right) / 2}
        y={isBeside ? y + 4.5 : y + 12.5}
        data-beside={isBeside}
      >
        {words}
      </text>
    </g>
  );
}

function Along(of: {
  readonly x: number;
  readonly top: number;
  readonly bottom: number;
  readonly words: string;
}) {
  const { x, top, bottom, words } = of;
  return (
    <g className="wheel-dimension">
      <path d={`M${x} ${top}V${bottom}M${x - 5} ${top}h10M${x - 5} ${bottom}h10`} />
      <text x={x + 6} y={(top + bottom) / 2 + 4.5} data-beside>
        {words}
      </text>
    </g>
  );
}
