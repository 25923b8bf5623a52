/**
 * Contacts with friction in proportion to the force that presses. cannon-es bounds friction by the body's weight,
 * once for every corner that touches, whatever each of them carries; here each corner's friction lies in the disc
 * of its own normal force. Surfaces may also move on their bodies (a foot on a walking body does).
 */
import {
  type Body,
  type ContactEquation,
  type Equation,
  type FrictionEquation,
  Narrowphase,
  Solver,
  Vec3,
  type World,
} from 'cannon-es';

/** A body some of whose surfaces move on it. */
export interface DriftingBody extends Body {
  /** Velocity over the body of the surface a contact or a joint acts on, world components, m/s; null for none. */
  readonly driftAt: (equation: Equation) => Vec3 | null;
}

const isDrifting = (body: Body): body is DriftingBody => 'driftAt' in body;

interface Tangent extends FrictionEquation {
  contact?: ContactEquation;
}

/** Names for each friction equation the contact it belongs to. */
export class TiedNarrowphase extends Narrowphase {
  override createFrictionEquationsFromContact(contact: ContactEquation, out: FrictionEquation[]): boolean {
    const made = super.createFrictionEquationsFromContact(contact, out);
    if (made) {
      for (let k = out.length - 2; k < out.length; k++) {
        (out[k] as Tangent).contact = contact;
        // cannon-es leaves them shorter than one on any ground that is not level.
        out[k].t.normalize();
      }
    }
    return made;
  }
}

/** Projected Gauss-Seidel over the same equations as cannon's own solver, with friction as a disc. */
export class ContactSolver extends Solver {
  readonly iterations = 60;
  readonly tolerance = 1e-7;
  /** Rounds made in the last step. */
  made = 0;
  private readonly right: number[] = [];
  private readonly inverse: number[] = [];
  private readonly force: number[] = [];
  /** What each row was about in the last step. */
  private readonly marks: number[] = [];
  /** Friction pairs: row of the first tangent, row of the normal, friction. */
  private readonly pairs: number[] = [];
  private readonly friction: number[] = [];
  private readonly slideStep: number[] = [];
  private readonly isTangent: boolean[] = [];

  constructor(private readonly frictionOf: (contact: ContactEquation) => number) {
    super();
  }

  override solve(dt: number, world: World): number {
    const { equations } = this;
    const rows = equations.length;
    this.made = 0;
    if (rows === 0) return 0;
    for (const body of world.bodies) {
      body.updateSolveMassProperties();
      body.vlambda.set(0, 0, 0);
      body.wlambda.set(0, 0, 0);
    }
    for (let j = 0; j < rows; j++) {
      const equation = equations[j];
      // Every kind of equation takes the step alone; the base class is typed with numbers none of them reads.
      this.right[j] = (equation as ContactEquation).computeB(dt) - equation.b * driftAlong(equation);
      this.inverse[j] = 1 / equation.computeC();
    }
    this.startForces();
    this.findPairs();
    for (let round = 0; round < this.iterations; round++) {
      this.made++;
      if (this.sweep() < this.tolerance) break;
    }
    for (const body of world.bodies) {
      body.velocity.vadd(body.vlambda, body.velocity);
      body.angularVelocity.vadd(body.wlambda, body.angularVelocity);
    }
    for (let j = 0; j < rows; j++) equations[j].multiplier = this.force[j] / dt;
    return this.made;
  }

  /**
   * Begins from the forces of the step before where the same things touch in the same order, from none otherwise:
   * a body at rest on many corners is many rounds away from none.
   */
  private startForces(): void {
    const { equations, force, marks } = this;
    let isSame = marks.length === equations.length;
    marks.length = equations.length;
    for (let j = 0; j < equations.length; j++) {
      const mark = markOf(equations[j]);
      if (marks[j] !== mark) isSame = false;
      marks[j] = mark;
    }
    for (let j = 0; j < equations.length; j++) {
      if (!isSame) force[j] = 0;
      else if (force[j] !== 0) equations[j].addToWlambda(force[j]);
    }
  }

