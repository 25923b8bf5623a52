import { useFrame } from '@react-three/fiber';
import { useMemo, useRef } from 'react';
import {
  BoxGeometry,
  CylinderGeometry,
  type Group,
  type Object3D,
  Quaternion,
  SphereGeometry,
  Vector3,
} from 'three';
import { hipPositions } from '../../core/physics';
import type { LeggedBody } from '../../core/rig';
import { footThickness, torsoCentre } from './bodyPlaces';
import { Inked, useGeometry } from './Inked';
import { createLegPoses, type LegPose, poseLegs } from './legPose';
import { useStage } from './stageFrame';

/** Torso and pelvis. Drawn in the body frame, like the legs. */
export function LeggedTrunk({ body }: { readonly body: LeggedBody }) {
  const { palette } = useStage();
  const { length, width, height } = body.torso;
  const torso = useGeometry(() => new BoxGeometry(length, width, height), [length, width, height]);
  const bottom = torsoCentre(body)[2] - height / 2;
  return (
    <>
      <group position={[...torsoCentre(body)]}>
        <Inked geometry={torso} colour={palette.body} opacity={0.78} part={{ kind: 'body', index: 0 }} />
      </group>
      {hipPositions(body)
        .filter((_, leg) => leg % 2 === 0)
        .map(([x]) => (
          <Pelvis key={x} body={body} x={x} bottom={bottom} />
        ))}
    </>
  );
}

const limbRadius = (body: LeggedBody): number => 0.075 * Math.min(body.thigh.length, body.shank.length * 1.2);

/** A bar from hip to hip and, where the torso rides above it, the post that carries the torso. */
function Pelvis({
  body,
  x,
  bottom,
}: {
  readonly body: LeggedBody;
  readonly x: number;
  readonly bottom: number;
}) {
  const { palette } = useStage();
  const thick = limbRadius(body) * 1.5;
  const { width, height } = body.hips;
  const gap = bottom - height;
  const rise = Math.max(1e-4, gap);
  const bar = useGeometry(() => new BoxGeometry(thick, width, thick), [thick, width]);
  const post = useGeometry(() => new BoxGeometry(thick * 0.9, width * 0.45, rise), [thick, width, rise]);
  const part = { kind: 'hip', index: 0 } as const;
  return (
    <group position={[x, 0, height]}>
      <Inked geometry={bar} colour={palette.gimbal} part={part} />
      {gap > 0 && (
        <group position={[0, 0, gap / 2]}>
          <Inked geometry={post} colour={palette.gimbal} part={part} />
        </group>
      )}
    </group>
  );
}

const UPRIGHT = new Vector3(0, 1, 0);
const from = new Vector3();
const to = new Vector3();
const turn = new Quaternion();

/** Moves a unit cylinder that stands along y so that it spans two points. */
function span(limb: Object3D, start: Float64Array, end: Float64Array): void {
  from.fromArray(start);
  to.fromArray(end).sub(from);
  const length = to.length();
  limb.position.copy(from).addScaledVector(to, 0.5);
  limb.quaternion.copy(turn.setFromUnitVectors(UPRIGHT, to.divideScalar(length || 1)));
  limb.scale.set(1, length || 1e-6, 1);
}

/** Moves the parts of one leg, in the order in which `Legs` mounts them. */
function placeParts(parts: readonly Object3D[], pose: LegPose, thickness: number): void {
  const [thigh, shank, hip, knee, ankle, foot] = parts;
  span(thigh, pose.knee, pose.hip);
  span(shank, pose.knee, pose.ankle);
  hip.position.fromArray(pose.hip);
  knee.position.fromArray(pose.knee);
  ankle.position.fromArray(pose.ankle);
  ankle.position.z += thickness;
  foot.position.fromArray(pose.sole);
}

/** Legs and feet in the body frame: hips of the body, soles of the motion, knees between them. */
export function Legs({ body }: { readonly body: LeggedBody }) {
  const { frame, palette } = useStage();
  const poses = useMemo(() => createLegPoses(body), [body]);
  const groups = useRef<(Group | null)[]>([]);
  const radius = limbRadius(body);
  const thickness = footThickness(body);
  const { length, width } = body.foot;
  const thigh = useGeometry(() => new CylinderGeometry(radius * 0.8, radius, 1, 12), [radius]);
  const shank = useGeometry(() => new CylinderGeometry(radius * 0.55, radius * 0.8, 1, 12), [radius]);
  const joint = useGeometry(() => new SphereGeometry(radius * 1.22, 14, 10), [radius]);
  const foot = useGeometry(
    () => new BoxGeometry(length, width, thickness).translate(0, 0, thickness / 2),
    [length, width, thickness],
  );

  useFrame(() => {
    poseLegs(body, frame.instant.pose, frame.instant.feet, poses);
    poses.forEach((pose, leg) => {
      const parts = groups.current[leg]?.children;
      if (parts) placeParts(parts, pose, thickness);
    });
  });

  const hipPart = { kind: 'hip', index: 0 } as const;
  return poses.map((_, leg) => {
    const part = { kind: 'foot', index: leg } as const;
    return (
      <group
        // biome-ignore lint/suspicious/noArrayIndexKey: a leg is its place in the order of legs.
        key={leg}
        ref={(group) => {
          groups.current[leg] = group;
        }}
      >
        <group>
          <Inked geometry={thigh} colour={palette.body} edgeAngle={0} part={hipPart} />
        </group>
        <group>
          <Inked geometry={shank} colour={palette.body} edgeAngle={0} part={part} />
        </group>
        <group>
          <Inked geometry={joint} colour={palette.gimbal} edgeAngle={0} part={hipPart} />
        </group>
        <group>
          <Inked geometry={joint} colour={palette.gimbal} edgeAngle={0} part={hipPart} />
        </group>
        <group scale={0.8}>
          <Inked geometry={joint} colour={palette.gimbal} edgeAngle={0} part={part} />
        </group>
        <group>
          <Inked geometry={foot} colour={palette.cargo} part={part} />
        </group>
      </group>
    );
  });
}
