/** The rig's roll loop as linear design and the fast kernel take it. */
import {
  assembleTiltPlant,
  assembleWheelPlant,
  type Controller,
  chooseSubsteps,
  type EstimatorModel,
  LAW_GAINS,
  type Law,
  mountServo,
  nameLaw,
  type RollActuator,
  type RollDisturbance,
  type RollLoopModel,
  type RollTiltPlant,
  readGains,
  type ServoGimbal,
} from '../control';
import { compileRighting, inertiaAbout, rightingArm, STANDARD_GRAVITY } from '../physics';
import {
  type ArrayAxis,
  type AxisSchedule,
  type GimbalGroup,
  gimbalGroups,
  type LeanPlanSetting,
  type PlanSetting,
  pivotHeight,
} from '../planning';
import type { Gyro } from '../rig';
import { AS_DRAWN, type Build, builtFall, builtServo } from './build';
import type { Switches } from './evaluation';
import { feedbackOf, plannedController } from './previewLaw';
import { LOST } from './previewStep';
import { builtSensing } from './sensing';

/** What a linear judgement of a rig's loop needs, and which law its gains are for. */
export interface LoopSetting {
  readonly plant: RollTiltPlant;
  readonly estimator: EstimatorModel;
  readonly law: Law;
  /** Gains the rig names; undefined when they are to be computed. */
  readonly gains: Float64Array | undefined;
  readonly controller: Controller | undefined;
  /** The body topples rather than rights itself. */
  readonly topples: boolean;
}

export type LoopSettingOutcome =
  | { readonly kind: 'loop'; readonly loop: LoopSetting }
  /** There is nothing to close a loop with, or nothing a linear judgement can say. */
  | { readonly kind: 'none'; readonly sentence: string };

/** s, lag with which a reaction wheel's motor takes up its torque: an electrical time constant, common practice. */
const MOTOR_LAG = 0.002;

/**
 * The roll loop of a rig's jobs. Feet on the ground are judged as they tip about an edge: that is when the loop has
 * work to do.
 */
export function setUpLoop(setting: PlanSetting): LoopSettingOutcome {
  const { rig, whole } = setting.compiled;
  const { control } = rig;
  const axis = setting.axes.find((found) => found.axis === 'roll');
  if (control.kind === 'passive' || rig.array.gyros.some(({ drive }) => drive.kind === 'free')) {
    return {
      kind: 'none',
      sentence: 'The gimbals are free: no servo, so no gains. Run the trial to see whether they hold.',
    };
  }
  if (!axis) return { kind: 'none', sentence: 'No wheel of this array pushes in roll.' };
  const isReaction = axis.array.kind === 'reaction';
  const named = nameLaw(control, isReaction);
  const controller = named.kind === 'given' ? named.controller : undefined;
  if (controller && (controller.kind === 'reactionWheel') !== isReaction) {
    return {
      kind: 'none',
      sentence: isReaction
        ? 'This law is for gimbals; the array is a reaction wheel.'
        : 'This law is for a reaction wheel; the array tilts its gimbals.',
    };
  }
  const isFirm = setting.kind === 'firm';
  const body = {
    inertia: isFirm ? inertiaAbout(whole, [whole.com[0], whole.com[1], 0])[0] : setting.inertia,
    stiffness: isFirm ? whole.mass * STANDARD_GRAVITY * whole.com[2] : -setting.stiffness,
    damping: rig.footing.kind === 'float' ? rig.footing.linearDamping : 0,
    momentum: axis.array.momentum,
    lineHeight: pivotHeight(setting.compiled),
    gravity: STANDARD_GRAVITY,
  };
  const plant =
    isReaction || !axis.servo
      ? assembleWheelPlant(body, MOTOR_LAG, rig.sensing)
      : assembleTiltPlant(body, axis.servo, rig.sensing);
  const read = controller && readGains(controller);
  // Feet that stand flat bring the tilt back by themselves, so there the law need not.
  const computed =
    named.kind === 'to-compute' ? (isFirm && !isReaction ? 'pidTiltRate' : named.law) : 'feedback';
  return {
    kind: 'loop',
    loop: {
      plant,
      estimator: builtSensing(setting.compiled, AS_DRAWN).estimator,
      law: read?.law ?? computed,
      gains: read?.gains,
      controller,
      topples: body.stiffness > 0,
    },
  };
}

/** Names of a law's gains in order, and their units as a ratio of SI units. */
export const gainNames = (law: Law): readonly string[] => LAW_GAINS[law];

/** Whether the fast kernel can run this rig: it leans, and servos tilt its gimbals. */
export function suitsKernel(setting: PlanSetting): setting is LeanPlanSetting {
  const axis = setting.axes[0];
  return (
    setting.kind === 'lean' &&
    axis?.axis === 'roll' &&
    axis.array.kind === 'gimballed' &&
    !axis.isSteered &&
    setting.compiled.rig.array.gyros.every(({ drive }) => drive.kind === 'servo' || drive.kind === 'geared')
  );
}

/** A run for the fast kernel. */
export interface KernelRun {
  readonly model: RollLoopModel;
  readonly disturbance: RollDisturbance;
}

/**
 * The kernel's description of a leaning rig as built.
 *
 * @param computed   for gains that the rig leaves to be computed
 * @param surprises  pairs of time (s) and angular impulse about the roll line (N*m*s) that no plan knows of
 *
 * O(nodes).
 */
