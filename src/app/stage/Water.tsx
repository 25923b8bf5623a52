import { useFrame } from '@react-three/fiber';
import { useRef } from 'react';
import { DoubleSide, type Group, PlaneGeometry } from 'three';
import { useCell } from './cell';
import { useGeometry } from './Inked';
import { Label } from './StageLabel';
import { segmentsGeometry } from './shapes';
import { useStage } from './stageFrame';

/** The surface of the water at the body's middle, at its height and slope. */
export function Water() {
  const { frame, palette, box } = useStage();
  const group = useRef<Group>(null);
  const { step, words } = useCell();
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
          opacity={palette.isDark ? 0.26 : 0.24}
          depthWrite={false}
        />
      </mesh>
      <lineSegments geometry={lines} renderOrder={1}>
        <lineBasicMaterial color={palette.water} transparent opacity={0.5} depthWrite={false} />
      </lineSegments>
      {hasWater && <Label text={words} at={[length / 2, (cells - 0.9) * step, 0]} />}
    </group>
  );
}
