/** What the rig stands and walks on, and what lies about. */
import { Box, Plane, type Shape, Vec3 } from 'cannon-es';

export type GroundChoice =
  | { readonly kind: 'flat' }
  /** rad, and the way it rises from forward to the left. */
  | { readonly kind: 'slope'; readonly angle: number; readonly direction: number }
  /** m: a step up across the way, so far ahead. */
  | { readonly kind: 'step'; readonly height: number; readonly ahead: number }
  /** A loose board lying across the way. */
  | { readonly kind: 'plank' }
  | { readonly kind: 'blocks' };

export const GROUND_KINDS = ['flat', 'slope', 'step', 'plank', 'blocks'] as const;
export type GroundKind = (typeof GROUND_KINDS)[number];

/** A box that stands still, or lies loose and has a mass. */
export interface YardBox {
  /** m, along x, y, z. */
  readonly size: readonly [number, number, number];
  /** m, world, centre. */
  readonly place: readonly [number, number, number];
  /** Attitude, w first. */
  readonly attitude: readonly [number, number, number, number];
  /** kg; 0 for one that stands still. */
  readonly mass: number;
}

export interface Ground {
  /** Attitude of the ground plane through the world's origin, w first. */
  readonly attitude: readonly [number, number, number, number];
  readonly boxes: readonly YardBox[];
}

const level = [1, 0, 0, 0] as const;
/** kg/m^3, of boards and blocks: pine, common practice. */
const WOOD = 500;

const wooden = (
  size: readonly [number, number, number],
  place: readonly [number, number, number],
  attitude: YardBox['attitude'] = level,
): YardBox => ({ size, place, attitude, mass: WOOD * size[0] * size[1] * size[2] });

/** A turn about the vertical. */
const turned = (angle: number): YardBox['attitude'] => [Math.cos(angle / 2), 0, 0, Math.sin(angle / 2)];

/**
 * The ground of a choice for a rig of a size.
 *
 * @param size  m, a length of the rig: boards and blocks are scaled to it
 */
export function groundOf(choice: GroundChoice, size: number): Ground {
  switch (choice.kind) {
    case 'flat':
      return { attitude: level, boxes: [] };
    case 'slope': {
      // Rising towards `direction`: turned about the level line across it, negatively.
      const s = Math.sin(choice.angle / 2);
      const attitude = [
        Math.cos(choice.angle / 2),
        s * Math.sin(choice.direction),
        -s * Math.cos(choice.direction),
        0,
      ] as const;
      return { attitude, boxes: [] };
    }
    case 'step': {
      const length = 6 * size;
      const { height, ahead } = choice;
      const place = [ahead + length / 2, 0, height / 2] as const;
      return {
        attitude: level,
        boxes: [{ size: [length, 6 * size, height], place, attitude: level, mass: 0 }],
      };
    }
    case 'plank': {
      const thick = 0.02 * size;
      return {
        attitude: level,
        boxes: [wooden([0.5 * size, 1.6 * size, thick], [0.75 * size, 0, thick / 2])],
      };
    }
    case 'blocks': {
      const a = 0.12 * size;
      return {
        attitude: level,
        boxes: [
          wooden([a, a, a], [0.6 * size, 0.45 * size, a / 2], turned(0.4)),
          wooden([a, 1.5 * a, 0.6 * a], [0.8 * size, -0.4 * size, 0.3 * a], turned(-0.3)),
          wooden([a, a, 0.8 * a], [0.95 * size, 0.4 * size, 0.4 * a], turned(1)),
          wooden([1.4 * a, a, 0.5 * a], [0.95 * size, 0.4 * size, 1.05 * a], turned(0.2)),
        ],
      };
    }
  }
}

export const planeShape = (): Shape => new Plane();

export const boxShape = ({ size }: YardBox): Box => new Box(new Vec3(size[0] / 2, size[1] / 2, size[2] / 2));

/** Inertia of a solid box about its centre, row-major, kg*m^2. Source: standard tables. */
export const boxInertiaMatrix = ({ size: [x, y, z], mass }: YardBox): Float64Array =>
  Float64Array.of(
    (mass * (y * y + z * z)) / 12,
    0,
    0,
    0,
    (mass * (x * x + z * z)) / 12,
    0,
    0,
    0,
    (mass * (x * x + y * y)) / 12,
  );
