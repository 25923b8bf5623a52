/** From a hull and its whole weight to the footing the dynamics floats on. */
import type { Footing, HullBody, Refusal } from '../rig';
import { formatQuantity } from '../units';
import type { FloatFooting } from './footing';
import { hullSection } from './hullSection';
import { type Flotation, flotation, type Loading, rightingArms } from './hydrostatics';
import type { RigidBody } from './starModel';

export interface Floating {
  readonly footing: FloatFooting;
  readonly flotation: Flotation;
  /** N*m, moment of weight that stands off the middle line, at no heel: what ballast must take away. */
  readonly trimMoment: number;
}

export type FloatingOutcome =
  | { readonly kind: 'floats'; readonly floating: Floating }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/**
 * Floats a hull: waterline, and righting arms of the whole rig to 60 degrees of heel, rolling about its centre
 * of mass. A load off the middle line enters as a trim moment, not in the arms, which stay alike to both sides.
 *
 * @param whole  whole rig, gimbals at rest, body frame
 *
 * Source: as for `flotation` and `rightingArms`.
 */
export function floatHull(
  hull: HullBody,
  water: Extract<Footing, { kind: 'float' }>,
  whole: RigidBody,
): FloatingOutcome {
  const outcome = hullSection(hull);
  if (outcome.kind === 'refused') {
    return {
      kind: 'refused',
      refusals: outcome.faults.map((fault) => {
        const field = `body.${fault.field}`;
        return {
          field,
          sentence: `${field}: ${formatQuantity(fault.value, fault.dimension)}; it must be ${fault.allowed}.`,
        };
      }),
    };
  }
  const load: Loading = {
    mass: whole.mass,
    centreHeight: whole.com[2],
    centreOffset: 0,
    waterDensity: water.density,
  };
  const upright = flotation(outcome.section, load);
  const righting = rightingArms(outcome.section, load);
  if (upright.kind === 'sinks' || righting.kind === 'sinks') {
    const most = upright.kind === 'sinks' ? formatQuantity(upright.mostMass, 'mass') : '';
    return {
      kind: 'refused',
      refusals: [
        {
          field: 'body.section',
          sentence: `body.section: the rig weighs ${formatQuantity(whole.mass, 'mass')} and this hull sinks under more than ${most}; make it longer, wider or deeper.`,
        },
      ],
    };
  }
  return {
    kind: 'floats',
    floating: {
      flotation: upright.flotation,
      trimMoment: whole.mass * 9.80665 * whole.com[1],
      footing: {
        kind: 'float',
        freedoms: 'roll',
        point: [0, 0, whole.com[2]],
        // A hull alike on both sides has no arm upright; cutting the section leaves rounding there.
        righting: {
          kind: 'curve',
          angle: [...righting.arms.angle],
          arm: [0, ...righting.arms.arm.subarray(1)],
        },
        addedInertia: water.addedInertia,
        linearDamping: water.linearDamping,
        quadraticDamping: water.quadraticDamping,
      },
    },
  };
}
