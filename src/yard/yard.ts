/**
 * The yard: a contact world in which a rig walks, is pushed and is knocked over. cannon-es finds the contacts;
 * bodies, friction and the array's law are our own (momentumBody, contactSolver, rigBody). It steps by its own
 * fixed clock: the same inputs at the same steps give the same numbers, bit for bit.
 *
 * No figure that the star can give is taken from here: the yard shows what contact does.
 */
import { Body, type ContactEquation, type Quaternion, Vec3, type World } from 'cannon-es';
import { arrayMomentum, arrayTorque, STANDARD_GRAVITY, type StarModel } from '../core/physics';
import type { Refusal } from '../core/rig';
import type { Doubt, Switches } from '../core/trial';
import { createContactWorld, USUAL_FRICTION } from './contactWorld';
import { boxInertiaMatrix, boxShape, type GroundChoice, groundOf, planeShape, type YardBox } from './ground';
import { Hand } from './hand';
import { MomentumBody } from './momentumBody';
import type { RigBody } from './rigBody';
import { prepareRigLoop, type RigLoop } from './rigLoop';
import { placeRig, type RigStart } from './rigPlacing';
import { depthBelowOrigin } from './rigShapes';
import { MOST_OBJECTS, type SnapshotLayout, snapshotLayout } from './snapshot';

/** s. */
export const YARD_STEP = 0.001;
/** Lean counted as gone over, rad. */
const TOPPLED = 0.9;

export interface YardSetting extends RigStart {
  readonly ground: GroundChoice;
  readonly switches: Switches;
  /** How the rig differs from its drawing. */
  readonly doubt: Doubt;
  /** s; YARD_STEP when left out. */
  readonly step?: number;
}

export type YardOutcome =
  | { readonly kind: 'ready'; readonly yard: Yard }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/** Opens a yard with a rig in it. Refuses what the plan refuses: a gait the legs cannot walk. */
export function openYard(setting: YardSetting): YardOutcome {
  const step = setting.step ?? YARD_STEP;
  const outcome = prepareRigLoop(setting.compiled, setting.switches, setting.doubt, step);
  if (outcome.kind === 'refused') return outcome;
  return { kind: 'ready', yard: new Yard(setting, outcome.loop, step) };
}

export class Yard {
  readonly layout: SnapshotLayout;
  readonly rig: RigBody;
  readonly objects: { readonly box: YardBox; readonly body: Body }[] = [];
  readonly standing: readonly YardBox[];
  /** Attitude of the ground plane, w first. */
  readonly groundAttitude: readonly [number, number, number, number];
  /** s. */
  time = 0;
  /** s; NaN while the rig has not gone over. */
  toppledAt = Number.NaN;
  private readonly world: World;
  private readonly floor: Body;
  /** Finger and pushes on the rig. */
  readonly hand: Hand;
  private steps = 0;
  private isFlat = true;
  private readonly arm = new Vec3();
  private readonly wheelMomentum: Float64Array;
  private readonly pair = new Float64Array(3);

  constructor(
    private readonly setting: YardSetting,
    private readonly loop: RigLoop,
    readonly step: number,
  ) {
    const { compiled } = setting;
    const { rig, whole } = compiled;
    const friction = rig.footing.kind === 'firm' ? rig.footing.friction : USUAL_FRICTION;
    this.world = createContactWorld({
      weight: whole.mass * STANDARD_GRAVITY,
      frictionOf: (a, b) => (a === this.rig || b === this.rig ? friction : USUAL_FRICTION),
    });

    const size = compiled.whole.com[2] + depthBelowOrigin(compiled);
    const ground = groundOf(setting.ground, 2 * size);
    this.floor = new Body({ mass: 0, shape: planeShape() });
    this.groundAttitude = ground.attitude;
    const [w, x, y, z] = ground.attitude;
    this.floor.quaternion.set(x, y, z, w);
    this.world.addBody(this.floor);
    this.standing = ground.boxes.filter(({ mass }) => mass === 0);
    for (const box of this.standing) this.world.addBody(placed(new Body({ mass: 0 }), box));
    for (const box of ground.boxes) if (box.mass > 0) this.lay(box);

    this.rig = placeRig(setting, loop, this.world, this.floor, step);
    this.hand = new Hand(this.rig, whole.mass, whole.com[2]);
    this.layout = snapshotLayout(compiled.model.gimbals, loop.setting.gait.legs);
    this.wheelMomentum = new Float64Array(compiled.model.gimbals);
  }

