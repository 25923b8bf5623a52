/** What the firmware does in a preview: follow the plan, answer the lean, or neither. */
import {
  assembleTiltPlant,
  buildController,
  type Controller,
  createControllerWork,
  designRegulator,
  nameLaw,
  type PlanColumns,
  resetController,
  stepController,
} from '../control';
import { inertiaAbout, STANDARD_GRAVITY } from '../physics';
import {
  type ArrayAxis,
  type AxisArray,
  type AxisSchedule,
  type PlanSetting,
  pivotHeight,
} from '../planning';
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
  /**
   * Advances one loop tick. `isFlat`: the feet stand flat, so that the lean says nothing. `gained`: N*m*s that
   * reaction wheels have taken up since the start.
   */
  readonly tick: (
    time: number,
    lean: number,
    leanRate: number,
    isFlat: boolean,
    dt: number,
    gained?: number,
  ) => void;
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
 * The law of a run for the switches set. Off: the array rests locked at zero tilt. Without a plan the schedule is
 * all zero.
 *
 * @param computed  the controller to use where the rig leaves its gains to be computed; without one, gains that
 *                  take the servo as quick, worked out on the spot
 */
export function previewLaw(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  switches: Switches,
  computed?: Controller,
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
  const controller = switches.isFeedbackOn ? feedbackOf(setting, axis, computed) : undefined;
  if (axis.array.kind === 'reaction') return reactionLaw(axis.array, plan, controller);
  return setting.kind === 'firm'
    ? tippingLaw(axis.array, plan, controller)
    : leaningLaw(axis.array, plan, controller);
}

/** What answers the lean: the law the rig names, the one computed for it, or quick gains in its place. */
export function feedbackOf(
  setting: PlanSetting,
  axis: ArrayAxis,
  computed: Controller | undefined,
): Controller | undefined {
  const isReaction = axis.array.kind === 'reaction';
  const named = nameLaw(setting.compiled.rig.control, isReaction);
  if (named.kind === 'given') {
    // A law for the other kind of array, or for no servo at all, moves nothing here.
    const suits = isReaction === (named.controller.kind === 'reactionWheel');
    return suits && named.controller.kind !== 'passive' ? named.controller : undefined;
  }
  if (computed) return computed;
  if (isReaction) return quickReaction(setting);
  return setting.kind === 'firm' ? quickTipping(setting, axis) : quickLeaning(setting, axis);
}

const lockedLaw = (isArrayOn: boolean): PreviewLaw => ({
  isArrayOn,
  startTilt: 0,
  tick: () => {},
  command: () => 0,
  bodyTorque: () => 0,
});

/** Roll inertia and toppling stiffness of a body about the line it leans about, or would tip about. */
function fallingBody(setting: PlanSetting): { inertia: number; stiffness: number } {
  if (setting.kind === 'lean') return { inertia: setting.inertia, stiffness: -setting.stiffness };
  const { whole } = setting.compiled;
  return {
    inertia: inertiaAbout(whole, [whole.com[0], whole.com[1], 0])[0],
    stiffness: whole.mass * STANDARD_GRAVITY * whole.com[2],
  };
}

/** Lean and lean rate drive the tilt rate so that a body that has begun to tip comes back as a damped swing. */
function quickTipping(setting: PlanSetting, { array }: ArrayAxis): Controller {
  const { inertia, stiffness } = fallingBody(setting);
  const speed = TIPPING_SPEED * Math.sqrt(stiffness / inertia);
  return {
    kind: 'pidTiltRate',
    kp: (stiffness + inertia * speed * speed) / array.momentum,
    ki: 0,
    kd: (2 * TIPPING_DAMPING * inertia * speed) / array.momentum,
  };
}

