/** A rig held at a point of the ground, or along a line of it, where it may roll and nothing else. */
import { type Body, Constraint, ContactEquation, RotationalEquation, Vec3 } from 'cannon-es';
import { RELAXATION } from './contactWorld';
import type { RigBody } from './rigBody';

export class GroundPin extends Constraint {
  private readonly along: readonly ContactEquation[];
  private readonly across: readonly RotationalEquation[];
  private readonly forward = new Vec3();

  /**
   * @param pivot_B  m, body frame
   * @param pivot_W  m, world
   * @param isLine   whether pitch and yaw are held too
   */
  constructor(
    private readonly rig: RigBody,
    world: Body,
    private readonly pivot_B: readonly [number, number, number],
    private readonly pivot_W: Vec3,
    isLine: boolean,
    stiffness: number,
    step: number,
  ) {
    super(rig, world, { collideConnected: true, wakeUpBodies: false });
    this.along = [new Vec3(1, 0, 0), new Vec3(0, 1, 0), new Vec3(0, 0, 1)].map((direction) => {
      const equation = new ContactEquation(rig, world);
      equation.ni.copy(direction);
      equation.minForce = -Number.MAX_VALUE;
      equation.maxForce = Number.MAX_VALUE;
      equation.setSpookParams(stiffness, RELAXATION, step);
      return equation;
    });
    this.across = isLine
      ? [new Vec3(0, 1, 0), new Vec3(0, 0, 1)].map((axis) => {
          const equation = new RotationalEquation(rig, world, { axisB: axis, maxForce: Number.MAX_VALUE });
          equation.setSpookParams(stiffness, RELAXATION, step);
          return equation;
        })
      : [];
    this.equations.push(...this.along, ...this.across);
  }

  override update(): void {
    for (const equation of this.along) {
      this.rig.armTo(this.pivot_B, equation.ri);
      this.pivot_W.vsub(this.bodyB.position, equation.rj);
    }
    this.rig.quaternion.vmult(unitX, this.forward);
    for (const equation of this.across) equation.axisA.copy(this.forward);
  }
}

const unitX = new Vec3(1, 0, 0);