  /** Runs whole steps for a time; what is left of a step stays for the next call's caller to count. */
  run(steps: number): void {
    for (let k = 0; k < steps; k++) this.advance();
  }

  /** One step of the yard's clock. */
  advance(): void {
    const { rig, world, step } = this;
    const R = rig.R_WB;
    this.loop.move(rig, this.time, Math.atan2(R[7], R[8]), rig.rate_B[0], this.isFlat);
    this.hand.apply(this.time);
    for (const body of world.bodies) if (body instanceof MomentumBody) body.prepare(step);
    world.step(step);
    this.steps++;
    // Divided, not multiplied: a thousandth has no exact double, a thousand has.
    this.time = this.steps / (1 / step);
    this.isFlat = this.standsFlat();
    const up = rig.R_WB[8];
    if (Number.isNaN(this.toppledAt) && up < Math.cos(TOPPLED)) this.toppledAt = this.time;
  }

  /** A force (N, world) on a point of the body frame for a time, s. */
  push(
    force: readonly [number, number, number],
    point: readonly [number, number, number],
    seconds: number,
  ): void {
    this.hand.push(force, point, this.time + seconds);
  }

  /** An impulse (N*s, world) on a point of the body frame, now. */
  kick(impulse: readonly [number, number, number], point: readonly [number, number, number]): void {
    // Given over one step, so that it passes through the same law as any other force.
    const k = 1 / this.step;
    this.push([impulse[0] * k, impulse[1] * k, impulse[2] * k], point, this.step);
  }

  /** Lets a wooden block fall, its centre at a place in the world, m; false when the yard is full. */
  drop(box: YardBox): boolean {
    if (this.objects.length >= MOST_OBJECTS) return false;
    this.lay(box);
    return true;
  }

  /** A point of the body frame as it stands in the world, m. */
  worldPoint(point: readonly [number, number, number]): readonly [number, number, number] {
    this.rig.armTo(point, this.arm);
    const p = this.rig.position;
    return [p.x + this.arm.x, p.y + this.arm.y, p.z + this.arm.z];
  }

  /** Roll of the body, rad. */
  get lean(): number {
    return Math.atan2(this.rig.R_WB[7], this.rig.R_WB[8]);
  }

  private lay(box: YardBox): void {
    const body = placed(new MomentumBody({ mass: box.mass }), box) as MomentumBody;
    body.setMassProperties(box.mass, boxInertiaMatrix(box));
    this.world.addBody(body);
    this.objects.push({ box, body });
  }

  /** Whether feet press on both sides of themselves: the rig is not tipping. */
  private standsFlat(): boolean {
    const { rig: document } = this.setting.compiled;
    if (document.body.kind !== 'legged' || document.footing.kind !== 'firm') return false;
    let left = Number.NEGATIVE_INFINITY;
    let right = Number.POSITIVE_INFINITY;
    for (const contact of this.world.contacts) {
      const arm = this.rigArm(contact);
      if (!arm || contact.multiplier <= 0) continue;
      const R = this.rig.R_WB;
      const y = R[1] * arm.x + R[4] * arm.y + R[7] * arm.z;
      left = Math.max(left, y);
      right = Math.min(right, y);
    }
    return left - right > 0.5 * document.body.foot.width;
  }

  private rigArm({ bi, bj, ri, rj }: ContactEquation): Vec3 | undefined {
    return bi === this.rig ? ri : bj === this.rig ? rj : undefined;
  }

