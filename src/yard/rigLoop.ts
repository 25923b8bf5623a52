/** What moves the rig's gimbals and legs in the yard: the same plan, law and servos as in the preview. */
import {
  createServoWork,
  mountServo,
  resetServo,
  SERVO_STATE,
  type ServoModel,
  type ServoWork,
  sendCommand,
  stepServo,
} from '../core/control';
import type { CompiledRig } from '../core/physics';
import {
  type AxisSchedule,
  bodyStateAt,
  createPlanWork,
  defaultPlanOptions,
  footStateAt,
  type GimbalGroup,
  gimbalGroups,
  type PlanSetting,
  planMomentum,
  setUpPlan,
} from '../core/planning';
import type { Refusal } from '../core/rig';
import {
  AS_DRAWN,
  builtServo,
  type Doubt,
  MOVING_BASE,
  movingBaseCourse,
  PlanPlace,
  type PreviewLaw,
  previewLaw,
  type Switches,
} from '../core/trial';
import type { RigBody } from './rigBody';

interface Actuator {
  readonly group: GimbalGroup;
  readonly sign: number;
  readonly servo: ServoModel;
  readonly work: ServoWork;
}

export type RigLoopOutcome =
  | { readonly kind: 'ready'; readonly loop: RigLoop }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/**
 * Plans the rig's gait and makes its loop ready. The jobs' disturbances are left out: in the yard they come from
 * the user's hand.
 *
 * @param step  s, of the yard
 */
export function prepareRigLoop(
  compiled: CompiledRig,
  switches: Switches,
  doubt: Doubt,
  step: number,
): RigLoopOutcome {
  const outcome = setUpPlan(undisturbed(compiled));
  if (outcome.kind === 'refused') return outcome;
  const { setting } = outcome;
  let schedules: readonly AxisSchedule[] = [];
  if (setting.axes.length > 0) {
    const plan = planMomentum(setting.problem, defaultPlanOptions, createPlanWork());
    if (plan.kind === 'planned') schedules = plan.axes;
  }
  return { kind: 'ready', loop: new RigLoop(setting, schedules, switches, doubt, step) };
}

const undisturbed = (compiled: CompiledRig): CompiledRig => {
  const { rig } = compiled;
  return { ...compiled, rig: { ...rig, jobs: { ...rig.jobs, sequence: [] } } };
};

export class RigLoop {
  private readonly law: PreviewLaw;
  private readonly actuators: readonly Actuator[];
  private readonly motorSigns: Float64Array;
  private readonly base: Float64Array;
  private readonly place: PlanPlace;
  private readonly state = new Float64Array(9);
  private readonly bodyState = new Float64Array(9);
  private readonly stepsPerTick: number;
  /** N*m asked of reaction wheels, not yet in force. */
  private readonly asked: number[];
  private steps = 0;

  constructor(
    readonly setting: PlanSetting,
    schedules: readonly AxisSchedule[],
    switches: Switches,
    private readonly doubt: Doubt,
    private readonly step: number,
  ) {
    const { compiled } = setting;
    const { rig, model } = compiled;
    this.stepsPerTick = Math.max(1, Math.round(1 / (rig.sensing.loopRate * step)));
    this.law = previewLaw(setting, schedules, switches);
    const roll = setting.axes.find(({ axis }) => axis === 'roll');
    const isReaction = roll?.array.kind === 'reaction';
    const signOf = (gyro: number): number =>
      roll?.followers.find((follower) => follower.gyro === gyro)?.sign ?? 0;
    this.motorSigns = Float64Array.from({ length: model.gimbals }, (_, i) => (isReaction ? signOf(i) : 0));
    this.actuators = gimbalGroups(compiled).map((group): Actuator => {
      const { min, max } = rig.array.gyros[group.leader].tilt;
      const inertia = group.members.reduce((sum, { index }) => sum + model.hingeInertia[index], 0);
      const gimbals = group.members.map(({ index }) => rig.array.gyros[index].gimbal);
      const built = builtServo(group.servo, gimbals, { ...AS_DRAWN, ...doubt });
      const servo = mountServo(built, { gimbalInertia: inertia, tiltMin: min, tiltMax: max });
      const work = createServoWork(servo, 1 / step, rig.sensing.loopDelay);
      const sign = isReaction ? 0 : signOf(group.leader);
      resetServo(work, sign * this.law.startTilt);
      return { group, sign, servo, work };
    });
    this.base = movingBaseCourse(rig, setting.course);
    this.place = new PlanPlace(setting);
    this.asked = new Array(Math.round(rig.sensing.loopDelay / step) + 1).fill(0);
  }

  /** Wheel speeds as the doubted rig has them, rad/s. */
  speeds(): Float64Array {
    return this.setting.compiled.speeds.map((speed) => speed * this.doubt.wheelSpeed);
  }

