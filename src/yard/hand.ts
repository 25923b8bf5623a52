/** What a hand does to the rig: a finger that pulls on a point of it, and forces that last a while. */
import { Vec3 } from 'cannon-es';
import { STANDARD_GRAVITY } from '../core/physics';
import type { RigBody } from './rigBody';

type Triple = readonly [number, number, number];

/** A finger pushes at most so many times the rig's weight. */
const MOST = 1.5;
/** Of the height of the rig's centre: how far off a finger is that pushes with the rig's weight. */
const REACH = 0.5;
/** Of sqrt(stiffness x mass): a tenth of critical, so that the rig swings on a finger but not for long. */
const DAMPING = 0.2;
/** m: a centre lower than this counts as this high. */
const LOWEST = 0.05;

interface Push {
  readonly force: Vec3;
  readonly point: Triple;
  readonly until: number;
}

export class Hand {
  /** Where the finger touches (m, body frame) and where it is (m, world); undefined without one. */
  finger: { readonly point: Triple; readonly target: Vec3 } | undefined;
  /** N, of the finger in the last step. */
  fingerForce = 0;
  private pushes: Push[] = [];
  private readonly arm = new Vec3();
  private readonly force = new Vec3();
  private readonly lever = new Vec3();

  /**
   * @param mass    kg, of the rig
   * @param height  m, of its centre
   */
  constructor(
    private readonly rig: RigBody,
    private readonly mass: number,
    private readonly height: number,
  ) {}

  /** Puts a finger on a point of the body frame, pulling it towards a place in the world, m. */
  touch(point: Triple, target: Triple): void {
    this.finger = { point, target: new Vec3(...target) };
  }

  release(): void {
    this.finger = undefined;
    this.fingerForce = 0;
  }

  /** A force (N, world) on a point of the body frame until a time of the yard, s. */
  push(force: Triple, point: Triple, until: number): void {
    this.pushes.push({ force: new Vec3(...force), point, until });
  }

  /** Applies what acts over the step that begins at `time`, s. */
  apply(time: number): void {
    this.applyFinger();
    if (this.pushes.length === 0) return;
    this.pushes = this.pushes.filter(({ until }) => time < until - 1e-12);
    for (const { force, point } of this.pushes) this.applyAt(force, point);
  }

  private applyAt(force: Vec3, point: Triple): void {
    this.rig.armTo(point, this.arm);
    this.rig.force.vadd(force, this.rig.force);
    this.arm.cross(force, this.lever);
    this.rig.torque.vadd(this.lever, this.rig.torque);
  }

  /** The finger as a damped spring that gives way at its most. */
  private applyFinger(): void {
    const { finger, rig, force } = this;
    if (!finger) return;
    const weight = this.mass * STANDARD_GRAVITY;
    const stiffness = weight / (REACH * Math.max(LOWEST, this.height));
    const damping = DAMPING * Math.sqrt(stiffness * this.mass);
    rig.armTo(finger.point, this.arm);
    rig.angularVelocity.cross(this.arm, this.lever);
    for (const axis of ['x', 'y', 'z'] as const) {
      const speed = rig.velocity[axis] + this.lever[axis];
      force[axis] = stiffness * (finger.target[axis] - rig.position[axis] - this.arm[axis]) - damping * speed;
    }
    const size = force.length();
    const most = MOST * weight;
    if (size > most) force.scale(most / size, force);
    this.fingerForce = Math.min(size, most);
    this.applyAt(force, finger.point);
  }
}
