import { useFrame } from '@react-three/fiber';
import { useMemo, useRef } from 'react';
import {
  BufferGeometry,
  type Color,
  DoubleSide,
  Float32BufferAttribute,
  type LineSegments,
  type Mesh,
  SphereGeometry,
} from 'three';
import { wheelProperties } from '../../core/physics';
import { type EnvelopeSurface, envelopeShape } from './envelopeSurface';
import { noRaycast, useGeometry } from './Inked';
import { segmentsGeometry } from './shapes';
import { useStage } from './stageFrame';

/** Shares of the rig's size between which the envelope's reach is kept. */
const LEAST = 0.25;
const MOST = 0.5;
/** As long as the momentum arrow is at the most (QuantityArrows), as a share of the rig's size. */
const ARROW = 0.28;

interface MomentumEnvelopeProps {
  readonly areInnerShown: boolean;
  /** N*m*s at tilts set by hand; the motion's where there is none. */
  readonly momentum: readonly [number, number, number] | undefined;
}

/** The momentum the array can hold in each direction, and where within it the array stands now. */
export function MomentumEnvelope({ areInnerShown, momentum }: MomentumEnvelopeProps) {
  const { rig, frame, palette, size, scales } = useStage();
  const ball = useRef<Mesh>(null);
  const line = useRef<LineSegments>(null);
  const { gyros } = rig.array;
  const shape = useMemo(() => {
    const momenta = gyros.map(({ wheel, speed }) => {
      const outcome = wheelProperties(wheel.parts);
      return outcome.kind === 'wheel' ? outcome.wheel.spinInertia * speed : 0;
    });
    return envelopeShape(gyros, momenta);
  }, [gyros]);
  // To the scale of the momentum arrow, unless that would hide the rig or be too small to see.
  const reach = shape?.reach ?? 1;
  const byArrow = (ARROW * size * reach) / scales.momentum.full;
  const scale = Math.min(MOST * size, Math.max(LEAST * size, byArrow)) / reach;
  const dot = useGeometry(() => new SphereGeometry(0.014 * size, 16, 12), [size]);
  const spoke = useGeometry(() => segmentsGeometry([0, 0, 0, 1, 1, 1]), []);
  useFrame(() => {
    const now = momentum ?? frame.instant.momentum;
    const [x, y, z] = [scale * now[0], scale * now[1], scale * now[2]];
    ball.current?.position.set(x, y, z);
    // The line's far end is at one along each axis; an axis without extent keeps its matrix whole.
    line.current?.scale.set(x || 1e-9, y || 1e-9, z || 1e-9);
  });
  if (!shape) return null;
  const colour = palette.marks.momentum;
  return (
    <group>
      <Surface surface={shape.outer} scale={scale} colour={colour} fill={0.1} stroke={0.35} />
      {areInnerShown &&
        shape.inner.map((surface, k) => (
          // biome-ignore lint/suspicious/noArrayIndexKey: the surfaces have an order and nothing else.
          <Surface key={k} surface={surface} scale={scale} colour={palette.soft} fill={0.03} stroke={0.3} />
        ))}
      <lineSegments ref={line} geometry={spoke} raycast={noRaycast} renderOrder={17} frustumCulled={false}>
        <lineBasicMaterial color={colour} depthTest={false} transparent />
      </lineSegments>
      <mesh ref={ball} geometry={dot} raycast={noRaycast} renderOrder={18}>
        <meshBasicMaterial color={colour} depthTest={false} transparent />
      </mesh>
    </group>
  );
}

interface SurfaceProps {
  readonly surface: EnvelopeSurface;
  /** m to a N*m*s. */
  readonly scale: number;
  readonly colour: Color;
  readonly fill: number;
  readonly stroke: number;
}

function geometryOf(points: Float64Array, index: readonly number[]): BufferGeometry {
  const geometry = new BufferGeometry();
  // A point that is not there is in no triangle and no line, but must not spoil the bounds.
  const clean = Float32Array.from(points, (value) => (Number.isFinite(value) ? value : 0));
  geometry.setAttribute('position', new Float32BufferAttribute(clean, 3));
  geometry.setIndex([...index]);
  return geometry;
}

function Surface({ surface, scale, colour, fill, stroke }: SurfaceProps) {
  const mesh = useGeometry(() => geometryOf(surface.points, surface.triangles), [surface]);
  const lines = useGeometry(() => geometryOf(surface.points, surface.lines), [surface]);
  return (
    <group scale={scale}>
      <mesh geometry={mesh} raycast={noRaycast} renderOrder={5}>
        <meshBasicMaterial color={colour} side={DoubleSide} transparent opacity={fill} depthWrite={false} />
      </mesh>
      <lineSegments geometry={lines} raycast={noRaycast} renderOrder={6}>
        <lineBasicMaterial color={colour} transparent opacity={stroke} depthWrite={false} />
      </lineSegments>
    </group>
  );
}
