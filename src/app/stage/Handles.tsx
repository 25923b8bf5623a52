import { type ThreeEvent, useFrame, useThree } from '@react-three/fiber';
import { useMemo, useRef } from 'react';
import {
  ConeGeometry,
  CylinderGeometry,
  type Group,
  Matrix4,
  type PerspectiveCamera,
  Quaternion,
  SphereGeometry,
  Vector3,
} from 'three';
import { useSession } from '../state/session';
import { beginDrag, type DragEnds } from './dragging';
import { handlesOf } from './handles';
import type { Handle, SlideHandle, TurnHandle } from './handleTypes';
import { noRaycast, useGeometry } from './Inked';
import { createLegPoses, poseLegs } from './legPose';
import { arcTube } from './shapes';
import { useStage } from './stageFrame';

/** CSS pixels: what a finger can hit, and what is drawn. */
const TOUCH_RADIUS = 23;
const GRIP_LENGTH = 34;

const ALONG_Y = new Vector3(0, 1, 0);
const place = new Vector3();

/** The grips of the selected part, in its own frame. */
export function Handles() {
  const { rig, frame } = useStage();
  const selection = useSession((state) => state.selection);
  const isEachOnItsOwn = useSession((state) => state.isEachOnItsOwn);
  const set = useMemo(() => handlesOf(rig, selection, isEachOnItsOwn), [rig, selection, isEachOnItsOwn]);
  const group = useRef<Group>(null);
  const legs = useMemo(() => (rig.body.kind === 'legged' ? createLegPoses(rig.body) : []), [rig.body]);
  useFrame(() => {
    if (!group.current) return;
    group.current.position.set(0, 0, 0);
    if (set.frame !== 'foot' || rig.body.kind !== 'legged') return;
    poseLegs(rig.body, frame.instant.pose, frame.instant.feet, legs);
    const leg = legs[selection.index];
    if (leg) group.current.position.fromArray(leg.sole);
  });
  return (
    <group ref={group}>
      {set.handles.map((handle) =>
        handle.kind === 'slide' ? (
          <SlideGrip key={handle.id} handle={handle} />
        ) : (
          <TurnGrip key={handle.id} handle={handle} />
        ),
      )}
    </group>
  );
}

/** Metres that one CSS pixel covers at a place in the renderer's axes. */
const metresPerPixel = (camera: PerspectiveCamera, at: Vector3, height: number): number =>
  (2 * Math.tan((camera.fov * Math.PI) / 360) * camera.position.distanceTo(at)) / height / camera.zoom;

/** Metres to a CSS pixel at a group, asked for each frame. */
function usePixelSize(): (group: Group) => number {
  const camera = useThree((state) => state.camera) as PerspectiveCamera;
  const height = useThree((state) => state.size.height);
  return (group) => metresPerPixel(camera, group.getWorldPosition(place), height);
}

/** What a press on a grip needs from the stage: the way from the renderer's axes into the frame of the handle. */
function useGrip(handle: Handle) {
  const camera = useThree((state) => state.camera) as PerspectiveCamera;
  const gl = useThree((state) => state.gl);
  const controls = useThree((state) => state.controls) as unknown as DragEnds['controls'] | null;
  return (event: ThreeEvent<PointerEvent>, frame: Group | null): void => {
    if (!frame || event.nativeEvent.button !== 0) return;
    event.stopPropagation();
    frame.updateWorldMatrix(true, false);
    const inverse = new Matrix4().copy(frame.matrixWorld).invert();
    beginDrag(handle, event.nativeEvent, { camera, canvas: gl.domElement, inverse, controls });
  };
}

const grips = {
  onPointerOver: (event: ThreeEvent<PointerEvent>): void => {
    event.stopPropagation();
    document.body.style.cursor = 'grab';
  },
  onPointerOut: (): void => {
    document.body.style.cursor = '';
  },
  onClick: (event: ThreeEvent<MouseEvent>): void => event.stopPropagation(),
};

const onTop = { depthTest: false, transparent: true } as const;
const HANDLE = { isHandle: true };

