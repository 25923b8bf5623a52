import { OrbitControls } from '@react-three/drei';
import { useFrame, useThree } from '@react-three/fiber';
import { useCallback, useEffect, useMemo, useRef } from 'react';
import { type PerspectiveCamera, Vector3 } from 'three';
import { type StageInsets, useSession } from '../state/session';
import { type Box, boxCentre, type Point } from './bodyPlaces';
import { isDragging } from './dragging';
import { eyeDirection, frameDistance, freeArea, type View } from './framing';
import { FIELD_OF_VIEW, useStage } from './stageFrame';

/** The part of the controls that framing needs; drei's type is of a package of its own. */
interface Controls {
  readonly target: Vector3;
  readonly update: () => void;
  minDistance: number;
  maxDistance: number;
}

/** Turns stage axes (z up) into the renderer's (y up), as the adapter group does for all that is drawn. */
const toRenderer = ([x, y, z]: Point, out: Vector3): Vector3 => out.set(x, z, -y);

const DEGREE = Math.PI / 180;

/** A body may go this share of its size from the middle of the picture before the eye goes along. */
const LEASH = 0.16;

/** A rig that has grown or shrunk by more than this is framed anew. */
const RESIZE = 1.7;

/** CSS pixels that the caption takes; small stages have none (stage.css). */
const CAPTION_HEIGHT = 34;

const withCaption = (
  insets: StageInsets,
  { width, height }: { width: number; height: number },
): StageInsets =>
  width < 420 || height < 320 ? insets : { ...insets, bottom: insets.bottom + CAPTION_HEIGHT };

export interface ViewAsk {
  readonly view: View | 'frame';
  /** Counts the asks, so that the same button can be pressed twice. */
  readonly count: number;
}

const moved = (box: Box, pose: ArrayLike<number>): Box => ({
  min: [box.min[0] + pose[0], box.min[1] + pose[1], box.min[2] + pose[2]],
  max: [box.max[0] + pose[0], box.max[1] + pose[1], box.max[2] + pose[2]],
});

const work = new Vector3();

/** The eye: framed on load and when asked, moved by hand between, and led along when the body walks away. */
export function Viewpoint({ ask }: { readonly ask: ViewAsk }) {
  const { box, size, frame, rig } = useStage();
  const camera = useThree((state) => state.camera) as PerspectiveCamera;
  const controls = useThree((state) => state.controls) as unknown as Controls | null;
  const viewport = useThree((state) => state.size);
  const invalidate = useThree((state) => state.invalidate);
  const covered = useSession((state) => state.stageInsets);
  const insets = useMemo(() => withCaption(covered, viewport), [covered, viewport]);
  const isTouched = useRef(false);
  const pressed = useRef(new Vector3());
  const framedSize = useRef(0);
  const framedKind = useRef('');

  const look = useCallback(
    (eye: Point): void => {
      if (!controls || viewport.width === 0) return;
      const place = moved(box, frame.instant.pose);
      const picture = { width: viewport.width, height: viewport.height, insets };
      const distance = frameDistance(place, eye, FIELD_OF_VIEW * DEGREE, picture);
      toRenderer(boxCentre(place), controls.target);
      camera.position.copy(controls.target).addScaledVector(toRenderer(eye, work), distance);
      camera.near = distance / 60;
      camera.far = distance + 30 * size;
      camera.updateProjectionMatrix();
      controls.minDistance = 0.15 * size;
      controls.maxDistance = 12 * size;
      controls.update();
      invalidate();
    },
    [box, camera, controls, frame, insets, invalidate, size, viewport],
  );

  // The middle of the picture is moved to the middle of what nothing lies over.
  useEffect(() => {
    const { width, height } = viewport;
    if (width === 0) return;
    const free = freeArea({ width, height, insets });
    camera.setViewOffset(width, height, -free.right, -free.down, width, height);
    invalidate();
  }, [camera, insets, invalidate, viewport]);

  // Framed on load, when the rig is another, and when the room changes before the eye was moved by hand; never
  // by an edit, which must not move the picture under the hand that makes it.
  const room = useRef<readonly unknown[]>([]);
  useEffect(() => {
    if (!controls) return;
    const ratio = framedSize.current > 0 ? size / framedSize.current : Number.POSITIVE_INFINITY;
    const isAnother = rig.body.kind !== framedKind.current || ratio > RESIZE || ratio < 1 / RESIZE;
    const isRoomNew = room.current[0] !== viewport || room.current[1] !== insets;
    room.current = [viewport, insets];
    if (isAnother) {
      framedSize.current = size;
      framedKind.current = rig.body.kind;
      if (!isDragging()) isTouched.current = false;
    }
    if ((isAnother && !isDragging()) || (isRoomNew && !isTouched.current)) look(eyeDirection('corner'));
  }, [controls, insets, look, rig.body.kind, size, viewport]);

  const lookNow = useRef(look);
  lookNow.current = look;
  useEffect(() => {
    if (ask.count === 0 || !controls) return;
    if (ask.view !== 'frame') {
      isTouched.current = ask.view !== 'corner';
      lookNow.current(eyeDirection(ask.view));
      return;
    }
    // Framing keeps the side the rig is looked at from.
    work.copy(camera.position).sub(controls.target).normalize();
    lookNow.current([work.x, -work.z, work.y]);
  }, [ask, camera, controls]);

  useFrame(() => {
    if (!controls) return;
    const [x, y] = frame.instant.pose;
    const [cx, cy] = boxCentre(box);
    const dx = x + cx - controls.target.x;
    const dy = y + cy + controls.target.z;
    const far = Math.hypot(dx, dy);
    // A view panned away by hand is left where it was put.
    if (isTouched.current || far <= LEASH * size) return;
    const share = (far - LEASH * size) / far;
    work.set(dx * share, 0, -dy * share);
    controls.target.add(work);
    camera.position.add(work);
    controls.update();
  }, -0.5);

  return (
    <OrbitControls
      makeDefault
      enableDamping={false}
      zoomSpeed={0.8}
      onStart={() => pressed.current.copy(camera.position)}
      onEnd={() => {
        // A tap moves nothing and is no wish to look from elsewhere.
        if (pressed.current.distanceTo(camera.position) > 1e-9) isTouched.current = true;
      }}
    />
  );
}
