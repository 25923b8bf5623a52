import { useFrame } from '@react-three/fiber';
import { useMemo, useRef } from 'react';
import {
  BufferGeometry,
  DoubleSide,
  Float32BufferAttribute,
  type Group,
  type Mesh,
  RingGeometry,
  type Sprite,
} from 'three';
import { convexHull } from '../../core/planning';
import { useGeometry } from './Inked';
import { rotateInto } from './legPose';
import { usePixelHeight, useTexture } from './StageLabel';
import { segmentsGeometry } from './shapes';
import { useStage } from './stageFrame';

/** Centre of mass with its plumb line, centre of pressure, and the ground the feet enclose. */
export function BalanceMarks() {
  return (
    <>
      <CentreOfMass />
      <CentreOfPressure />
      <Support />
    </>
  );
}

const DASHES = 24;

/** CSS pixels across. */
const COM_SIZE = 23;

/** The quartered disc that stands for a centre of mass on drawings, 128 pixels across. */
function drawQuarters(context: CanvasRenderingContext2D, ink: string, paper: string): void {
  const circle = (): void => {
    context.beginPath();
    context.arc(64, 64, 54, 0, 2 * Math.PI);
  };
  context.lineWidth = 7;
  context.fillStyle = paper;
  context.strokeStyle = ink;
  circle();
  context.fill();
  context.fillStyle = ink;
  for (const start of [0, Math.PI]) {
    context.beginPath();
    context.moveTo(64, 64);
    context.arc(64, 64, 54, start, start + Math.PI / 2);
    context.fill();
  }
  circle();
  context.stroke();
}

/** The quartered disc of drawings, always in sight, and a plumb line to the ground. */
function CentreOfMass() {
  const { frame, palette, size } = useStage();
  const pixel = usePixelHeight();
  const sprite = useRef<Sprite>(null);
  const plumb = useRef<Group>(null);
  const foot = useRef<Group>(null);
  const ink = `#${palette.ink.getHexString()}`;
  const paper = `#${palette.raised.getHexString()}`;
  const texture = useTexture((context) => drawQuarters(context, ink, paper), 128, 128, [ink, paper]);
  const line = useGeometry(() => {
    const points: number[] = [];
    for (let i = 0; i < DASHES; i++) points.push(0, 0, i / DASHES, 0, 0, (i + 0.55) / DASHES);
    return segmentsGeometry(points);
  }, []);
  const cross = useGeometry(() => {
    const r = 0.022 * size;
    return segmentsGeometry([-r, 0, 0, r, 0, 0, 0, -r, 0, 0, r, 0]);
  }, [size]);
  useFrame(() => {
    const [x, y, z] = frame.instant.centreOfMass;
    const isKnown = Number.isFinite(x);
    if (!sprite.current || !plumb.current || !foot.current) return;
    const floor = Number.isFinite(frame.instant.water) ? frame.instant.water : 0;
    sprite.current.visible = isKnown;
    plumb.current.visible = isKnown;
    foot.current.visible = isKnown;
    sprite.current.position.set(x, y, z);
    plumb.current.position.set(x, y, floor);
    plumb.current.scale.z = z - floor || 1e-6;
    foot.current.position.set(x, y, floor + 0.001 * size);
  });
  return (
    <>
      <sprite ref={sprite} scale={COM_SIZE * pixel} renderOrder={20}>
        <spriteMaterial
          map={texture}
          sizeAttenuation={false}
          depthTest={false}
          depthWrite={false}
          transparent
        />
      </sprite>
      <group ref={plumb}>
        <lineSegments geometry={line} renderOrder={19}>
          <lineBasicMaterial color={palette.ink} transparent opacity={0.75} depthTest={false} />
        </lineSegments>
      </group>
      <group ref={foot}>
        <lineSegments geometry={cross} renderOrder={12}>
          <lineBasicMaterial color={palette.ink} depthTest={false} transparent />
        </lineSegments>
      </group>
    </>
  );
}

