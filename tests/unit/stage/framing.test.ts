import { PerspectiveCamera, Vector3 } from 'three';
import { describe, expect, it } from 'vitest';
import { type Box, boxCentre, rigBox } from '../../../src/app/stage/bodyPlaces';
import { eyeDirection, frameDistance, freeArea, VIEWS } from '../../../src/app/stage/framing';
import { DEMONSTRATIONS } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const FOV = 30;
const frame = { width: 1180, height: 820, insets: { left: 300, right: 220, top: 48, bottom: 150 } };

/** Greatest and least picture coordinates of a box's corners as three projects them, in CSS pixels from the middle. */
function project(box: Box, eye: readonly [number, number, number], distance: number) {
  const camera = new PerspectiveCamera(FOV, frame.width / frame.height, 0.001, 1e4);
  camera.up.set(0, 0, 1);
  const middle = new Vector3(...boxCentre(box));
  camera.position.copy(middle).addScaledVector(new Vector3(...eye), distance);
  camera.lookAt(middle);
  camera.updateMatrixWorld();
  const pixels = [box.min[0], box.max[0]].flatMap((x) =>
    [box.min[1], box.max[1]].flatMap((y) =>
      [box.min[2], box.max[2]].map((z) => {
        const p = new Vector3(x, y, z).project(camera);
        return [(Math.abs(p.x) * frame.width) / 2, (Math.abs(p.y) * frame.height) / 2];
      }),
    ),
  );
  return [Math.max(...pixels.map((p) => p[0])), Math.max(...pixels.map((p) => p[1]))];
}

describe('frameDistance', () => {
  const free = freeArea(frame);

  it.each(DEMONSTRATIONS.flatMap(({ file, rig }) => VIEWS.map((view) => [file, view, rig] as const)))(
    'brings all of %s just inside the free part, seen from the %s',
    (_, view, rig) => {
      const box = rigBox(rig);
      const eye = eyeDirection(view);
      const spare = 0.08;
      const distance = frameDistance(box, eye, (FOV * Math.PI) / 180, frame, spare);
      const [x, y] = project(box, eye, distance);
      const share = Math.max(x / (free.width / 2), y / (free.height / 2));
      // The tightest corner touches the margin: neither outside nor further in than it need be.
      expectClose(share, 1 - 2 * spare, { rel: 1e-9 }); // measured 6e-15
    },
  );

  it('keeps a fifth of a picture that is all but covered', () => {
    const covered = freeArea({
      width: 400,
      height: 800,
      insets: { left: 300, right: 200, top: 0, bottom: 0 },
    });
    expect(covered.width).toBe(80);
  });

  it('looks along unit vectors', () => {
    for (const view of VIEWS) expectClose(Math.hypot(...eyeDirection(view)), 1, { abs: 1e-15 }); // measured 0
  });
});