export function kernelRun(
  setting: LeanPlanSetting,
  schedules: readonly AxisSchedule[],
  switches: Switches,
  computed: Controller | undefined,
  build: Build,
  surprises: readonly (readonly [number, number])[] = [],
): KernelRun {
  const { compiled } = setting;
  const { rig } = compiled;
  const { inertia, stiffness } = builtFall(setting, build);
  const axis = setting.axes[0] as ArrayAxis;
  const actuator = kernelActuator(setting, build);
  const { sensor, estimator } = builtSensing(compiled, build);
  const float = rig.footing.kind === 'float' ? rig.footing : undefined;
  const controller: Controller = switches.isArrayOn
    ? plannedController(
        planColumns(setting, schedules, switches),
        switches.isFeedbackOn ? feedbackOf(setting, axis, computed) : undefined,
      )
    : { kind: 'pidTilt', kp: 0, ki: 0, kd: 0 };
  return {
    model: {
      body: {
        inertia,
        stiffness,
        ...rightingCurve(setting, build),
        damping: float?.linearDamping ?? 0,
        quadraticDamping: float?.quadraticDamping ?? 0,
        fallenAt: LOST.lean,
      },
      actuator,
      sensor,
      estimator,
      controller,
      loopDelay: rig.sensing.loopDelay,
      loopJitter: rig.sensing.loopJitter,
      tiltMin: axis.array.tiltMin,
      tiltMax: axis.array.tiltMax,
      substeps: Math.max(
        chooseSubsteps(actuator, inertia, sensor.sampleTime),
        Math.ceil(sensor.sampleTime / LONGEST_STEP - 1e-9),
      ),
    },
    disturbance: kernelDisturbance(setting, build, surprises),
  };
}

/** s, plant step: shorter than any servo's own time constant. */
const LONGEST_STEP = 0.002;

const planColumns = (setting: LeanPlanSetting, schedules: readonly AxisSchedule[], switches: Switches) => {
  const schedule = switches.isPlanOn ? schedules[0] : undefined;
  const nothing = new Float64Array(setting.time.length);
  return {
    step: setting.problem.step,
    isCyclic: false,
    tilt: schedule?.tilt ?? nothing,
    lean: schedule?.lean ?? nothing,
    leanRate: schedule?.leanRate ?? nothing,
  };
};

function kernelActuator(setting: LeanPlanSetting, build: Build): Extract<RollActuator, { kind: 'servo' }> {
  const { compiled } = setting;
  const { gyros } = compiled.rig.array;
  const gimbals = gimbalGroups(compiled)
    .filter((group) => Math.abs(group.sine[0] as number) > 1e-9)
    .map((group): ServoGimbal => {
      const { min, max } = gyros[group.leader]?.tilt ?? { min: 0, max: 0 };
      const frames = group.members.map(({ index }) => (gyros[index] as Gyro).gimbal);
      return {
        servo: mountServo(builtServo(group.servo, frames, build), {
          gimbalInertia: carriedInertia(setting, group),
          tiltMin: min,
          tiltMax: max,
        }),
        momentum: (group.sine[0] as number) * build.wheelSpeed,
        yawMomentum: (group.cosine[2] as number) * build.wheelSpeed,
        follow: Math.sign(group.sine[0] as number),
        spin: { kind: 'constant' },
      };
    });
  return { kind: 'servo', gimbals };
}

const carriedInertia = ({ compiled }: LeanPlanSetting, group: GimbalGroup): number =>
  group.members.reduce((sum, { index }) => sum + (compiled.model.hingeInertia[index] as number), 0);

const CURVE_POINTS = 129;

/** A float's righting moment over the rolls a run may reach; nothing on land, where the sine is exact. */
function rightingCurve(
  { compiled }: LeanPlanSetting,
  build: Build,
): { readonly curve?: Float64Array; readonly curveReach?: number } {
  const { floating, whole } = compiled;
  if (!floating) return {};
  const righting = compileRighting(floating.footing.righting);
  const weight = STANDARD_GRAVITY * (whole.mass + (build.mass - 1) * compiled.carrier.mass);
  const raised = STANDARD_GRAVITY * whole.mass * build.centreUp;
  const reach = 1;
  const curve = Float64Array.from({ length: CURVE_POINTS }, (_, i) => {
    const roll = reach * ((2 * i) / (CURVE_POINTS - 1) - 1);
    return -weight * rightingArm(righting, roll) + raised * Math.sin(roll);
  });
  return { curve, curveReach: reach };
}

function kernelDisturbance(
  setting: LeanPlanSetting,
  build: Build,
  surprises: readonly (readonly [number, number])[],
): RollDisturbance {
  const { whole, rig, floating } = setting.compiled;
  const weight = whole.mass * STANDARD_GRAVITY;
  const pivot =
    rig.footing.kind === 'edge'
      ? rig.footing.offset
      : rig.footing.kind === 'point'
        ? rig.footing.position[1]
        : 0;
  const drawn = floating ? floating.trimMoment : weight * (whole.com[1] - pivot);
  const lopsided = -(drawn + weight * build.centreAcross);
  const shoves = [
    ...setting.disturbances.jumps.map(({ time, roll }) => [time, roll * build.shove] as const),
    ...surprises.map(([time, roll]) => [time, roll * build.shove] as const),
  ].sort(([a], [b]) => a - b);
  return {
    step: setting.problem.step,
    isCyclic: false,
    moment: setting.outside.map((moment) => moment + lopsided),
    shoves: Float64Array.from(shoves.flat()),
  };
}