/** Lean and lean rate answered by the motor as a damped swing. */
function quickReaction(setting: PlanSetting): Controller {
  const { inertia, stiffness } = fallingBody(setting);
  const speed = TIPPING_SPEED * Math.sqrt(Math.abs(stiffness) / inertia);
  return {
    kind: 'reactionWheel',
    lean: Math.max(0, stiffness) + inertia * speed * speed,
    leanRate: 2 * TIPPING_DAMPING * inertia * speed,
    speed: 0,
  };
}

/** Sizes of lean, tilt and tilt rate that are worth the same in the quick regulator. */
const LEAN_WORTH = 0.02;
const TILT_WORTH = 0.5;
const RATE_WORTH = 2;

function quickLeaning(setting: PlanSetting, axis: ArrayAxis): Controller | undefined {
  const { rig } = setting.compiled;
  if (!axis.servo) return undefined;
  const plant = assembleTiltPlant(
    {
      ...fallingBody(setting),
      damping: rig.footing.kind === 'float' ? rig.footing.linearDamping : 0,
      momentum: axis.array.momentum,
      lineHeight: pivotHeight(setting.compiled),
      gravity: STANDARD_GRAVITY,
    },
    axis.servo,
    rig.sensing,
  );
  const found = designRegulator(plant, {
    lean: 1 / LEAN_WORTH ** 2,
    leanRate: 0,
    tilt: 1 / TILT_WORTH ** 2,
    tiltRate: 1 / RATE_WORTH ** 2,
  });
  return found && buildController('feedback', [...found, 0, 0]);
}

/**
 * While the feet are flat the gimbals follow the plan, going back to it slowly after a save; once the body tips,
 * the controller adds to the plan.
 */
function tippingLaw(array: AxisArray, plan: Planned, controller: Controller | undefined): PreviewLaw {
  const work = createControllerWork();
  let off = 0;
  let wasFlat = true;
  let command = columnAt(plan, plan.tilt, 0);
  return {
    isArrayOn: true,
    startTilt: command,
    tick: (time, lean, leanRate, isFlat, dt) => {
      const planned = columnAt(plan, plan.tilt, time);
      const least = array.tiltMin - planned;
      const most = array.tiltMax - planned;
      if (!controller) off = 0;
      else if (isFlat) off *= Math.exp(-dt / RECENTRE_TIME);
      else {
        if (wasFlat) resetController(work, off);
        off = stepController(controller, work, lean, leanRate, 0, least, most, dt);
      }
      wasFlat = isFlat;
      off = Math.min(most, Math.max(least, off));
      command = planned + off;
    },
    command: () => command,
    bodyTorque: () => 0,
  };
}

/** The controller of a body that leans, its plan put in front of it where the law can take one. */
export function plannedController(plan: PlanColumns, controller: Controller | undefined): Controller {
  if (controller && (controller.kind === 'pidTilt' || controller.kind === 'pidTiltRate')) return controller;
  const none = { lean: 0, leanRate: 0, tilt: 0, tiltRate: 0, trim: 0 };
  return { kind: 'planned', plan, gains: controller?.kind === 'feedback' ? controller : none };
}

function leaningLaw(array: AxisArray, plan: Planned, feedback: Controller | undefined): PreviewLaw {
  const controller = plannedController({ ...plan, step: plan.interval }, feedback);
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

/** A reaction wheel: the planned torque, and what the controller answers. */
function reactionLaw(array: AxisArray, plan: Planned, controller: Controller | undefined): PreviewLaw {
  const most = array.torque;
  const work = createControllerWork();
  let torque = 0;
  return {
    isArrayOn: true,
    startTilt: 0,
    tick: (time, lean, leanRate, _isFlat, dt, gained = 0) => {
      const onWheel = controller ? stepController(controller, work, lean, leanRate, gained, 0, 0, dt) : 0;
      const wanted = columnAt(plan, plan.torque, time) - onWheel;
      torque = Math.min(most, Math.max(-most, wanted));
    },
    command: () => 0,
    bodyTorque: () => torque,
  };
}