  /** One round over every row; returns the largest change of relative velocity it made, m/s or rad/s. */
  private sweep(): number {
    const { equations, right, inverse, force, pairs } = this;
    let largest = 0;
    for (let j = 0; j < equations.length; j++) {
      if (this.isTangent[j]) continue;
      const equation = equations[j];
      let change = inverse[j] * (right[j] - equation.computeGWlambda() - equation.eps * force[j]);
      const next = Math.min(equation.maxForce, Math.max(equation.minForce, force[j] + change));
      change = next - force[j];
      force[j] = next;
      if (change !== 0) equation.addToWlambda(change);
      largest = Math.max(largest, Math.abs(change / inverse[j]));
    }
    for (let p = 0; p < pairs.length; p += 2) largest = Math.max(largest, this.slide(p));
    return largest;
  }

  /**
   * Friction of one contact: a step against the slip, brought back into the disc. Both directions take the same
   * step, or the force would not point against the slip. Returns the change of slip it made, m/s.
   */
  private slide(p: number): number {
    const { equations, right, force, pairs } = this;
    const j = pairs[p];
    const bound = this.friction[p / 2] * force[pairs[p + 1]];
    const step = this.slideStep[p / 2];
    const a = equations[j];
    const b = equations[j + 1];
    const beforeX = force[j];
    const beforeY = force[j + 1];
    let x = beforeX + step * (right[j] - a.computeGWlambda() - a.eps * beforeX);
    let y = beforeY + step * (right[j + 1] - b.computeGWlambda() - b.eps * beforeY);
    const size = Math.sqrt(x * x + y * y);
    if (size > bound) {
      const share = bound > 0 ? bound / size : 0;
      x *= share;
      y *= share;
    }
    force[j] = x;
    force[j + 1] = y;
    if (x !== beforeX) a.addToWlambda(x - beforeX);
    if (y !== beforeY) b.addToWlambda(y - beforeY);
    return Math.max(Math.abs(x - beforeX), Math.abs(y - beforeY)) / step;
  }

  private findPairs(): void {
    const { equations, pairs } = this;
    pairs.length = 0;
    this.friction.length = 0;
    for (let j = 0; j < equations.length; j++) this.isTangent[j] = false;
    for (let j = 0; j + 1 < equations.length; j++) {
      const contact = (equations[j] as Tangent).contact;
      if (contact === undefined || (equations[j + 1] as Tangent).contact !== contact || this.isTangent[j])
        continue;
      const normal = equations.indexOf(contact);
      if (normal < 0) continue;
      this.isTangent[j] = true;
      this.isTangent[j + 1] = true;
      pairs.push(j, normal);
      this.slideStep[this.friction.length] = slideStepOf(equations[j], equations[j + 1]);
      this.friction.push(this.frictionOf(contact));
    }
  }
}

/** A number for what a row is about: two shapes that touch, or a joint of its own. */
function markOf(equation: Equation): number {
  const touch = (equation as Tangent).contact ?? (equation as ContactEquation);
  const sign = touch === equation ? 1 : -1;
  return touch.si && touch.sj ? sign * (touch.si.id * 65536 + touch.sj.id + 1) : 0.5 + equation.id;
}

const turned = new Vec3();

/** Largest step of force for slip in two directions that does not overshoot: one over what gives way the most. */
function slideStepOf(a: Equation, b: Equation): number {
  const x = a.computeC();
  const y = b.computeC();
  a.bi.invInertiaWorldSolve.vmult(b.jacobianElementA.rotational, turned);
  let both = turned.dot(a.jacobianElementA.rotational);
  a.bj.invInertiaWorldSolve.vmult(b.jacobianElementB.rotational, turned);
  both += turned.dot(a.jacobianElementB.rotational);
  const half = 0.5 * (x - y);
  return 1 / (0.5 * (x + y) + Math.sqrt(half * half + both * both));
}

/** How fast the surfaces of an equation part along it by moving on their bodies. */
function driftAlong(equation: Equation): number {
  let sum = 0;
  if (isDrifting(equation.bi)) {
    const drift = equation.bi.driftAt(equation);
    if (drift) sum += equation.jacobianElementA.spatial.dot(drift);
  }
  if (isDrifting(equation.bj)) {
    const drift = equation.bj.driftAt(equation);
    if (drift) sum += equation.jacobianElementB.spatial.dot(drift);
  }
  return sum;
}