/** A ring with a dot, flat on the ground where the load goes through it. */
function CentreOfPressure() {
  const { frame, palette, size } = useStage();
  const group = useRef<Group>(null);
  const ring = useGeometry(() => new RingGeometry(0.016 * size, 0.022 * size, 28), [size]);
  const dot = useGeometry(() => new RingGeometry(0, 0.006 * size, 16), [size]);
  useFrame(() => {
    const [x, y] = frame.instant.centreOfPressure;
    if (!group.current) return;
    group.current.visible = Number.isFinite(x);
    if (Number.isFinite(x)) group.current.position.set(x, y, 0.0015 * size);
  });
  const material = (
    <meshBasicMaterial
      color={palette.chosen}
      side={DoubleSide}
      depthTest={false}
      transparent
      opacity={0.95}
    />
  );
  return (
    <group ref={group}>
      <mesh geometry={ring} renderOrder={14}>
        {material}
      </mesh>
      <mesh geometry={dot} renderOrder={14}>
        {material}
      </mesh>
    </group>
  );
}

const MOST_CORNERS = 32;

/** Where the body touches the ground at rest: contact points in the frame of each foot, m, x y. */
function useTouching(): { offsets: readonly (readonly [number, number])[]; count: number } {
  const { rig } = useStage();
  return useMemo(() => {
    if (rig.body.kind !== 'legged') return { offsets: [], count: 0 };
    const x = rig.body.foot.length / 2;
    const y = rig.body.foot.width / 2;
    const offsets: [number, number][] = [
      [x, y],
      [-x, y],
      [-x, -y],
      [x, -y],
    ];
    return { offsets, count: rig.body.legs };
  }, [rig]);
}

/** The outline of the feet that are down, drawn anew only when it changes. */
function Support() {
  const { frame, palette, size } = useStage();
  const { offsets, count } = useTouching();
  const mesh = useRef<Mesh>(null);
  const shapes = useGeometry(() => {
    const fill = new BufferGeometry();
    fill.setAttribute('position', new Float32BufferAttribute(new Float32Array(9 * MOST_CORNERS), 3));
    const line = new BufferGeometry();
    line.setAttribute('position', new Float32BufferAttribute(new Float32Array(6 * MOST_CORNERS), 3));
    return {
      fill,
      line,
      dispose: () => {
        fill.dispose();
        line.dispose();
      },
    };
  }, []);
  const drawn = useRef('');
  const corner = useMemo(() => new Float64Array(3), []);
  useFrame(() => {
    const { pose, feet, isFootDown } = frame.instant;
    let key = '';
    for (let i = 0; i < count; i++)
      if (isFootDown[i]) key += `${feet[3 * i].toFixed(4)},${feet[3 * i + 1].toFixed(4)};`;
    key += offsets.join();
    if (key === drawn.current) return;
    drawn.current = key;
    const points: number[] = [];
    for (let i = 0; i < count; i++) {
      if (!isFootDown[i]) continue;
      for (const [x, y] of offsets) {
        rotateInto(pose, x, y, 0, corner);
        points.push(feet[3 * i] + corner[0], feet[3 * i + 1] + corner[1]);
      }
    }
    outline(points, shapes.fill, shapes.line);
  });
  if (count === 0) return null;
  return (
    <group position={[0, 0, 0.0008 * size]}>
      <mesh ref={mesh} geometry={shapes.fill} renderOrder={-1} frustumCulled={false}>
        <meshBasicMaterial
          color={palette.chosen}
          side={DoubleSide}
          transparent
          opacity={0.14}
          depthWrite={false}
        />
      </mesh>
      <lineSegments geometry={shapes.line} renderOrder={0} frustumCulled={false}>
        <lineBasicMaterial color={palette.chosen} transparent opacity={0.9} depthWrite={false} />
      </lineSegments>
    </group>
  );
}

/** Writes the convex outline of ground points into a fan of triangles and a ring of lines. */
function outline(points: readonly number[], fill: BufferGeometry, line: BufferGeometry): void {
  const hull = points.length >= 2 ? convexHull(points) : new Float64Array(0);
  const corners = Math.min(MOST_CORNERS, hull.length / 2);
  const fan = fill.getAttribute('position');
  const ring = line.getAttribute('position');
  for (let i = 0; i < corners; i++) {
    const j = (i + 1) % corners;
    ring.setXYZ(2 * i, hull[2 * i], hull[2 * i + 1], 0);
    ring.setXYZ(2 * i + 1, hull[2 * j], hull[2 * j + 1], 0);
    fan.setXYZ(3 * i, hull[0], hull[1], 0);
    fan.setXYZ(3 * i + 1, hull[2 * i], hull[2 * i + 1], 0);
    fan.setXYZ(3 * i + 2, hull[2 * j], hull[2 * j + 1], 0);
  }
  fan.needsUpdate = true;
  ring.needsUpdate = true;
  fill.setDrawRange(0, 3 * corners);
  line.setDrawRange(0, 2 * corners);
}
