/**
 * A dynamic body whose rotation is carried by its angular momentum.
 *
 * cannon-es gives every shape the inertia of its axis-aligned box and gives it anew whenever a shape is added, has
 * no -omega x (I omega) term and turns attitudes to first order. Here the inertia is set after the shapes and kept;
 * the momentum in the world, the body's own and that of whatever turns inside it, changes by outside torque alone,
 * so both missing terms, omega x (I omega) and omega x h, come out of the turning of the body itself. The end of the
 * step is solved for by Newton's method (implicit in the body's rate, however large h is), and the attitude goes by
 * the exact turn at the mean of the two rates: second order.
 *
 * Position is that of the centre of mass. Quaternions here are cannon's, x y z w; everything the yard hands out is
 * w first.
 */
import { Body, type BodyOptions, Vec3 } from 'cannon-es';
import { invert3, matrixOf, times3, transposedTimes3, turnBack, turnMatrix } from './matrices';

const MOST_ITERATIONS = 12;

export class MomentumBody extends Body {
  /** Row-major, kg*m^2, about the centre of mass, body axes: at the start of the step, and at its end. */
  readonly inertia_B = new Float64Array(9);
  protected readonly nextInertia_B = new Float64Array(9);
  /** N*m*s about the centre of mass, body axes: momentum of what turns inside the body, as seen from it. */
  readonly inner_B = new Float64Array(3);
  protected readonly nextInner_B = new Float64Array(3);
  /** rad/s, body axes. */
  readonly rate_B = new Float64Array(3);
  protected readonly nextRate_B = new Float64Array(3);
  /** Row-major, body to world, at the start of the step. */
  readonly R_WB = new Float64Array(9);
  /** N*m*s about the centre of mass, world axes, at the start of the step. */
  readonly momentum_W = new Float64Array(3);
  protected readonly system = new Float64Array(9);

  private readonly systemInverse = new Float64Array(9);
  private readonly system_W = new Float64Array(9);
  protected readonly startVelocity = new Vec3();
  private readonly outside_W = new Float64Array(3);
  private readonly start_W = new Float64Array(3);
  private readonly aim_W = new Float64Array(3);
  private readonly aim_B = new Float64Array(3);
  private readonly turn = new Float64Array(3);
  private readonly seen = new Float64Array(3);
  private readonly left = new Float64Array(3);
  private readonly change = new Float64Array(3);
  private readonly scratch = new Float64Array(9);
  private hasOwnInertia = false;

  constructor(options: BodyOptions) {
    super({ ...options, linearDamping: 0, angularDamping: 0, allowSleep: false });
  }

  /** Sets mass (kg) and inertia (3 x 3 row-major, about the centre of mass, body axes), and keeps them. */
  setMassProperties(mass: number, inertia_B: ArrayLike<number>): void {
    this.hasOwnInertia = true;
    this.mass = mass;
    this.invMass = 1 / mass;
    for (let k = 0; k < 9; k++) {
      this.inertia_B[k] = inertia_B[k];
      this.nextInertia_B[k] = inertia_B[k];
    }
    this.inertia.set(inertia_B[0], inertia_B[4], inertia_B[8]);
    this.invInertia.set(1 / inertia_B[0], 1 / inertia_B[4], 1 / inertia_B[8]);
    this.takeAttitude();
  }

  /** Called by cannon-es whenever a shape is added: what was set stays. */
  override updateMassProperties(): void {
    if (this.hasOwnInertia) this.updateAABB();
    else super.updateMassProperties();
  }

  /** Called by cannon-es after each step: the inverse is set in `prepare` and must not be made anew. */
  override updateInertiaWorld(force?: boolean): void {
    if (!this.hasOwnInertia) super.updateInertiaWorld(force);
  }

  /** Takes place and velocities as they were set from outside; the angular velocity is in world components. */
  takeAttitude(): void {
    matrixOf(this.quaternion, this.R_WB);
    const w = this.angularVelocity;
    this.start_W[0] = w.x;
    this.start_W[1] = w.y;
    this.start_W[2] = w.z;
    transposedTimes3(this.R_WB, this.start_W, this.rate_B);
    this.nextRate_B.set(this.rate_B);
    times3(this.inertia_B, this.rate_B, this.left);
    for (let k = 0; k < 3; k++) this.left[k] += this.inner_B[k];
    times3(this.R_WB, this.left, this.momentum_W);
    this.system.set(this.inertia_B);
    this.offerInverse();
  }

  /**
   * Before the world's step, once forces and torques are applied: finds where the body would turn to were nothing
   * to touch it, and gives the contact solver the inverse of what resists a torque over this step.
   */
  prepare(dt: number): void {
    this.outside_W[0] = this.torque.x;
    this.outside_W[1] = this.torque.y;
    this.outside_W[2] = this.torque.z;
    for (let k = 0; k < 3; k++) this.aim_W[k] = this.momentum_W[k] + dt * this.outside_W[k];
    this.beginStep(dt);
    this.findRate(dt);
    this.offerInverse();
    // The solver predicts with torque times inverse inertia: the torque that predicts the rate found.
    this.worldRate(dt, this.seen);
    const w = this.angularVelocity;
    this.change[0] = (this.seen[0] - w.x) / dt;
    this.change[1] = (this.seen[1] - w.y) / dt;
    this.change[2] = (this.seen[2] - w.z) / dt;
    times3(this.system_W, this.change, this.left);
    this.torque.set(this.left[0], this.left[1], this.left[2]);
    this.start_W[0] = w.x;
    this.start_W[1] = w.y;
    this.start_W[2] = w.z;
    this.startVelocity.copy(this.velocity);
  }

