/**
 * The rig in the yard: one body, its feet moving on it as the gait has them, its wheels and gimbals as momentum
 * inside it. Gimbals under a servo, geared or locked move as they are told; free ones are solved for together with
 * the body's rate, the stiff omega x h between them taken at the mean of the step.
 *
 * Where legs or gimbals shift the centre of mass on the body, the shapes shift on the centre of mass the other way,
 * and the contacts are told how fast.
 */
import { type Equation, type Shape, Vec3 } from 'cannon-es';
import type { StarModel } from '../core/physics';
import type { DriftingBody } from './contactSolver';
import { MomentumBody } from './momentumBody';
import { createRigMass, type RigMass, weighRig } from './rigMass';

/** A free gimbal's own law. */
export interface FreeGimbal {
  readonly stiffness: number;
  readonly damping: number;
  /** N*m: Coulomb friction while it turns, and what holds it while it stands. */
  readonly coulomb: number;
  readonly stiction: number;
  readonly tiltMin: number;
  readonly tiltMax: number;
}

/** A shape of the rig: fixed to the body, or carried by a foot. */
export interface RigShape {
  readonly shape: Shape;
  /** m, body frame. */
  readonly place: readonly [number, number, number];
  /** Foot that carries it, and then `place` is from the middle of the sole. */
  readonly foot?: number;
}

export interface RigBodyParts {
  readonly model: StarModel;
  readonly shapes: readonly RigShape[];
  /** n; null where the gimbal is told how to move. */
  readonly free: readonly (FreeGimbal | null)[];
  /** Base numbers at the start: see weighRig. */
  readonly base: Float64Array;
  /** 3 x feet, m, body frame. */
  readonly feet: Float64Array;
}

export class RigBody extends MomentumBody implements DriftingBody {
  readonly model: StarModel;
  readonly tilt: Float64Array;
  readonly tiltRate: Float64Array;
  /** n: speed of a held wheel, else its momentum along the spin axis; see weighRig. */
  readonly spin: Float64Array;
  /** n, N*m on each wheel along its spin axis for the coming step; of no effect on a held wheel. */
  readonly motor: Float64Array;
  /** At the end of the step, as told: filled before `prepare`. */
  readonly nextTilt: Float64Array;
  readonly nextTiltRate: Float64Array;
  readonly nextBase = new Float64Array(16);
  readonly nextFeet: Float64Array;
  readonly feet: Float64Array;
  /** Mass at the start of the step. */
  readonly now: RigMass;
  private readonly next: RigMass;
  private readonly probe: RigMass;
  private readonly base = new Float64Array(16);
  private readonly nextSpin: Float64Array;
  private readonly probeTilt: Float64Array;
  private readonly hinge: Float64Array;
  private readonly pull: Float64Array;
  private readonly mean = new Float64Array(3);
  private readonly column = new Float64Array(3);
  private readonly row = new Float64Array(3);
  /** N, body axes: outside forces but weight in the last step. */
  private readonly outside = new Float64Array(3);
  private readonly drift = new Map<Shape, Vec3>();
  private readonly jointDrift = new Vec3();

  constructor(
    private readonly parts: RigBodyParts,
    private readonly gravity: Vec3,
  ) {
    super({ mass: 1 });
    const n = parts.model.gimbals;
    this.model = parts.model;
    const column = () => new Float64Array(n);
    this.tilt = column();
    this.tiltRate = column();
    this.spin = column();
    this.motor = column();
    this.nextTilt = column();
    this.nextTiltRate = column();
    this.nextSpin = column();
    this.probeTilt = column();
    this.hinge = column();
    this.pull = column();
    this.now = createRigMass(n);
    this.next = createRigMass(n);
    this.probe = createRigMass(n);
    this.feet = Float64Array.from(parts.feet);
    this.nextFeet = Float64Array.from(parts.feet);
    this.base.set(parts.base.subarray(0, 16));
    this.nextBase.set(this.base);
    for (const { shape } of parts.shapes) this.addShape(shape);
  }

