/** What the firmware does in a preview: follow the plan, answer the lean, or neither. */
import {
  type Controller,
  createControllerWork,
  designRegulator,
  type RollTiltPlant,
  resetController,
  stepController,
} from '../control';
import { inertiaAbout, STANDARD_GRAVITY } from '../physics';
import { type AxisSchedule, type PlanSetting, pivotHeight } from '../planning';
import type { Switches } from './evaluation';

/** Damping and speed asked of a body that has begun to tip off its feet, its toppling rate being 1. */
const TIPPING_SPEED = 2;
const TIPPING_DAMPING = 1.2;
/** Time in which the gimbals go back to their plan while the feet stand flat, s: slow enough for the feet to bear. */
const RECENTRE_TIME = 0.6;

/** The law of one axis, roll, whose planned tilt every follower copies with its sign. */
export interface PreviewLaw {
  readonly isArrayOn: boolean;
  /** Tilt of the axis planned at time 0, rad. */
  readonly startTilt: number;
  /** Advances one loop tick. `isFlat`: the feet stand flat, so that the lean says nothing. */
  readonly tick: (time: number, lean: number, leanRate: number, isFlat: boolean, dt: number) => void;
  /** Tilt commanded for the axis now, rad. */
  readonly command: () => number;
  /** Torque commanded on the body by reaction wheels now, N*m. */
  readonly bodyTorque: () => number;
}

interface Planned {
  readonly tilt: Float64Array;
  readonly torque: Float64Array;
  readonly lean: Float64Array;
  readonly leanRate: Float64Array;
  readonly interval: number;
  readonly isCyclic: boolean;
}

/** Straight-line value of a plan column (N + 1 nodes) at a time. */
function columnAt(plan: Planned, values: Float64Array, time: number): number {
  const last = values.length - 1;
  let at = time / plan.interval;
  if (plan.isCyclic) at %= last;
  if (at >= last) return values[last] as number;
  const k = Math.floor(at);
  return (values[k] as number) + (at - k) * ((values[k + 1] as number) - (values[k] as number));
}

/**
 * The law of a preview for the switches set. Off: the array rests locked at zero tilt. Without a plan the
 * schedule is all zero.
 */
export function previewLaw(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  switches: Switches,
): PreviewLaw {
  const at = setting.axes.findIndex(({ axis }) => axis === 'roll');
  const axis = setting.axes[at];
  if (!switches.isArrayOn || !axis) return lockedLaw(switches.isArrayOn);
  const nodes = setting.time.length;
  const schedule = switches.isPlanOn ? schedules[at] : undefined;
  const nothing = new Float64Array(nodes);
  const plan: Planned = {
    tilt: schedule?.tilt ?? nothing,
    torque: schedule?.torque ?? nothing,
    lean: schedule?.lean ?? nothing,
    leanRate: schedule?.leanRate ?? nothing,
    interval: setting.problem.step,
    isCyclic: setting.course.isCyclic,
  };
  if (axis.array.kind === 'reaction') return reactionLaw(setting, plan, switches.isFeedbackOn);
  return setting.kind === 'firm'
    ? tippingLaw(setting, plan, switches.isFeedbackOn)
    : leaningLaw(setting, plan, switches.isFeedbackOn);
}

const lockedLaw = (isArrayOn: boolean): PreviewLaw => ({
  isArrayOn,
  startTilt: 0,
  tick: () => {},
  command: () => 0,
  bodyTorque: () => 0,
});

/** Roll inertia and toppling stiffness of a legged body about the edge of a foot under it. */
function tippingBody(setting: PlanSetting): { inertia: number; stiffness: number } {
  const { whole } = setting.compiled;
  return {
    inertia: inertiaAbout(whole, [whole.com[0], whole.com[1], 0])[0],
    stiffness: whole.mass * STANDARD_GRAVITY * whole.com[2],
  };
}

/**
 * While the feet are flat the gimbals follow the plan, going back to it slowly after a save; once the body
 * tips, lean and lean rate drive the tilt rate so that it comes back as a damped swing.
 */
