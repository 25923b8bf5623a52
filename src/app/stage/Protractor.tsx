import { useFrame } from '@react-three/fiber';
import { useRef } from 'react';
import { DoubleSide, type Group, Shape, ShapeGeometry } from 'three';
import type { Gyro } from '../../core/rig';
import { PROTRACTOR_RADIUS, PROTRACTOR_STANDS } from './cargoHandles';
import { noRaycast, useGeometry } from './Inked';
import { sectorGeometry, segmentsGeometry } from './shapes';
import { useStage } from './stageFrame';

const DEGREE = Math.PI / 180;

/** Ticks every fifteen degrees, longer every forty-five, between two angles from the x axis. */
function ticks(inner: number, outer: number, min: number, max: number): number[] {
  const points: number[] = [];
  for (let k = Math.ceil(min / (15 * DEGREE) - 1e-6); k * 15 * DEGREE <= max + 1e-9; k++) {
    const angle = k * 15 * DEGREE;
    const start = outer - (outer - inner) * (k % 3 === 0 ? 0.62 : 0.3);
    points.push(
      start * Math.cos(angle),
      start * Math.sin(angle),
      0,
      outer * Math.cos(angle),
      outer * Math.sin(angle),
      0,
    );
  }
  return points;
}

/** Outline of a flat needle along x, closed, as pairs of points; with a width and a length. */
const needleShape = (inner: number, outer: number, half: number): Shape => {
  const shape = new Shape();
  shape.moveTo(inner, -half);
  shape.lineTo(outer, 0);
  shape.lineTo(inner, half);
  shape.closePath();
  return shape;
};

interface ProtractorProps {
  readonly gyro: Gyro;
  readonly index: number;
  readonly radius: number;
}

/** Sector of the tilts allowed, about the gimbal axis, with its needles. */
export function Protractor({ gyro, index, radius }: ProtractorProps) {
  const { palette } = useStage();
  const outer = PROTRACTOR_RADIUS * radius;
  const inner = 0.62 * outer;
  const { min, max } = gyro.tilt;
  const sector = useGeometry(() => sectorGeometry(inner, outer, min, max), [inner, outer, min, max]);
  const marks = useGeometry(() => segmentsGeometry(ticks(inner, outer, min, max)), [inner, outer, min, max]);
  const stop = useGeometry(() => sectorGeometry(inner * 0.94, outer * 1.08, -0.022, 0.022), [inner, outer]);
  const lift = 0.012 * radius;
  return (
    <group position={[0, 0, PROTRACTOR_STANDS * radius]}>
      <mesh geometry={sector} renderOrder={4} userData={{ part: { kind: 'gyro', index } }}>
        <meshBasicMaterial
          color={palette.raised}
          side={DoubleSide}
          transparent
          opacity={0.86}
          depthWrite={false}
        />
      </mesh>
      <lineSegments geometry={marks} raycast={noRaycast} renderOrder={5} position={[0, 0, lift]}>
        <lineBasicMaterial color={palette.ink} transparent opacity={0.75} />
      </lineSegments>
      {[min, max].map((limit, end) => (
        <mesh
          key={end === 0 ? 'min' : 'max'}
          geometry={stop}
          rotation={[0, 0, limit]}
          renderOrder={5}
          position={[0, 0, lift]}
        >
          <meshBasicMaterial color={palette.ink} side={DoubleSide} />
        </mesh>
      ))}
      <Needles index={index} outer={outer} lift={lift} />
    </group>
  );
}

interface NeedleProps {
  readonly index: number;
  readonly outer: number;
  readonly lift: number;
}

/** The solid needle is the tilt now, the hollow one the plan's; without a plan there is none. */
function Needles({ index, outer, lift }: NeedleProps) {
  const { frame, palette } = useStage();
  const present = useRef<Group>(null);
  const planned = useRef<Group>(null);
  const solid = useGeometry(
    () => new ShapeGeometry(needleShape(0.12 * outer, outer * 1.04, 0.07 * outer)),
    [outer],
  );
  const hollow = useGeometry(() => {
    const shape = needleShape(0.12 * outer, outer * 1.16, 0.12 * outer);
    shape.holes.push(needleShape(0.17 * outer, outer * 0.86, 0.078 * outer));
    return new ShapeGeometry(shape);
  }, [outer]);

  useFrame(() => {
    if (present.current) present.current.rotation.z = frame.instant.tilt[index] ?? 0;
    if (planned.current) {
      const plan = frame.instant.plannedTilt[index];
      planned.current.visible = Number.isFinite(plan);
      if (Number.isFinite(plan)) planned.current.rotation.z = plan;
    }
  });

  return (
    <>
      <group ref={planned} position={[0, 0, 2 * lift]}>
        <mesh geometry={hollow} renderOrder={6}>
          <meshBasicMaterial color={palette.soft} side={DoubleSide} />
        </mesh>
      </group>
      <group ref={present} position={[0, 0, 3 * lift]}>
        <mesh geometry={solid} renderOrder={7}>
          <meshBasicMaterial color={palette.ink} side={DoubleSide} />
        </mesh>
      </group>
    </>
  );
}