  /**
   * Puts the rig in place: body origin (m, world), attitude (w first), velocity of the origin (m/s, world) and rate
   * (rad/s, body axes). Tilts, rates and spins are taken as they stand; `speeds` are the wheels', rad/s.
   */
  place(
    origin: ArrayLike<number>,
    attitude: ArrayLike<number>,
    velocity: ArrayLike<number>,
    rate: ArrayLike<number>,
    speeds: ArrayLike<number>,
  ): void {
    const { model } = this;
    this.spin.set(Array.from(speeds).slice(0, model.gimbals));
    weighRig(model, this.base, this.tilt, this.tiltRate, this.spin, this.now);
    for (let i = 0; i < model.gimbals; i++) {
      if (model.isHeld[i] === 1) continue;
      const s = this.now.spin;
      const along = s[3 * i] * rate[0] + s[3 * i + 1] * rate[1] + s[3 * i + 2] * rate[2];
      this.spin[i] = model.array.axialInertia[i] * (speeds[i] + along);
    }
    weighRig(model, this.base, this.tilt, this.tiltRate, this.spin, this.now);
    this.nextTilt.set(this.tilt);
    this.nextTiltRate.set(this.tiltRate);
    this.nextSpin.set(this.spin);
    this.inner_B.set(this.now.inner);
    this.nextInner_B.set(this.now.inner);
    this.quaternion.set(attitude[1], attitude[2], attitude[3], attitude[0]);
    const { centre, centreRate } = this.now;
    const arm = this.quaternion.vmult(new Vec3(centre[0], centre[1], centre[2]));
    this.position.set(origin[0] + arm.x, origin[1] + arm.y, origin[2] + arm.z);
    const turning = this.quaternion.vmult(new Vec3(rate[0], rate[1], rate[2]));
    this.angularVelocity.copy(turning);
    const own = this.quaternion.vmult(new Vec3(centreRate[0], centreRate[1], centreRate[2]));
    const swing = turning.cross(arm);
    this.velocity.set(
      velocity[0] + swing.x + own.x,
      velocity[1] + swing.y + own.y,
      velocity[2] + swing.z + own.z,
    );
    this.setMassProperties(this.now.mass, this.now.inertia);
    this.placeShapes();
  }

  /** Body origin in the world, m. */
  origin(out: Float64Array, at = 0): void {
    const { centre } = this.now;
    const R = this.R_WB;
    const p = this.position;
    out[at] = p.x - (R[0] * centre[0] + R[1] * centre[1] + R[2] * centre[2]);
    out[at + 1] = p.y - (R[3] * centre[0] + R[4] * centre[1] + R[5] * centre[2]);
    out[at + 2] = p.z - (R[6] * centre[0] + R[7] * centre[1] + R[8] * centre[2]);
  }

  /** A point of the body frame, from the centre of mass, world axes, m. */
  armTo(point_B: ArrayLike<number>, out: Vec3): Vec3 {
    const { centre } = this.now;
    out.set(point_B[0] - centre[0], point_B[1] - centre[1], point_B[2] - centre[2]);
    return this.quaternion.vmult(out, out);
  }

  /** Foot that carries a shape; undefined for any other. */
  footOf(shape: Shape): number | undefined {
    return this.parts.shapes.find((part) => part.shape === shape)?.foot;
  }

  driftAt(equation: Equation): Vec3 | null {
    if ('si' in equation) {
      const { si, sj } = equation as unknown as { si?: Shape; sj?: Shape };
      if (si && sj) return this.drift.get(si) ?? this.drift.get(sj) ?? null;
    }
    if ('contact' in equation) {
      const { contact } = equation as unknown as { contact?: { si: Shape; sj: Shape } };
      if (contact) return this.drift.get(contact.si) ?? this.drift.get(contact.sj) ?? null;
    }
    return this.jointDrift;
  }

  protected override beginStep(dt: number): void {
    const { model } = this;
    for (let i = 0; i < model.gimbals; i++) {
      this.nextSpin[i] = this.spin[i] + (model.isHeld[i] === 1 ? 0 : dt * this.motor[i]);
      if (this.parts.free[i]) this.readHinge(i, dt);
    }
    weighRig(model, this.nextBase, this.nextTilt, this.nextTiltRate, this.nextSpin, this.next);
    this.findDrift(dt);
  }

