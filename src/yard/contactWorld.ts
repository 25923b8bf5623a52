/** The world that contacts happen in: cannon-es with our solver, gravity down, no sleeping. */
import { type Body, type ContactEquation, Vec3, World } from 'cannon-es';
import { STANDARD_GRAVITY } from '../core/physics';
import { ContactSolver, TiedNarrowphase } from './contactSolver';

/** m: how far the weight given presses a contact in, all of it on one of them. */
const GIVE = 2e-6;
/** Steps in which a contact's error of place is taken back, about; see SPOOK in cannon-es. */
export const RELAXATION = 8;
/** Friction between things of which nothing is known; wood on concrete, common practice. */
export const USUAL_FRICTION = 0.6;

export interface ContactWorldSetting {
  /** N: of the heaviest thing that will stand in it; contacts are made stiff for it. */
  readonly weight: number;
  /** Friction of two bodies that touch. */
  readonly frictionOf: (a: Body, b: Body) => number;
}

/** An empty world. Its bodies are prepared and it is stepped by the caller: see `stepWorld`. */
export function createContactWorld({ weight, frictionOf }: ContactWorldSetting): World {
  const world = new World({ gravity: new Vec3(0, 0, -STANDARD_GRAVITY), allowSleep: false });
  const touch = world.defaultContactMaterial;
  // Only asks for friction equations to be made; how much there is the solver asks for itself.
  touch.friction = USUAL_FRICTION;
  touch.restitution = 0;
  touch.contactEquationStiffness = weight / GIVE;
  // Friction that holds gives way as a stiff damper: softer, a block would creep down a slope visibly.
  touch.frictionEquationStiffness = (100 * weight) / GIVE;
  touch.contactEquationRelaxation = RELAXATION;
  touch.frictionEquationRelaxation = RELAXATION;
  world.solver = new ContactSolver(({ bi, bj }: ContactEquation) => frictionOf(bi, bj));
  world.narrowphase = new TiedNarrowphase(world);
  return world;
}