  /** Writes the present instant; `out` has layout.size numbers. Allocates nothing of size. */
  snapshot(out: Float64Array): void {
    const { layout, rig, loop } = this;
    out[layout.time] = this.time;
    out[layout.toppledAt] = this.toppledAt;
    out[layout.lean] = this.lean;
    rig.origin(out, layout.pose);
    writeAttitude(rig.quaternion, out, layout.pose + 3);
    out.set(rig.tilt, layout.tilt);
    out.set(rig.tiltRate, layout.tiltRate);
    for (let leg = 0; leg < layout.legs; leg++) {
      const at = 3 * leg;
      rig.armTo(rig.feet.subarray(at, at + 3), this.arm);
      writeVector(rig.position, out, layout.feet + at);
      addVector(this.arm, out, layout.feet + at);
      out[layout.isFootDown + leg] = 0;
    }
    writeVector(rig.position, out, layout.centreOfMass);
    this.writePressure(out);
    const { model } = loop.setting.compiled;
    this.fillWheelMomentum(model);
    arrayMomentum(model.array, rig.tilt, this.wheelMomentum, this.pair);
    out.set(this.pair, layout.momentum);
    arrayTorque(model.array, rig.tilt, rig.tiltRate, this.wheelMomentum, rig.rate_B, this.pair);
    for (let k = 0; k < 3; k++) {
      for (let i = 0; i < model.gimbals; i++) this.pair[k] -= rig.motor[i] * rig.now.spin[3 * i + k];
      out[layout.torque + k] = this.pair[k];
    }
    this.writeFinger(out);
    out[layout.objects] = this.objects.length;
    this.objects.forEach(({ body }, k) => {
      writeVector(body.position, out, layout.objects + 1 + 7 * k);
      writeAttitude(body.quaternion, out, layout.objects + 4 + 7 * k);
    });
  }

  private fillWheelMomentum(model: StarModel): void {
    const { rig } = this;
    for (let i = 0; i < model.gimbals; i++) {
      const s = rig.now.spin;
      const along = s[3 * i] * rig.rate_B[0] + s[3 * i + 1] * rig.rate_B[1] + s[3 * i + 2] * rig.rate_B[2];
      this.wheelMomentum[i] =
        model.isHeld[i] === 1 ? model.array.axialInertia[i] * (rig.spin[i] + along) : rig.spin[i];
    }
  }

  private writeFinger(out: Float64Array): void {
    const { layout } = this;
    const { finger, fingerForce } = this.hand;
    out[layout.fingerForce] = fingerForce;
    if (!finger) {
      out.fill(Number.NaN, layout.finger, layout.finger + 6);
      return;
    }
    out.set(this.worldPoint(finger.point), layout.finger);
    writeVector(finger.target, out, layout.finger + 3);
  }

  /** Feet that press, and where the rig's own contacts press on average. */
  private writePressure(out: Float64Array): void {
    const { layout, rig } = this;
    let sum = 0;
    let x = 0;
    let y = 0;
    for (const contact of this.world.contacts) {
      const arm = this.rigArm(contact);
      const force = contact.multiplier * Math.abs(contact.ni.z);
      if (!arm || force <= 0) continue;
      sum += force;
      x += force * (rig.position.x + arm.x);
      y += force * (rig.position.y + arm.y);
      const foot = rig.footOf(contact.si) ?? rig.footOf(contact.sj);
      if (foot !== undefined) out[layout.isFootDown + foot] = 1;
    }
    out[layout.centreOfPressure] = sum > 0 ? x / sum : Number.NaN;
    out[layout.centreOfPressure + 1] = sum > 0 ? y / sum : Number.NaN;
  }
}

function placed(body: Body, box: YardBox): Body {
  body.addShape(boxShape(box));
  body.position.set(...box.place);
  const [w, x, y, z] = box.attitude;
  body.quaternion.set(x, y, z, w);
  return body;
}

function writeVector(v: Vec3, out: Float64Array, at: number): void {
  out[at] = v.x;
  out[at + 1] = v.y;
  out[at + 2] = v.z;
}

function addVector(v: Vec3, out: Float64Array, at: number): void {
  out[at] += v.x;
  out[at + 1] += v.y;
  out[at + 2] += v.z;
}

function writeAttitude(q: Quaternion, out: Float64Array, at: number): void {
  out[at] = q.w;
  out[at + 1] = q.x;
  out[at + 2] = q.y;
  out[at + 3] = q.z;
}
