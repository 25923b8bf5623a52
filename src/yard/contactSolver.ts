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
  type Vec3,
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
      for (let k = out.length - 2; k < out.length; k++) (out[k] as Tangent).contact = contact;
    }
    return made;
  }
}

/** Projected Gauss-Seidel over the same equations as cannon's own solver, with friction as a disc. */
export class ContactSolver extends Solver {
  readonly iterations = 120;
  readonly tolerance = 1e-9;
  /** Equations not yet converged at the end of the last step would show here: iterations made. */
  made = 0;
  private readonly right: number[] = [];
  private readonly inverse: number[] = [];
  private readonly force: number[] = [];
  /** Friction pairs: row of the first tangent, row of the normal, friction. */
  private readonly pairs: number[] = [];
  private readonly friction: number[] = [];
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
      this.force[j] = 0;
    }
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
    for (let p = 0; p < pairs.length; p += 2) {
      const first = pairs[p];
      const bound = this.friction[p / 2] * force[pairs[p + 1]];
      const a = equations[first];
      const b = equations[first + 1];
      const beforeA = force[first];
      const beforeB = force[first + 1];
      let x = beforeA + inverse[first] * (right[first] - a.computeGWlambda() - a.eps * beforeA);
      let y = beforeB + inverse[first + 1] * (right[first + 1] - b.computeGWlambda() - b.eps * beforeB);
      const size = Math.sqrt(x * x + y * y);
      if (size > bound) {
        const share = bound > 0 ? bound / size : 0;
        x *= share;
        y *= share;
      }
      force[first] = x;
      force[first + 1] = y;
      if (x !== beforeA) a.addToWlambda(x - beforeA);
      if (y !== beforeB) b.addToWlambda(y - beforeB);
      largest = Math.max(
        largest,
        Math.abs((x - beforeA) / inverse[first]),
        Math.abs((y - beforeB) / inverse[first + 1]),
      );
    }
    return largest;
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
      this.friction.push(this.frictionOf(contact));
    }
  }
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
