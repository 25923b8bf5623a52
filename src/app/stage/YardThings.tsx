/** What else there is in the yard: the tilt of its ground, boxes that stand and boxes that lie loose, and the finger. */
import { type ThreeEvent, useFrame, useThree } from '@react-three/fiber';
import { type ReactNode, useEffect, useMemo, useRef } from 'react';
import {
  BoxGeometry,
  CylinderGeometry,
  type Group,
  type Mesh,
  Plane,
  Raycaster,
  SphereGeometry,
  Vector2,
  Vector3,
} from 'three';
import type { SnapshotLayout, YardBox } from '../../yard';
import { onYardFrame, readYard, releaseRig, touchRig, useYard } from '../yard/liveYard';
import { Inked, noRaycast, useGeometry } from './Inked';
import { useStage } from './stageFrame';
import { blendPose } from './yardInstant';

export function YardThings() {
  const opened = useYard((yard) => yard.opened);
  const loose = useYard((yard) => yard.loose);
  const invalidate = useThree((state) => state.invalidate);
  useEffect(() => onYardFrame(() => invalidate()), [invalidate]);
  if (!opened) return null;
  return (
    <>
      {opened.standing.map((box) => (
        <group key={box.place.join()} position={[...box.place]} quaternion={turnOf(box)}>
          <BoxModel box={box} isStanding />
        </group>
      ))}
      {loose.map((box, index) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: a loose box is its place in the order of snapshots.
        <LooseBox key={index} box={box} index={index} layout={opened.layout} />
      ))}
      <Finger layout={opened.layout} />
    </>
  );
}

type Turn = [number, number, number, number];

const turnOf = ({ attitude: [w, x, y, z] }: YardBox): Turn => [x, y, z, w];

function BoxModel({ box, isStanding }: { readonly box: YardBox; readonly isStanding: boolean }) {
  const { palette } = useStage();
  const geometry = useGeometry(() => new BoxGeometry(...box.size), [box]);
  return <Inked geometry={geometry} colour={isStanding ? palette.body : palette.cargo} />;
}

/** Tilts the ground it holds as the yard's is tilted. */
export function Sloped({ children }: { readonly children: ReactNode }) {
  const attitude = useYard((yard) => yard.opened?.attitude);
  const [w, x, y, z] = attitude ?? [1, 0, 0, 0];
  return <group quaternion={[x, y, z, w]}>{children}</group>;
}

const pose = new Float64Array(7);

function LooseBox({
  box,
  index,
  layout,
}: {
  readonly box: YardBox;
  readonly index: number;
  readonly layout: SnapshotLayout;
}) {
  const group = useRef<Group>(null);
  useFrame(() => {
    const read = readYard();
    if (!read || !group.current) return;
    const { before, after, share } = read;
    group.current.visible = after[layout.objects] > index;
    if (!group.current.visible) return;
    const at = layout.objects + 1 + 7 * index;
    // One that has just been let go has no place in the snapshot before.
    blendPose(before[layout.objects] > index ? before : after, after, at, share, pose);
    group.current.position.set(pose[0], pose[1], pose[2]);
    group.current.quaternion.set(pose[4], pose[5], pose[6], pose[3]);
  });
  return (
    <group ref={group} visible={false}>
      <BoxModel box={box} isStanding={false} />
    </group>
  );
}

const tip = new Vector3();
const end = new Vector3();
const UP = new Vector3(0, 1, 0);