  /** Called by cannon-es at the end of its step, contact impulses already added to the velocities. */
  override integrate(dt: number, _normalise: boolean, _isFast: boolean): void {
    this.previousPosition.copy(this.position);
    this.previousQuaternion.copy(this.quaternion);
    const w = this.angularVelocity;
    this.change[0] = w.x - this.start_W[0];
    this.change[1] = w.y - this.start_W[1];
    this.change[2] = w.z - this.start_W[2];
    times3(this.system_W, this.change, this.left);
    for (let k = 0; k < 3; k++) this.aim_W[k] += this.left[k];
    this.velocity.addScaledVector(this.invMass * dt, this.force, this.velocity);
    this.position.addScaledVector(0.5 * dt, this.velocity, this.position);
    this.position.addScaledVector(0.5 * dt, this.startVelocity, this.position);
    this.findRate(dt);
    this.turnBy(dt);
    this.endStep(dt);
    this.rate_B.set(this.nextRate_B);
    this.inertia_B.set(this.nextInertia_B);
    this.inner_B.set(this.nextInner_B);
    this.momentum_W.set(this.aim_W);
    matrixOf(this.quaternion, this.R_WB);
    times3(this.R_WB, this.rate_B, this.seen);
    w.set(this.seen[0], this.seen[1], this.seen[2]);
    this.aabbNeedsUpdate = true;
  }

  /** What of the inside is known for the end of the step. */
  protected beginStep(_dt: number): void {}

  /** Inertia, inner momentum and what they add to `system`, for the present guess of the rate at the end. */
  protected takeGuess(_dt: number): void {}

  /** After the turn: whatever the inside wants to keep. */
  protected endStep(_dt: number): void {}

  /** Newton's method for I' w' + l' = exp(-dt (w + w') / 2) R^T L', the momentum the body will have. */
  private findRate(dt: number): void {
    transposedTimes3(this.R_WB, this.aim_W, this.aim_B);
    const { system, nextRate_B, seen, left } = this;
    for (let n = 0; n < MOST_ITERATIONS; n++) {
      system.set(this.nextInertia_B);
      this.takeGuess(dt);
      for (let k = 0; k < 3; k++) this.turn[k] = 0.5 * dt * (this.rate_B[k] + nextRate_B[k]);
      turnBack(this.turn, this.aim_B, seen);
      times3(this.nextInertia_B, nextRate_B, left);
      for (let k = 0; k < 3; k++) left[k] = seen[k] - left[k] - this.nextInner_B[k];
      const half = 0.5 * dt;
      system[1] += half * seen[2];
      system[2] -= half * seen[1];
      system[3] -= half * seen[2];
      system[5] += half * seen[0];
      system[6] += half * seen[1];
      system[7] -= half * seen[0];
      invert3(system, this.systemInverse);
      times3(this.systemInverse, left, this.change);
      let size = 0;
      let scale = 0;
      for (let k = 0; k < 3; k++) {
        nextRate_B[k] += this.change[k];
        size += Math.abs(this.change[k]);
        scale += Math.abs(nextRate_B[k]);
      }
      if (size <= 1e-15 * (1 + scale)) break;
    }
  }

  private offerInverse(): void {
    turnMatrix(this.R_WB, this.system, this.system_W);
    invert3(this.system_W, this.scratch);
    const e = this.invInertiaWorld.elements;
    for (let k = 0; k < 9; k++) e[k] = this.scratch[k];
  }

  /** The rate at the end of the step in world components, by the attitude it will have. */
  private worldRate(dt: number, out: Float64Array): void {
    for (let k = 0; k < 3; k++) this.turn[k] = -0.5 * dt * (this.rate_B[k] + this.nextRate_B[k]);
    turnBack(this.turn, this.nextRate_B, this.left);
    times3(this.R_WB, this.left, out);
  }

  private turnBy(dt: number): void {
    const x = 0.5 * dt * (this.rate_B[0] + this.nextRate_B[0]);
    const y = 0.5 * dt * (this.rate_B[1] + this.nextRate_B[1]);
    const z = 0.5 * dt * (this.rate_B[2] + this.nextRate_B[2]);
    const half = 0.5 * Math.sqrt(x * x + y * y + z * z);
    const s = half < 1e-5 ? 0.5 - (half * half) / 12 : Math.sin(half) / (2 * half);
    const c = Math.cos(half);
    const q = this.quaternion;
    q.set(
      c * q.x + s * (q.w * x + q.y * z - q.z * y),
      c * q.y + s * (q.w * y + q.z * x - q.x * z),
      c * q.z + s * (q.w * z + q.x * y - q.y * x),
      c * q.w - s * (q.x * x + q.y * y + q.z * z),
    );
    q.normalize();
  }
}
