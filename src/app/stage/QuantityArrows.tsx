import { useFrame } from '@react-three/fiber';
import { useMemo, useRef } from 'react';
import {
  type BufferGeometry,
  type Color,
  ConeGeometry,
  CylinderGeometry,
  DoubleSide,
  type Group,
  Matrix4,
  type Mesh,
  type Quaternion,
  TorusGeometry,
  Vector3,
} from 'three';
import { arrowLength } from './arrowScale';
import { type Point, wheelExtent } from './bodyPlaces';
import { useGeometry } from './Inked';
import { type ArcTube, arcLozenges, arcTube, openHeadGeometry } from './shapes';
import { LONGEST_ARC, useStage } from './stageFrame';

/** Less than this share of the longest arrow is not drawn, so that rounding noise does not twitch. */
const SHORTEST_SHARE = 0.004;

/** Middle of the array, and how far its wheels reach from it, m, body frame. */
export function useArrayPlace(): { middle: Point; reach: number } {
  const { rig, size } = useStage();
  return useMemo(() => {
    const { gyros } = rig.array;
    const count = gyros.length || 1;
    const sum = [0, 1, 2].map((axis) => gyros.reduce((total, g) => total + g.position[axis], 0) / count);
    const middle: Point = [sum[0], sum[1], sum[2]];
    const reach = gyros.reduce((far, g) => {
      const { radius } = wheelExtent(g.wheel.parts);
      return Math.max(far, Math.hypot(g.position[1] - middle[1], g.position[2] - middle[2]) + 1.5 * radius);
    }, 0.06 * size);
    return { middle, reach };
  }, [rig, size]);
}

/** Momentum, torque, demand and yaw leak of the array, in the colours and shapes they have everywhere. */
export function QuantityArrows() {
  const { rig, size } = useStage();
  const { middle, reach } = useArrayPlace();
  if (rig.array.gyros.length === 0) return null;
  const arc = Math.max(1.15 * reach, 0.17 * size);
  return (
    <group position={[...middle]}>
      <MomentumArrow />
      <TorqueArc radius={arc} />
      <DemandArc radius={1.14 * arc} />
      <LeakArc radius={arc} />
    </group>
  );
}

const direction = new Vector3();
const ALONG_Z = new Vector3(0, 0, 1);

/** Drawn over everything, since what it tells is not a thing that stands somewhere. */
const overAll = { depthTest: false, transparent: true } as const;

function MomentumArrow() {
  const { frame, palette, size, scales } = useStage();
  const group = useRef<Group>(null);
  const shaft = useRef<Mesh>(null);
  const heads = useRef<Group>(null);
  const mark = useRef<Group>(null);
  const thick = 0.005 * size;
  const longest = 0.28 * size;
  const bar = useGeometry(
    () => new CylinderGeometry(thick, thick, 1, 10).rotateX(Math.PI / 2).translate(0, 0, 0.5),
    [thick],
  );
  const head = useGeometry(
    () => new ConeGeometry(2.6 * thick, 6.5 * thick, 14).rotateX(Math.PI / 2).translate(0, 0, -3.25 * thick),
    [thick],
  );
  useFrame(() => {
    if (!group.current || !shaft.current || !heads.current || !mark.current) return;
    direction.fromArray(frame.instant.momentum);
    const value = direction.length();
    const { length, isClamped } = arrowLength(value, scales.momentum);
    const share = length / scales.momentum.longest;
    group.current.visible = share > SHORTEST_SHARE;
    if (!group.current.visible) return;
    group.current.quaternion.setFromUnitVectors(ALONG_Z, direction.divideScalar(value));
    const metres = share * longest;
    const room = Math.min(1, metres / (11 * thick));
    shaft.current.scale.z = Math.max(1e-6, metres - 8 * thick * room);
    heads.current.position.z = metres;
    heads.current.scale.setScalar(room);
    mark.current.visible = isClamped;
    mark.current.position.z = metres * 0.55;
  });
  const material = <meshBasicMaterial color={palette.marks.momentum} {...overAll} />;
  return (
    <group ref={group}>
      <mesh ref={shaft} geometry={bar} renderOrder={15}>
        {material}
      </mesh>
      <group ref={heads}>
        <mesh geometry={head} renderOrder={15}>
          {material}
        </mesh>
        <mesh geometry={head} position={[0, 0, -5 * thick]} renderOrder={15}>
          {material}
        </mesh>
      </group>
      <group ref={mark}>
        <ClampRings radius={3 * thick} thick={0.5 * thick} colour={palette.marks.momentum} />
      </group>
    </group>
  );
}

/** Two rings round a shaft: there is more than the arrow can show. */
function ClampRings(props: { readonly radius: number; readonly thick: number; readonly colour: Color }) {
  const { radius, thick, colour } = props;
  const ring = useGeometry(() => new TorusGeometry(radius, thick, 6, 20), [radius, thick]);
  return [-1, 1].map((side) => (
    <mesh key={side} geometry={ring} position={[0, 0, side * 2.2 * thick]} renderOrder={16}>
      <meshBasicMaterial color={colour} {...overAll} />
    </mesh>
  ));
}