/** A pair of arrow heads that slides along an axis. */
function SlideGrip({ handle }: { readonly handle: SlideHandle }) {
  const { palette } = useStage();
  const frame = useRef<Group>(null);
  const grip = useRef<Group>(null);
  const pixelSize = usePixelSize();
  const press = useGrip(handle);
  const { at, axis, clear, leastPixels } = handle;
  useFrame(() => {
    if (!grip.current) return;
    // Inside the grip one unit is one CSS pixel.
    const pixel = pixelSize(grip.current);
    const out = Math.max(clear, leastPixels * pixel);
    grip.current.scale.setScalar(pixel);
    grip.current.position.set(at[0] + axis[0] * out, at[1] + axis[1] * out, at[2] + axis[2] * out);
  });
  const turn = useMemo(
    () => new Quaternion().setFromUnitVectors(ALONG_Y, new Vector3(...handle.axis)),
    [handle.axis],
  );
  const head = useGeometry(() => new ConeGeometry(7.5, 15, 16), []);
  const bar = useGeometry(() => new CylinderGeometry(2, 2, 10, 8), []);
  const touch = useGeometry(() => new SphereGeometry(TOUCH_RADIUS, 8, 6), []);
  const material = <meshBasicMaterial color={palette.chosen} {...onTop} />;
  return (
    <group ref={frame}>
      <group ref={grip} quaternion={turn}>
        <mesh geometry={head} position={[0, GRIP_LENGTH - 7.5, 0]} renderOrder={30} raycast={noRaycast}>
          {material}
        </mesh>
        <mesh geometry={bar} position={[0, 12, 0]} renderOrder={30} raycast={noRaycast}>
          {material}
        </mesh>
        <mesh
          geometry={touch}
          position={[0, TOUCH_RADIUS - 4, 0]}
          visible={false}
          userData={HANDLE}
          {...grips}
          onPointerDown={(event) => press(event, frame.current)}
        />
      </group>
    </group>
  );
}

/** How much of the arc is drawn to either side of a grip that turns, rad. */
const ARC_SHOWN = 0.42;

/** A knob on an arc. */
function TurnGrip({ handle }: { readonly handle: TurnHandle }) {
  const { palette } = useStage();
  const frame = useRef<Group>(null);
  const ring = useRef<Group>(null);
  const grip = useRef<Group>(null);
  const pixelSize = usePixelSize();
  const press = useGrip(handle);
  const { radius, leastPixels } = handle;
  useFrame(() => {
    if (!ring.current || !grip.current) return;
    const pixel = pixelSize(ring.current);
    const wide = Math.max(1, (leastPixels * pixel) / radius);
    ring.current.scale.setScalar(wide);
    grip.current.scale.setScalar(pixel / wide);
  });
  const turn = useMemo(() => {
    const x = new Vector3(...handle.zero);
    const z = new Vector3(...handle.normal);
    const basis = new Matrix4().makeBasis(x, new Vector3().crossVectors(z, x), z);
    return new Quaternion().setFromRotationMatrix(basis);
  }, [handle.zero, handle.normal]);
  const at = handle.isAbsolute ? handle.value : 0;
  const half = handle.isAbsolute ? ARC_SHOWN / 2.4 : ARC_SHOWN;
  const arc = useGeometry(() => arcTube(radius, 0.012 * radius, 2 * half, 18).geometry, [radius, half]);
  const knob = useGeometry(() => new SphereGeometry(8, 16, 12), []);
  const touch = useGeometry(() => new SphereGeometry(TOUCH_RADIUS, 8, 6), []);
  const material = <meshBasicMaterial color={palette.chosen} {...onTop} />;
  return (
    <group ref={frame}>
      <group ref={ring} position={[...handle.centre]} quaternion={turn}>
        <group rotation={[0, 0, at]}>
          <mesh geometry={arc} rotation={[0, 0, -half]} renderOrder={29} raycast={noRaycast}>
            {material}
          </mesh>
          <group ref={grip} position={[radius, 0, 0]}>
            <mesh geometry={knob} renderOrder={30} raycast={noRaycast}>
              {material}
            </mesh>
            <mesh
              geometry={touch}
              visible={false}
              userData={HANDLE}
              {...grips}
              onPointerDown={(event) => press(event, frame.current)}
            />
          </group>
        </group>
      </group>
    </group>
  );
}
