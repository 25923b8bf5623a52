import type { Box, Point } from './bodyPlaces';

/** Directions the stage can be looked at from, by the word on their button. */
export const VIEWS = ['corner', 'front', 'side', 'top'] as const;
export type View = (typeof VIEWS)[number];

/** From the middle of the rig to the eye: unit vectors, world frame (x forward, y left, z up). */
const EYES: Readonly<Record<View, Point>> = {
  corner: [0.72, 0.58, 0.36],
  front: [1, 0, 0.06],
  side: [0, 1, 0.06],
  // A hair off the vertical, so that forward stays upward in the picture.
  top: [-0.001, 0, 1],
};

export const eyeDirection = (view: View): Point => {
  const [x, y, z] = EYES[view];
  const size = Math.hypot(x, y, z);
  return [x / size, y / size, z / size];
};

/** CSS pixels of a picture and what lies over its edges. */
export interface Frame {
  readonly width: number;
  readonly height: number;
  readonly insets: {
    readonly left: number;
    readonly right: number;
    readonly top: number;
    readonly bottom: number;
  };
}

export interface FreeArea {
  readonly width: number;
  readonly height: number;
  /** CSS pixels from the middle of the picture to the middle of the free part, right and down. */
  readonly right: number;
  readonly down: number;
}

/** The part of the picture that nothing lies over; never less than a fifth of it, or nothing could be framed. */
export function freeArea(frame: Frame): FreeArea {
  const { left, right, top, bottom } = frame.insets;
  const width = Math.max(frame.width / 5, frame.width - left - right);
  const height = Math.max(frame.height / 5, frame.height - top - bottom);
  return { width, height, right: (left - right) / 2, down: (top - bottom) / 2 };
}

const corners = ({ min, max }: Box): readonly Point[] =>
  [min[0], max[0]].flatMap((x) =>
    [min[1], max[1]].flatMap((y) => [min[2], max[2]].map((z): Point => [x, y, z])),
  );

const dot = (a: Point, b: Point): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

const cross = (a: Point, b: Point): Point => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

const unit = (a: Point): Point => {
  const size = Math.hypot(...a) || 1;
  return [a[0] / size, a[1] / size, a[2] / size];
};

/**
 * Distance from the middle of a box at which all its corners are inside the free part of the picture.
 *
 * @param box     m, world
 * @param eye     unit vector from the middle of the box to the eye
 * @param fov     rad, vertical field of view of the whole picture
 * @param frame   CSS pixels
 * @param spare   share of the free part left empty on each side
 *
 * @returns m. Exact for a perspective camera that looks at the middle of the box with z up in the picture.
 */
export function frameDistance(box: Box, eye: Point, fov: number, frame: Frame, spare = 0.08): number {
  const middle: Point = [
    (box.min[0] + box.max[0]) / 2,
    (box.min[1] + box.max[1]) / 2,
    (box.min[2] + box.max[2]) / 2,
  ];
  const right = unit(cross([0, 0, 1], eye));
  const up = cross(eye, right);
  const free = freeArea(frame);
  const perPixel = Math.tan(fov / 2) / (frame.height / 2);
  const tanX = perPixel * (free.width / 2) * (1 - 2 * spare);
  const tanY = perPixel * (free.height / 2) * (1 - 2 * spare);
  let distance = 0;
  for (const corner of corners(box)) {
    const arm: Point = [corner[0] - middle[0], corner[1] - middle[1], corner[2] - middle[2]];
    // A corner nearer to the eye by `near` is seen at distance - near.
    const near = dot(arm, eye);
    distance = Math.max(
      distance,
      near + Math.abs(dot(arm, right)) / tanX,
      near + Math.abs(dot(arm, up)) / tanY,
    );
  }
  return distance;
}