interface ArcProps {
  readonly geometry: ArcTube;
  readonly radius: number;
  readonly colour: Color;
  readonly head?: BufferGeometry;
  /** Writes the body vector to be drawn. */
  readonly read: (out: Vector3) => void;
}

const basis = new Matrix4();
const across = new Vector3();
const side = new Vector3();
const UP_OR_FORWARD = [new Vector3(0, 0, 1), new Vector3(1, 0, 0)] as const;

/** The attitude in which an arc round z starts from the top (or, round the vertical, from the front). */
function arcAttitude(axis: Vector3, out: Quaternion): void {
  const start = Math.abs(axis.z) < 0.95 ? UP_OR_FORWARD[0] : UP_OR_FORWARD[1];
  across.copy(start).addScaledVector(axis, -start.dot(axis)).normalize();
  side.crossVectors(axis, across);
  out.setFromRotationMatrix(basis.makeBasis(across, side, axis));
}

/** An arc about a turning vector, as long as the vector is great, the way it turns. */
export function TurnArc({ geometry, radius, colour, head, read }: ArcProps) {
  const { scales, size } = useStage();
  const group = useRef<Group>(null);
  const tip = useRef<Group>(null);
  const mark = useRef<Group>(null);
  useFrame(() => {
    if (!group.current || !tip.current || !mark.current) return;
    read(direction);
    const value = direction.length();
    const { length, isClamped } = arrowLength(value, scales.torque);
    const share = length / scales.torque.longest;
    group.current.visible = share > SHORTEST_SHARE;
    if (!group.current.visible) return;
    arcAttitude(direction.divideScalar(value), group.current.quaternion);
    const steps = Math.max(1, Math.round(share * geometry.steps));
    geometry.geometry.setDrawRange(0, steps * geometry.perStep);
    const end = (steps / geometry.steps) * LONGEST_ARC;
    tip.current.rotation.z = end;
    tip.current.scale.setScalar(Math.min(1, 0.25 + 4 * share));
    mark.current.visible = isClamped;
    mark.current.rotation.z = end * 0.55;
  });
  return (
    <group ref={group}>
      <mesh geometry={geometry.geometry} renderOrder={15} frustumCulled={false}>
        <meshBasicMaterial color={colour} side={DoubleSide} {...overAll} />
      </mesh>
      <group ref={tip}>
        {head && (
          <mesh geometry={head} position={[radius, 0, 0]} renderOrder={16}>
            <meshBasicMaterial color={colour} side={DoubleSide} {...overAll} />
          </mesh>
        )}
      </group>
      <group ref={mark}>
        <group position={[radius, 0, 0]} rotation={[Math.PI / 2, 0, 0]}>
          <ClampRings radius={0.02 * size} thick={0.003 * size} colour={colour} />
        </group>
      </group>
    </group>
  );
}

/** The geometry of an arc is let go of with the arc. */
export const useArc = (make: () => ArcTube, inputs: readonly unknown[]): ArcTube =>
  useGeometry(() => {
    const arc = make();
    return { ...arc, dispose: () => arc.geometry.dispose() };
  }, inputs);

/** Roll and pitch torque of the array on the body; what it does about the vertical is drawn as the leak. */
function TorqueArc({ radius }: { readonly radius: number }) {
  const { frame, palette, size } = useStage();
  const tube = 0.006 * size;
  const arc = useArc(() => arcTube(radius, tube, LONGEST_ARC, 96), [radius, tube]);
  const head = useGeometry(
    () => new ConeGeometry(3 * tube, 7 * tube, 14).translate(0, 2.6 * tube, 0),
    [tube],
  );
  const read = (out: Vector3): void => {
    out.set(frame.instant.torque[0], frame.instant.torque[1], 0);
  };
  return <TurnArc geometry={arc} radius={radius} colour={palette.marks.torque} head={head} read={read} />;
}

/** The roll moment asked for: broken, with a head not filled in. */
function DemandArc({ radius }: { readonly radius: number }) {
  const { frame, palette, size } = useStage();
  const tube = 0.0034 * size;
  const arc = useArc(() => arcTube(radius, tube, LONGEST_ARC, 96, [3, 2]), [radius, tube]);
  const head = useGeometry(() => openHeadGeometry(9 * tube, 4.6 * tube, 2 * tube), [tube]);
  const read = (out: Vector3): void => {
    out.set(frame.instant.demand, 0, 0);
  };
  return <TurnArc geometry={arc} radius={radius} colour={palette.marks.demand} head={head} read={read} />;
}

/** The part of the torque that turns the body about the vertical: a row of lozenges round it. */
function LeakArc({ radius }: { readonly radius: number }) {
  const { frame, palette, size } = useStage();
  const lozenge = 0.019 * size;
  const arc = useArc(() => arcLozenges(radius, lozenge, LONGEST_ARC, 14), [radius, lozenge]);
  const read = (out: Vector3): void => {
    out.set(0, 0, frame.instant.torque[2]);
  };
  return <TurnArc geometry={arc} radius={radius} colour={palette.marks.leak} read={read} />;
}
