import { useFrame, useThree } from '@react-three/fiber';
import { useEffect, useMemo, useRef } from 'react';
import {
  CanvasTexture,
  Color,
  DoubleSide,
  Float32BufferAttribute,
  type Group,
  PlaneGeometry,
  SRGBColorSpace,
} from 'three';
import { formatQuantity } from '../../core/units';
import { useSession } from '../state/session';
import { GRID_LEADS, roundUp } from './arrowScale';
import { useGeometry } from './Inked';
import { segmentsGeometry } from './shapes';
import { FIELD_OF_VIEW, useStage } from './stageFrame';

/** Cells of the grid to either side of its middle. */
const CELLS = 12;

/** Side of a cell of the grid, m: a round length of about a sixth of the rig. */
export const gridStep = (size: number): number => roundUp(size / 7, GRID_LEADS);

/** Lines in x-y about the origin, each cut into cells so that they can fade towards the edge. */
function gridGeometry(step: number, line: Color, page: Color) {
  const points: number[] = [];
  const colours: number[] = [];
  const mixed = new Color();
  const add = (x: number, y: number): void => {
    points.push(x * step, y * step, 0);
    const fade = Math.min(1, Math.hypot(x, y) / CELLS) ** 1.5;
    mixed.lerpColors(line, page, fade).toArray(colours, colours.length);
  };
  for (let i = -CELLS; i <= CELLS; i++) {
    for (let k = -CELLS; k < CELLS; k++) {
      add(i, k);
      add(i, k + 1);
      add(k, i);
      add(k + 1, i);
    }
  }
  const geometry = segmentsGeometry(points);
  geometry.setAttribute('color', new Float32BufferAttribute(colours, 3));
  return geometry;
}

/** A canvas texture that goes when another takes its place. */
export function useTexture(
  draw: (context: CanvasRenderingContext2D) => void,
  width: number,
  height: number,
  inputs: readonly unknown[],
) {
  // biome-ignore lint/correctness/useExhaustiveDependencies: the caller names what the picture is drawn from.
  const texture = useMemo(() => {
    const canvas = document.createElement('canvas');
    canvas.width = width;
    canvas.height = height;
    const context = canvas.getContext('2d');
    if (context) draw(context);
    const made = new CanvasTexture(canvas);
    made.colorSpace = SRGBColorSpace;
    return made;
  }, [width, height, ...inputs]);
  useEffect(() => () => texture.dispose(), [texture]);
  return texture;
}

/** The side of a cell in words, in the unit chosen for lengths or else in the one that suits it. */
function useCellName(step: number): string {
  const chosen = useSession((state) => state.units.length);
  return formatQuantity(step, 'length', chosen ?? (step < 0.5 ? 'mm' : 'm'), 2);
}

const AXIS_NAMES = ['x', 'y'] as const;

/** The ground, or the floor of the picture below a hull: a quiet grid that goes along with the body by whole cells. */
export function Ground() {
  const { frame, palette, size } = useStage();
  const group = useRef<Group>(null);
  const step = gridStep(size);
  const cell = useCellName(step);
  const grid = useGeometry(() => gridGeometry(step, palette.line, palette.page), [step, palette]);
  const axes = useGeometry(() => segmentsGeometry([0, 0, 0, step, 0, 0, 0, 0, 0, 0, step, 0]), [step]);
  useFrame(() => {
    if (!group.current) return;
    const { pose } = frame.instant;
    group.current.position.set(Math.round(pose[0] / step) * step, Math.round(pose[1] / step) * step, 0);
  });
  const isAfloat = Number.isFinite(frame.instant.water);
  if (isAfloat) return null;
  return (
    <>
      <group ref={group}>
        <lineSegments geometry={grid} renderOrder={-3}>
          <lineBasicMaterial vertexColors depthWrite={false} />
        </lineSegments>
        <ContactShadow />
      </group>
      <lineSegments geometry={axes} position={[0, 0, 0.0004 * size]} renderOrder={-2}>
        <lineBasicMaterial color={palette.soft} depthWrite={false} />
      </lineSegments>
      {AXIS_NAMES.map((name, i) => (
        <Label
          key={name}
          text={name === 'x' ? `x  ${cell}` : 'y'}
          at={i === 0 ? [1.06 * step, 0, 0] : [0, 1.08 * step, 0]}
        />
      ))}
    </>
  );
}

/** CSS pixels. */
const LABEL_HEIGHT = 19;

