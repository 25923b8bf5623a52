import { useFrame } from '@react-three/fiber';
import { useRef } from 'react';
import { Color, Float32BufferAttribute, type Group, PlaneGeometry } from 'three';
import { useCell } from './cell';
import { useGeometry } from './Inked';
import { Label, useTexture } from './StageLabel';
import { segmentsGeometry } from './shapes';
import { useStage } from './stageFrame';

/** Cells of the grid to either side of its middle. */
const CELLS = 12;

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

const AXIS_NAMES = ['x', 'y'] as const;

/** Share of a cell within which a name would lie on a mark. */
const ROOM = 0.9;

/** The ground on land: a quiet grid that goes along with the body by whole cells. */
export function Ground() {
  const { frame, palette, size } = useStage();
  const group = useRef<Group>(null);
  const { step, words } = useCell();
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
        <AxisName
          key={name}
          text={name === 'x' ? `x  ${words}` : 'y'}
          at={i === 0 ? [1.06 * step, 0, 0] : [0, 1.08 * step, 0]}
          room={ROOM * step}
        />
      ))}
    </>
  );
}

interface AxisNameProps {
  readonly text: string;
  readonly at: readonly [number, number, number];
  /** m. */
  readonly room: number;
}

/** The name of an axis on the ground; gives way to the marks of the balance while they are near. */
function AxisName({ text, at, room }: AxisNameProps) {
  const { frame } = useStage();
  const group = useRef<Group>(null);
  useFrame(() => {
    if (!group.current) return;
    const { centreOfPressure, centreOfMass } = frame.instant;
    const isNear = (mark: ArrayLike<number>): boolean => Math.hypot(mark[0] - at[0], mark[1] - at[1]) < room;
    group.current.visible = !isNear(centreOfPressure) && !isNear(centreOfMass);
  });
  return (
    <group ref={group}>
      <Label text={text} at={at} />
    </group>
  );
}

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
