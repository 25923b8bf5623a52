/**
 * The closed loop as it is shown while the rig is being built: exact roll dynamics of the star, the planned
 * tilt sent to the servos, feedback on the lean, and a rig that differs a little from the drawing. Sensors are
 * taken as perfect here; noise, drift and jitter belong to the trial proper.
 *
 * Feet flat on the ground do not turn: the centre of pressure takes up what the array leaves. Once it would
 * pass an edge of the support the body tips about that edge, as an edge-footed star whose line moves with the
 * gait, until it comes back flat and lands without a bounce.
 */
import { STANDARD_GRAVITY, stepRk4 } from '../physics';
import type { AxisSchedule, LeanPlanSetting, PlanSetting } from '../planning';
import type { Switches } from './evaluation';
import type { Motion } from './motion';
import { createMotion } from './motionRecorder';
import { stepFirm } from './previewFirm';
import {
  type Doubt,
  findTorque,
  moveServos,
  type PreviewRun,
  prepareRun,
  readGimbals,
  USUAL_DOUBT,
  writeGimbals,
} from './previewRun';
import { recordSample } from './recordSample';

/** Lean past which the motion is stopped where it is, rad. */
const GONE = 1.2;
/** Lean counted as going over, rad: feet no longer where the gait wants them, or water over the side. */
const LOST: Readonly<Record<PlanSetting['kind'], number>> = { firm: 0.3, lean: 0.9 };
const LONGEST_STEP = 0.005;
const SAMPLES_PER_SECOND = 100;

export interface PreviewResult {
  readonly motion: Motion;
  readonly outcome: { readonly kind: 'holds' } | { readonly kind: 'falls'; readonly at: number };
}

/**
 * Runs a preview.
 *
 * @param setting    what was planned, or would have been
 * @param schedules  the plan's axes; empty when there is none
 * @param seconds    length; a gait is run for the nearest whole number of cycles
 */
export function runPreview(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  switches: Switches,
  seconds: number,
  doubt: Doubt = USUAL_DOUBT,
): PreviewResult {
  const { gait, course, compiled } = setting;
  const length = course.isCyclic ? Math.max(1, Math.round(seconds / gait.period)) * gait.period : seconds;
  const intervals = Math.max(2, Math.round(length * SAMPLES_PER_SECOND));
  const longest = Math.min(LONGEST_STEP, 1 / compiled.rig.sensing.loopRate);
  const perSample = Math.max(1, Math.ceil(length / intervals / longest - 1e-9));
  const dt = length / intervals / perSample;
  const run = prepareRun(setting, schedules, switches, doubt, 1 / dt);
  const motion = createMotion(setting, intervals + 1, length / intervals);
  let fallenAt: number | undefined;
  for (let sample = 0; sample <= intervals; sample++) {
    recordSample(run, schedules, motion, sample);
    if (sample === intervals) break;
    run.meanTorque.fill(0);
    for (let k = 0; k < perSample; k++) {
      const time = (sample * perSample + k) * dt;
      if (Math.abs(run.state[0]) < GONE) stepRun(run, time, dt);
      for (let axis = 0; axis < 3; axis++) run.meanTorque[axis] += run.torque[axis] / perSample;
      if (fallenAt === undefined && Math.abs(run.state[0]) > LOST[setting.kind]) fallenAt = time;
    }
  }
  return { motion, outcome: fallenAt === undefined ? { kind: 'holds' } : { kind: 'falls', at: fallenAt } };
}

function stepRun(run: PreviewRun, time: number, dt: number): void {
  run.place.moveTo(time);
  const { model, state, effort, law } = run;
  const n = model.gimbals;
  const isFlat = run.setting.kind === 'firm' && run.side === 0;
  const leanRate = state[model.baseSpeedAt];
  law.tick(time, state[0], leanRate, isFlat, dt);
  effort.fill(0);
  if (law.isArrayOn) moveServos(run, leanRate, dt);
  readGimbals(run, dt);
  for (let i = 0; i < n; i++) effort[n + i] = -run.motorSigns[i] * law.bodyTorque();
  if (run.setting.kind === 'firm') stepFirm(run, run.setting, time, dt);
  else stepLeaning(run, run.setting, time, dt);
  writeGimbals(run);
  findTorque(run);
}

/** Any footing that leans freely: disturbances, and weight that the footing's own law does not know of. */
function stepLeaning(run: PreviewRun, setting: LeanPlanSetting, time: number, dt: number): void {
  const { compiled, disturbances } = setting;
  const { model, state, effort, doubt, place } = run;
  const weight = compiled.whole.mass * STANDARD_GRAVITY;
  const cos = Math.cos(state[0]);
  const trim = compiled.floating?.trimMoment ?? 0;
  const outside = place.valueOf(setting.outside) - (trim + weight * doubt.centreAcross) * cos;
  effort[2 * model.gimbals] += outside;
  for (const jump of disturbances.jumps) {
    if (jump.time >= time && jump.time < time + dt) state[model.baseSpeedAt] += jump.roll / setting.inertia;
  }
  stepRk4(run.derivative, time, state, dt, run.rk4);
}