/** The finger: a rod from where it touches to where it is. */
function Finger({ layout }: { readonly layout: SnapshotLayout }) {
  const { palette, size } = useStage();
  const rod = useRef<Mesh>(null);
  const ball = useRef<Mesh>(null);
  useFrame(() => {
    const read = readYard();
    if (!rod.current || !ball.current || !read) return;
    const at = layout.finger;
    const { after } = read;
    const isThere = Number.isFinite(after[at]);
    rod.current.visible = isThere;
    ball.current.visible = isThere;
    if (!isThere) return;
    tip.set(after[at], after[at + 1], after[at + 2]);
    end.set(after[at + 3], after[at + 4], after[at + 5]);
    ball.current.position.copy(tip);
    rod.current.position.copy(tip).add(end).multiplyScalar(0.5);
    end.sub(tip);
    const length = end.length();
    rod.current.scale.set(1, Math.max(1e-6, length), 1);
    rod.current.quaternion.setFromUnitVectors(UP, end.divideScalar(length || 1));
  });
  const r = 0.012 * size;
  const stick = useGeometry(() => new CylinderGeometry(0.35 * r, 0.35 * r, 1, 8), [r]);
  const knob = useGeometry(() => new SphereGeometry(r, 16, 12), [r]);
  const material = <meshBasicMaterial color={palette.chosen} depthTest={false} transparent opacity={0.9} />;
  return (
    <>
      <mesh ref={rod} geometry={stick} visible={false} raycast={noRaycast} renderOrder={30}>
        {material}
      </mesh>
      <mesh ref={ball} geometry={knob} visible={false} raycast={noRaycast} renderOrder={31}>
        {material}
      </mesh>
    </>
  );
}

/** Stage axes (z up) of a point in the renderer's. */
const toStage = ({ x, y, z }: Vector3): readonly [number, number, number] => [x, -z, y];

/** Around the rig's own parts: a press on them in the yard puts a finger there, a drag moves it in the picture's plane. */
export function Pushable({ children }: { readonly children: ReactNode }) {
  const isOpen = useYard((yard) => yard.isOpen);
  const { frame } = useStage();
  const camera = useThree((state) => state.camera);
  const canvas = useThree((state) => state.gl.domElement);
  const controls = useThree((state) => state.controls) as unknown as { enabled: boolean } | null;
  const caster = useMemo(() => new Raycaster(), []);
  const letGo = useRef<(() => void) | undefined>(undefined);
  useEffect(() => () => letGo.current?.(), []);

  const press = (event: ThreeEvent<PointerEvent>): void => {
    if (!isOpen || letGo.current) return;
    event.stopPropagation();
    const { pointerId } = event.nativeEvent;
    const plane = new Plane().setFromNormalAndCoplanarPoint(
      camera.getWorldDirection(new Vector3()),
      event.point,
    );
    const point = toBody(frame.instant.pose, toStage(event.point));
    if (controls) controls.enabled = false;
    touchRig(point, toStage(event.point));
    const move = (moved: PointerEvent): void => {
      if (moved.pointerId !== pointerId) return;
      const { left, top, width, height } = canvas.getBoundingClientRect();
      const x = (2 * (moved.clientX - left)) / width - 1;
      const y = 1 - (2 * (moved.clientY - top)) / height;
      caster.setFromCamera(new Vector2(x, y), camera);
      const target = caster.ray.intersectPlane(plane, new Vector3());
      if (target) touchRig(point, toStage(target));
    };
    const release = (ended?: PointerEvent): void => {
      if (ended && ended.pointerId !== pointerId) return;
      removeEventListener('pointermove', move);
      removeEventListener('pointerup', release);
      removeEventListener('pointercancel', release);
      if (controls) controls.enabled = true;
      letGo.current = undefined;
      releaseRig();
    };
    letGo.current = release;
    addEventListener('pointermove', move);
    addEventListener('pointerup', release);
    addEventListener('pointercancel', release);
  };
  return <group onPointerDown={press}>{children}</group>;
}

/** A point of the world in body components: the body's turn undone. */
function toBody(
  at: Float64Array,
  point: readonly [number, number, number],
): readonly [number, number, number] {
  const [w, x, y, z] = [at[3], -at[4], -at[5], -at[6]];
  const [px, py, pz] = [point[0] - at[0], point[1] - at[1], point[2] - at[2]];
  const tx = 2 * (y * pz - z * py);
  const ty = 2 * (z * px - x * pz);
  const tz = 2 * (x * py - y * px);
  return [px + w * tx + y * tz - z * ty, py + w * ty + z * tx - x * tz, pz + w * tz + x * ty - y * tx];
}
