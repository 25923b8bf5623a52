import { BoxGeometry, type BufferGeometry } from 'three';
import type { Rig } from '../../core/rig';
import { type Point, torsoCentre, wheelExtent } from './bodyPlaces';
import { Inked, useGeometry } from './Inked';
import { gimbalFrame } from './partEdits';
import { merged } from './shapes';
import { useStage } from './stageFrame';

/** Bearings stand this many wheel radii from the middle of the wheel along the gimbal axis. */
export const BEARINGS_STAND = 1.29;

/** Height of what gyros are set up on, m, body frame. */
function deckHeight({ body }: Rig): number {
  switch (body.kind) {
    case 'legged':
      return torsoCentre(body)[2] + body.torso.height / 2;
    case 'hull':
      return 0.12 * body.section.depth;
    case 'inline':
      return body.frame.centreHeight + body.frame.height / 2;
  }
}

interface Post {
  readonly top: Point;
  readonly thick: number;
}

/** A post below each bearing that stands above the deck; none for wheels sunk into the body. */
function postsOf(rig: Rig, deck: number): readonly Post[] {
  return rig.array.gyros.flatMap((gyro) => {
    const { radius } = wheelExtent(gyro.wheel.parts);
    const { g } = gimbalFrame(gyro);
    const [x, y, z] = gyro.position;
    const reach = BEARINGS_STAND * radius;
    return [1, -1]
      .map((side): Point => [x + side * g[0] * reach, y + side * g[1] * reach, z + side * g[2] * reach])
      .filter(([, , height]) => height > deck + 0.05 * radius)
      .map((top) => ({ top, thick: 0.13 * radius }));
  });
}

/** Posts and the frame they stand on, as one shape. */
function mountGeometry(rig: Rig): BufferGeometry | undefined {
  const deck = deckHeight(rig);
  const posts = postsOf(rig, deck);
  if (posts.length === 0) return undefined;
  const thick = Math.max(...posts.map((post) => post.thick));
  const parts = posts.map(({ top: [x, y, z], thick: t }) =>
    new BoxGeometry(t, t, z - deck).translate(x, y, (z + deck) / 2),
  );
  const [x0, x1] = [0, 1].map((end) => extreme(posts, 0, end));
  const [y0, y1] = [0, 1].map((end) => extreme(posts, 1, end));
  // A frame of four bars below the posts: a plate would look like a part of its own.
  const middle = deck + thick / 2;
  for (const y of [y0, y1]) {
    parts.push(new BoxGeometry(x1 - x0 + thick, thick, thick).translate((x0 + x1) / 2, y, middle));
  }
  for (const x of [x0, x1]) {
    parts.push(
      new BoxGeometry(thick, Math.max(thick, y1 - y0 - thick), thick).translate(x, (y0 + y1) / 2, middle),
    );
  }
  return merged(parts);
}

const extreme = (posts: readonly Post[], axis: 0 | 1, end: number): number => {
  const places = posts.map((post) => post.top[axis]);
  return end === 0 ? Math.min(...places) : Math.max(...places);
};

/** What carries the gimbals' bearings. The document says nothing of it, so it is drawn as plainly as can be. */
export function Mounts() {
  const { rig, palette } = useStage();
  const { body } = rig;
  const { gyros } = rig.array;
  const shape = useGeometry(() => {
    const geometry = mountGeometry(rig);
    return { geometry, dispose: () => geometry?.dispose() };
  }, [body, gyros]);
  return shape.geometry ? <Inked geometry={shape.geometry} colour={palette.gimbal} /> : null;
}