  /** Tilts at the start, into the body's. */
  startTilts(body: RigBody): void {
    for (const { group, work } of this.actuators) {
      for (const { index, ratio } of group.members) {
        body.tilt[index] = ratio * work.state[SERVO_STATE.tilt];
        body.tiltRate[index] = 0;
      }
    }
  }

  /**
   * Legs at an instant, as seen from the body.
   *
   * @param base  16: see weighRig
   * @param feet  3 x legs, m, body frame
   */
  placeLegs(time: number, base: Float64Array, feet: Float64Array): void {
    const { gait, compiled } = this.setting;
    this.place.moveTo(time);
    for (let j = 0; j < 16; j++) base[j] = this.place.valueOf(this.base, MOVING_BASE, j);
    base[2] += compiled.whole.mass * this.doubt.centreAcross;
    bodyStateAt(gait.body, time, this.bodyState);
    for (let leg = 0; leg < gait.legs; leg++) {
      footStateAt(gait.feet[leg], time, this.state);
      for (let k = 0; k < 3; k++) feet[3 * leg + k] = this.state[k] - this.bodyState[k];
    }
  }

  /** Velocity of the body's origin that the gait begins with, m/s. */
  startVelocity(): readonly [number, number, number] {
    const { gait } = this.setting;
    bodyStateAt(gait.body, 0, this.bodyState);
    return [gait.velocity[0] + this.bodyState[3], gait.velocity[1] + this.bodyState[4], this.bodyState[5]];
  }

  /** Where the gait begins with the body, m from the walking frame. */
  startPlace(): readonly [number, number, number] {
    bodyStateAt(this.setting.gait.body, 0, this.bodyState);
    return [this.bodyState[0], this.bodyState[1], this.bodyState[2]];
  }

  /**
   * One step of loop and servos: tells the body how its gimbals, motors and legs will be at the end of it.
   *
   * @param lean, leanRate  rad, rad/s: roll as the sensor sees it
   * @param isFlat          whether the feet stand flat
   */
  move(body: RigBody, time: number, lean: number, leanRate: number, isFlat: boolean): void {
    const { law, step } = this;
    const { loopDelay } = this.setting.compiled.rig.sensing;
    if (this.steps % this.stepsPerTick === 0) {
      law.tick(time, lean, leanRate, isFlat, this.stepsPerTick * step, this.gainedMomentum(body));
    }
    this.steps++;
    for (const { group, sign, servo, work } of this.actuators) {
      if (!law.isArrayOn) continue;
      sendCommand(servo, work, sign * law.command(), loopDelay);
      stepServo(servo, work, gyroscopicLoad(body, group), step);
      for (const { index, ratio } of group.members) {
        body.nextTilt[index] = ratio * work.state[SERVO_STATE.tilt];
        body.nextTiltRate[index] = ratio * work.state[SERVO_STATE.rate];
      }
    }
    this.driveWheels(body);
    this.placeLegs(time + step, body.nextBase, body.nextFeet);
  }

  /** Torques on reaction wheels: each its share of what the loop asks, after the loop's delay and up to its top speed. */
  private driveWheels(body: RigBody): void {
    const { rig } = this.setting.compiled;
    const wheels = this.motorSigns.reduce((sum, sign) => sum + Math.abs(sign), 0);
    if (wheels === 0) return;
    const late = this.asked.shift() as number;
    this.asked.push(this.law.bodyTorque());
    for (let i = 0; i < this.motorSigns.length; i++) {
      const torque = (-this.motorSigns[i] * late) / wheels;
      const top = rig.array.gyros[i].motor.velocityConstant * rig.power.cells * rig.power.cellVoltage;
      const speed = body.spin[i] / body.model.array.axialInertia[i];
      body.motor[i] = Math.abs(speed) >= top && torque * speed > 0 ? 0 : torque;
    }
  }

  /** N*m*s about roll that reaction wheels have taken up since the start. */
  private gainedMomentum(body: RigBody): number {
    let sum = 0;
    for (let i = 0; i < this.motorSigns.length; i++) {
      if (this.motorSigns[i] === 0) continue;
      const start = this.setting.compiled.speeds[i] * this.doubt.wheelSpeed;
      sum += this.motorSigns[i] * (body.spin[i] - start * body.model.array.axialInertia[i]);
    }
    return sum;
  }
}

/** N*m on a servo from its wheels as the body turns: the sum of h (rate . d(spin axis)/d(tilt)), gears counted. */
function gyroscopicLoad(body: RigBody, group: GimbalGroup): number {
  const { model, spin, rate_B, now } = body;
  let load = 0;
  for (const { index, ratio } of group.members) {
    const h = model.isHeld[index] === 1 ? model.array.axialInertia[index] * spin[index] : spin[index];
    const s = now.spinSlope;
    const k = 3 * index;
    load += ratio * h * (s[k] * rate_B[0] + s[k + 1] * rate_B[1] + s[k + 2] * rate_B[2]);
  }
  return load;
}