  protected override takeGuess(dt: number): void {
    const { model, parts, next, system } = this;
    let hasFree = false;
    for (let i = 0; i < model.gimbals; i++) if (parts.free[i]) hasFree = true;
    if (hasFree) {
      for (let i = 0; i < model.gimbals; i++) {
        const free = parts.free[i];
        if (free) this.turnFree(i, free, dt);
      }
      weighRig(model, this.nextBase, this.nextTilt, this.nextTiltRate, this.nextSpin, next);
    }
    this.nextInertia_B.set(next.inertia);
    this.nextInner_B.set(next.inner);
    system.set(next.inertia);
    for (let i = 0; i < model.gimbals; i++) {
      if (parts.free[i] && this.pull[i] > 0) this.yieldTo(i, dt);
    }
  }

  protected override endStep(dt: number): void {
    const { model } = this;
    this.tilt.set(this.nextTilt);
    this.tiltRate.set(this.nextTiltRate);
    this.spin.set(this.nextSpin);
    this.base.set(this.nextBase);
    this.feet.set(this.nextFeet);
    weighRig(model, this.base, this.tilt, this.tiltRate, this.spin, this.now);
    // What pushed from outside, weight taken off: a gimbal whose weight is not on its axis feels it.
    const v = this.velocity;
    const { mass } = this.now;
    const fx = (mass * (v.x - this.startVelocity.x)) / dt - mass * this.gravity.x;
    const fy = (mass * (v.y - this.startVelocity.y)) / dt - mass * this.gravity.y;
    const fz = (mass * (v.z - this.startVelocity.z)) / dt - mass * this.gravity.z;
    const R = this.R_WB;
    this.outside[0] = R[0] * fx + R[3] * fy + R[6] * fz;
    this.outside[1] = R[1] * fx + R[4] * fy + R[7] * fz;
    this.outside[2] = R[2] * fx + R[5] * fy + R[8] * fz;
    this.placeShapes();
  }

  /** N*m*s: generalised momentum of a gimbal about its axis, for a rate of body and gimbals. */
  private hingeMomentumOf(
    i: number,
    mass: RigMass,
    rate_B: Float64Array,
    rates: Float64Array,
    base: Float64Array,
  ): number {
    const k = 3 * i;
    const p = mass.hingePush;
    let sum = this.model.hingeInertia[i] * rates[i];
    for (let j = 0; j < 3; j++) {
      sum += mass.hingeMomentum[k + j] * rate_B[j];
      let shared = base[10 + j];
      for (let other = 0; other < this.model.gimbals; other++) shared += p[3 * other + j] * rates[other];
      sum -= (p[k + j] * shared) / mass.mass;
    }
    return sum;
  }

  private readHinge(i: number, _dt: number): void {
    this.hinge[i] = this.hingeMomentumOf(i, this.now, this.rate_B, this.tiltRate, this.base);
  }

  /** Kinetic energy as it depends on one tilt, body rate and gimbal rates held, J. */
  private energyAt(i: number, tilt: number, rates: Float64Array): number {
    const { model, probe, probeTilt, mean } = this;
    probeTilt.set(this.nextTilt);
    probeTilt[i] = tilt;
    weighRig(model, this.nextBase, probeTilt, rates, this.nextSpin, probe);
    const I = probe.inertia;
    let energy = 0;
    for (let r = 0; r < 3; r++) {
      for (let c = 0; c < 3; c++) energy += 0.5 * mean[r] * I[3 * r + c] * mean[c];
      energy += mean[r] * probe.inner[r];
      energy -= (probe.mass * probe.centreRate[r] * probe.centreRate[r]) / 2;
    }
    return energy;
  }

