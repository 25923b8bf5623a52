import { restFeet } from '../../core/physics';
import type { Rig } from '../../core/rig';
import { stanceWidth } from './bodyPlaces';
import { createInstant, type Instant } from './motionInstant';

/** How deep a hull is drawn, as a share of its depth, until an evaluation says where it floats. */
const GUESSED_DRAUGHT = 0.3;

/** The rig standing still with its gimbals at rest: what is drawn until a motion has been worked out for it. */
export function restInstant(rig: Rig): Instant {
  const legs = rig.body.kind === 'legged' ? rig.body.legs : 0;
  const instant = createInstant(rig.array.gyros.length, legs);
  if (rig.body.kind === 'legged') {
    restFeet(rig.body, stanceWidth(rig)).forEach((sole, leg) => {
      instant.feet.set(sole, 3 * leg);
    });
    instant.isFootDown.fill(1);
  }
  instant.centreOfMass.fill(Number.NaN);
  if (rig.footing.kind === 'float' && rig.body.kind === 'hull') {
    instant.water = rig.body.section.depth * GUESSED_DRAUGHT;
  }
  return instant;
}