function tippingLaw(setting: PlanSetting, plan: Planned, isFeedbackOn: boolean): PreviewLaw {
  const array = setting.axes[0]?.array;
  if (!array) return lockedLaw(true);
  const { inertia, stiffness } = tippingBody(setting);
  const speed = TIPPING_SPEED * Math.sqrt(stiffness / inertia);
  const onLean = (stiffness + inertia * speed * speed) / array.momentum;
  const onRate = (2 * TIPPING_DAMPING * inertia * speed) / array.momentum;
  let off = 0;
  let command = columnAt(plan, plan.tilt, 0);
  return {
    isArrayOn: true,
    startTilt: command,
    tick: (time, lean, leanRate, isFlat, dt) => {
      if (!isFeedbackOn) off = 0;
      else if (isFlat) off *= Math.exp(-dt / RECENTRE_TIME);
      else off += (onLean * lean + onRate * leanRate) * dt;
      const planned = columnAt(plan, plan.tilt, time);
      command = Math.min(array.tiltMax, Math.max(array.tiltMin, planned + off));
      off = command - planned;
    },
    command: () => command,
    bodyTorque: () => 0,
  };
}

/** The linear plant that gains are worked out for. */
function plantOf(setting: Extract<PlanSetting, { kind: 'lean' }>): RollTiltPlant {
  const { rig } = setting.compiled;
  const axis = setting.axes[0];
  const servo = axis?.servo;
  return {
    actuator: 'tilt',
    inertia: setting.inertia,
    stiffness: -setting.stiffness,
    damping: rig.footing.kind === 'float' ? rig.footing.linearDamping : 0,
    momentum: axis?.array.momentum ?? 1,
    servoLag: servo?.lag ?? 0,
    delay: (servo?.delay ?? 0) + rig.sensing.loopDelay,
    sampleTime: 1 / rig.sensing.loopRate,
    sensorHeight: rig.sensing.height - pivotHeight(setting.compiled),
    gravity: STANDARD_GRAVITY,
  };
}

/** Sizes of lean, tilt and tilt rate that are worth the same in the regulator of a preview. */
const LEAN_WORTH = 0.02;
const TILT_WORTH = 0.5;
const RATE_WORTH = 2;

function leaningLaw(
  setting: Extract<PlanSetting, { kind: 'lean' }>,
  plan: Planned,
  isFeedbackOn: boolean,
): PreviewLaw {
  const array = setting.axes[0]?.array;
  if (!array) return lockedLaw(true);
  const { control } = setting.compiled.rig;
  const found = designRegulator(plantOf(setting), {
    lean: 1 / LEAN_WORTH ** 2,
    leanRate: 0,
    tilt: 1 / TILT_WORTH ** 2,
    tiltRate: 1 / RATE_WORTH ** 2,
  });
  const none = { lean: 0, leanRate: 0, tilt: 0, tiltRate: 0, trim: 0 };
  const computed = found
    ? { ...none, lean: found[0] as number, leanRate: found[1] as number, tilt: found[2] as number }
    : none;
  const gains = control.kind === 'feedback' ? { ...control, trim: 0 } : computed;
  const planned: Controller = {
    kind: 'planned',
    plan: {
      step: plan.interval,
      isCyclic: plan.isCyclic,
      tilt: plan.tilt,
      lean: plan.lean,
      leanRate: plan.leanRate,
    },
    gains: isFeedbackOn ? gains : none,
  };
  const controller: Controller =
    isFeedbackOn && (control.kind === 'pidTilt' || control.kind === 'pidTiltRate') ? control : planned;
  const work = createControllerWork();
  resetController(work, 0);
  let command = 0;
  return {
    isArrayOn: true,
    startTilt: 0,
    tick: (_time, lean, leanRate, _isFlat, dt) => {
      command = stepController(controller, work, lean, leanRate, 0, array.tiltMin, array.tiltMax, dt);
    },
    command: () => command,
    bodyTorque: () => 0,
  };
}

/** A reaction wheel: the planned torque, and lean and lean rate answered as a damped swing. */
function reactionLaw(setting: PlanSetting, plan: Planned, isFeedbackOn: boolean): PreviewLaw {
  const { inertia, stiffness } =
    setting.kind === 'lean'
      ? { inertia: setting.inertia, stiffness: -setting.stiffness }
      : tippingBody(setting);
  const speed = TIPPING_SPEED * Math.sqrt(Math.abs(stiffness) / inertia);
  const most = setting.axes[0]?.array.torque ?? 0;
  let torque = 0;
  return {
    isArrayOn: true,
    startTilt: 0,
    tick: (time, lean, leanRate) => {
      const asked =
        -(Math.max(0, stiffness) + inertia * speed * speed) * lean -
        2 * TIPPING_DAMPING * inertia * speed * leanRate;
      const wanted = columnAt(plan, plan.torque, time) + (isFeedbackOn ? asked : 0);
      torque = Math.min(most, Math.max(-most, wanted));
    },
    command: () => 0,
    bodyTorque: () => torque,
  };
}