  /** The rate a free gimbal has at the end of the step, the body's rate being as guessed. */
  private turnFree(i: number, free: FreeGimbal, dt: number): void {
    const { model, next } = this;
    for (let k = 0; k < 3; k++) this.mean[k] = 0.5 * (this.rate_B[k] + this.nextRate_B[k]);
    const rate = this.tiltRate[i];
    const meanTilt = 0.5 * (this.tilt[i] + this.nextTilt[i]);
    const d = 1e-4;
    const slope =
      (this.energyAt(i, meanTilt + d, this.nextTiltRate) -
        this.energyAt(i, meanTilt - d, this.nextTiltRate)) /
      (2 * d);
    let load = slope - free.stiffness * (this.tilt[i] + 0.25 * dt * rate) - 0.5 * free.damping * rate;
    const p = next.hingePush;
    let ownMass = 0;
    for (let j = 0; j < 3; j++) {
      load -= (this.outside[j] * p[3 * i + j]) / next.mass;
      ownMass += (p[3 * i + j] * p[3 * i + j]) / next.mass;
    }
    const inertia = model.hingeInertia[i] - ownMass + dt * (0.5 * free.damping + 0.25 * dt * free.stiffness);
    const others =
      this.hingeMomentumOf(i, next, this.nextRate_B, this.nextTiltRate, this.nextBase) -
      (model.hingeInertia[i] - ownMass) * this.nextTiltRate[i];
    let momentum = this.hinge[i] + dt * load - others;
    // Friction takes what it can of the turning, and no more than stops it.
    const most = dt * (Math.abs(rate) < 1e-9 ? free.stiction : free.coulomb);
    momentum -= Math.max(-most, Math.min(most, momentum));
    const isStuck = momentum === 0;
    let nextRate = momentum / inertia;
    let tilt = this.tilt[i] + 0.5 * dt * (rate + nextRate);
    this.pull[i] = isStuck ? 0 : inertia;
    if (tilt > free.tiltMax || tilt < free.tiltMin) {
      tilt = Math.min(free.tiltMax, Math.max(free.tiltMin, tilt));
      nextRate = 0;
      this.pull[i] = 0;
    }
    this.nextTilt[i] = tilt;
    this.nextTiltRate[i] = nextRate;
  }

  /** Takes off `system` what a free gimbal gives way by. */
  private yieldTo(i: number, dt: number): void {
    const { next, system, column, row, model } = this;
    const h = model.isHeld[i] === 1 ? model.array.axialInertia[i] * this.nextSpin[i] : this.nextSpin[i];
    for (let j = 0; j < 3; j++) {
      const stiff = 0.5 * dt * h * next.spinSlope[3 * i + j];
      column[j] = next.hingeMomentum[3 * i + j] + stiff;
      row[j] = (next.hingeMomentum[3 * i + j] - stiff) / this.pull[i];
    }
    for (let r = 0; r < 3; r++) for (let c = 0; c < 3; c++) system[3 * r + c] -= column[r] * row[c];
  }

  /** World velocities of the shapes over the body, from where they are to where they will be. */
  private findDrift(dt: number): void {
    const { next, now } = this;
    for (const { shape, foot } of this.parts.shapes) {
      const drift = this.drift.get(shape) ?? new Vec3();
      this.drift.set(shape, drift);
      for (let k = 0; k < 3; k++) {
        const carried = foot === undefined ? 0 : this.nextFeet[3 * foot + k] - this.feet[3 * foot + k];
        this.column[k] = (carried - next.centre[k] + now.centre[k]) / dt;
      }
      drift.set(this.column[0], this.column[1], this.column[2]);
      this.quaternion.vmult(drift, drift);
    }
    this.jointDrift.set(
      (now.centre[0] - next.centre[0]) / dt,
      (now.centre[1] - next.centre[1]) / dt,
      (now.centre[2] - next.centre[2]) / dt,
    );
    this.quaternion.vmult(this.jointDrift, this.jointDrift);
  }

  private placeShapes(): void {
    const { centre } = this.now;
    let reach = 0;
    this.parts.shapes.forEach(({ shape, place, foot }, s) => {
      const at = this.shapeOffsets[s];
      at.set(place[0] - centre[0], place[1] - centre[1], place[2] - centre[2]);
      if (foot !== undefined) {
        at.x += this.feet[3 * foot];
        at.y += this.feet[3 * foot + 1];
        at.z += this.feet[3 * foot + 2];
      }
      reach = Math.max(reach, at.length() + shape.boundingSphereRadius);
    });
    this.boundingRadius = reach;
    this.aabbNeedsUpdate = true;
  }
}