/**
 * Size that makes a sprite of fixed screen size one CSS pixel high. Such a sprite is as large as if it stood one
 * unit from the eye, where the picture is 2 tan(fov / 2) high.
 */
export function usePixelHeight(): number {
  const height = useThree((state) => state.size.height);
  return (2 * Math.tan((FIELD_OF_VIEW * Math.PI) / 360)) / Math.max(1, height);
}

/** A word on the stage that keeps its size on the screen. */
export function Label({
  text,
  at,
}: {
  readonly text: string;
  readonly at: readonly [number, number, number];
}) {
  const { palette } = useStage();
  const pixel = usePixelHeight();
  const width = 24 * text.length + 24;
  const ink = `#${palette.soft.getHexString()}`;
  const texture = useTexture(
    (context) => {
      context.font = '500 36px "Public Sans Variable", system-ui, sans-serif';
      context.fillStyle = ink;
      context.textBaseline = 'middle';
      context.fillText(text, 4, 26);
    },
    width,
    52,
    [text, ink],
  );
  return (
    <sprite
      position={[...at]}
      center={ANCHOR}
      scale={[(pixel * LABEL_HEIGHT * width) / 52, pixel * LABEL_HEIGHT, 1]}
      renderOrder={8}
    >
      <spriteMaterial
        map={texture}
        sizeAttenuation={false}
        depthTest={false}
        depthWrite={false}
        transparent
      />
    </sprite>
  );
}

const ANCHOR = [0, 0.5] as const;

/** A soft dark patch where the body stands, instead of a shadow worked out from the lights. */
function ContactShadow() {
  const { box, palette } = useStage();
  const texture = useTexture(
    (context) => {
      const glow = context.createRadialGradient(64, 64, 4, 64, 64, 62);
      glow.addColorStop(0, 'rgba(0,0,0,0.85)');
      glow.addColorStop(0.45, 'rgba(0,0,0,0.4)');
      glow.addColorStop(1, 'rgba(0,0,0,0)');
      context.fillStyle = glow;
      context.fillRect(0, 0, 128, 128);
    },
    128,
    128,
    [],
  );
  const plane = useGeometry(() => new PlaneGeometry(1, 1), []);
  const wide = (axis: 0 | 1): number => 1.9 * (box.max[axis] - box.min[axis]);
  return (
    <mesh geometry={plane} scale={[wide(0), wide(1), 1]} renderOrder={-4}>
      <meshBasicMaterial map={texture} transparent opacity={palette.isDark ? 0.5 : 0.2} depthWrite={false} />
    </mesh>
  );
}

/** The surface of the water at the body's middle, at its height and slope. */
export function Water() {
  const { frame, palette, box, size } = useStage();
  const group = useRef<Group>(null);
  const step = gridStep(size);
  const cell = useCellName(step);
  const length = 1.35 * (box.max[0] - box.min[0]);
  // A whole number of cells to each side, so that the lines measure.
  const cells = Math.max(2, Math.round((1.2 * (box.max[1] - box.min[1])) / step));
  const width = 2 * cells * step;
  const sheet = useGeometry(() => new PlaneGeometry(length, width), [length, width]);
  const lines = useGeometry(() => {
    const points: number[] = [];
    for (let i = -cells; i <= cells; i++) points.push(-length / 2, i * step, 0, length / 2, i * step, 0);
    for (const end of [-1, 1])
      points.push((end * length) / 2, -width / 2, 0, (end * length) / 2, width / 2, 0);
    return segmentsGeometry(points);
  }, [length, width, cells, step]);
  const hasWater = Number.isFinite(frame.instant.water);
  useFrame(() => {
    if (!group.current) return;
    const { pose, water, waterSlope } = frame.instant;
    group.current.visible = Number.isFinite(water);
    group.current.position.set(pose[0], pose[1], Number.isFinite(water) ? water : 0);
    group.current.rotation.x = waterSlope;
  });
  return (
    <group ref={group}>
      <mesh geometry={sheet} renderOrder={1}>
        <meshBasicMaterial
          color={palette.water}
          side={DoubleSide}
          transparent
          opacity={0.3}
          depthWrite={false}
        />
      </mesh>
      <lineSegments geometry={lines} renderOrder={1}>
        <lineBasicMaterial color={palette.water} transparent opacity={0.5} depthWrite={false} />
      </lineSegments>
      {hasWater && <Label text={cell} at={[length / 2, (cells - 0.9) * step, 0]} />}
    </group>
  );
}
