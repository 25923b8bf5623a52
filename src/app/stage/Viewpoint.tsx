import { useFrame, useThree } from '@react-three/fiber';
import { useCallback, useEffect, useMemo, useRef } from 'react';
import { type PerspectiveCamera, Vector3 } from 'three';
import { type StageInsets, useSession } from '../state/session';
import { type Box, boxCentre, type Point } from './bodyPlaces';
import { isDragging } from './dragging';
import { eyeDirection, frameDistance, freeArea, type View } from './framing';
import { OrbitView, type ViewControls } from './OrbitView';
import { FIELD_OF_VIEW, useStage } from './stageFrame';

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

/** Middle of the rig as it stands, in the renderer's axes. */
const bodyPlace = (box: Box, pose: ArrayLike<number>, out: Vector3): Vector3 =>
  toRenderer(boxCentre(moved(box, pose)), out);

/** What the hooks of the viewpoint share: the camera and its controls, and what of the picture is free. */
function useEye() {
  const camera = useThree((state) => state.camera) as PerspectiveCamera;
  const controls = useThree((state) => state.controls) as unknown as ViewControls | null;
  const viewport = useThree((state) => state.size);
  const invalidate = useThree((state) => state.invalidate);
  const covered = useSession((state) => state.stageInsets);
  const insets = useMemo(() => withCaption(covered, viewport), [covered, viewport]);
  return { camera, controls, viewport, invalidate, insets };
}

type Eye = ReturnType<typeof useEye>;
type Flag = { current: boolean };

/** Looks at the rig from a direction, near enough to fill the free part of the picture. */
function useLook(
  { camera, controls, viewport, invalidate, insets }: Eye,
  anchor: { readonly current: Vector3 },
): (eye: Point) => void {
  const { box, size, frame } = useStage();
  return useCallback(
    (eye) => {
      if (!controls || viewport.width === 0) return;
      const place = moved(box, frame.instant.pose);
      const picture = { width: viewport.width, height: viewport.height, insets };
      const distance = frameDistance(place, eye, FIELD_OF_VIEW * DEGREE, picture);
      toRenderer(boxCentre(place), controls.target);
      anchor.current.set(0, 0, 0);
      camera.position.copy(controls.target).addScaledVector(toRenderer(eye, work), distance);
      camera.near = distance / 60;
      camera.far = distance + 30 * size;
      camera.updateProjectionMatrix();
      controls.minDistance = 0.15 * size;
      controls.maxDistance = 12 * size;
      controls.update();
      invalidate();
    },
    [anchor, box, camera, controls, frame, insets, invalidate, size, viewport],
  );
}

/** Moves the middle of the picture to the middle of what nothing lies over. */
function useFreeMiddle({ camera, viewport, invalidate, insets }: Eye): void {
  useEffect(() => {
    const { width, height } = viewport;
    if (width === 0) return;
    const free = freeArea({ width, height, insets });
    camera.setViewOffset(width, height, -free.right, -free.down, width, height);
    invalidate();
  }, [camera, insets, invalidate, viewport]);
}

/**
 * Frames on load, when the rig is another, and when the room changes before the eye was moved by hand; never by an
 * edit, which must not move the picture under the hand that makes it.
 */
function useFirstLook(
  { controls, viewport, insets }: Eye,
  look: (eye: Point) => void,
  isTouched: Flag,
): void {
  const { size, rig } = useStage();
  const { kind } = rig.body;
  const framed = useRef({ size: 0, kind: '', viewport: undefined as unknown, insets: undefined as unknown });
  useEffect(() => {
    if (!controls) return;
    const last = framed.current;
    const ratio = last.size > 0 ? size / last.size : Number.POSITIVE_INFINITY;
    const isAnother = kind !== last.kind || ratio > RESIZE || ratio < 1 / RESIZE;
    const isRoomNew = last.viewport !== viewport || last.insets !== insets;
    framed.current = { size: isAnother ? size : last.size, kind, viewport, insets };
    if (isAnother && !isDragging()) isTouched.current = false;
    if ((isAnother && !isDragging()) || (isRoomNew && !isTouched.current)) look(eyeDirection('corner'));
  }, [controls, insets, isTouched, kind, look, size, viewport]);
}

/** Answers the buttons. */
function useAsked(
  { camera, controls }: Eye,
  look: (eye: Point) => void,
  ask: ViewAsk,
  isTouched: Flag,
): void {
  // Only another ask is an ask: not another way of looking.
  const lookNow = useRef(look);
  lookNow.current = look;
  useEffect(() => {
    if (ask.count === 0 || !controls) return;
    if (ask.view !== 'frame') {
      isTouched.current = true;
      lookNow.current(eyeDirection(ask.view));
      return;
    }
    // Framing keeps the side the rig is looked at from.
    work.copy(camera.position).sub(controls.target).normalize();
    lookNow.current([work.x, -work.z, work.y]);
  }, [ask, camera, controls, isTouched]);
}

/** Leads the eye along when the body walks away from where the view was framed or put by hand. */
function useLeash({ camera, controls }: Eye, anchor: { readonly current: Vector3 }): void {
  const { size, frame, box } = useStage();
  useFrame(() => {
    if (!controls) return;
    bodyPlace(box, frame.instant.pose, work).add(anchor.current).sub(controls.target);
    // Up and down the eye stays: a step is no walk.
    work.y = 0;
    const far = work.length();
    if (far <= LEASH * size) return;
    work.multiplyScalar((far - LEASH * size) / far);
    controls.target.add(work);
    camera.position.add(work);
    controls.update();
  }, -0.5);
}

/** The eye: framed on load and when asked, moved by hand between, and led along when the body walks away. */
export function Viewpoint({ ask }: { readonly ask: ViewAsk }) {
  const eye = useEye();
  const isTouched = useRef(false);
  const pressed = useRef(new Vector3());
  const anchor = useRef(new Vector3());
  const { box, frame } = useStage();
  const look = useLook(eye, anchor);
  useFreeMiddle(eye);
  useFirstLook(eye, look, isTouched);
  useAsked(eye, look, ask, isTouched);
  useLeash(eye, anchor);
  const { camera, controls } = eye;
  const onStart = useCallback(() => pressed.current.copy(camera.position), [camera]);
  const onEnd = useCallback(() => {
    // A tap moves nothing and is no wish to look from elsewhere.
    if (!controls || pressed.current.distanceTo(camera.position) < 1e-9) return;
    isTouched.current = true;
    anchor.current.copy(controls.target).sub(bodyPlace(box, frame.instant.pose, work));
  }, [box, camera, controls, frame]);
  return <OrbitView onStart={onStart} onEnd={onEnd} />;
}
