/**
 * The closed loop as it is shown while the rig is being built: exact roll dynamics of the star, the planned
 * tilt sent to the servos, feedback on the lean, and a rig that differs a little from the drawing. Sensors are
 * taken as perfect here; noise, drift and jitter belong to the trial proper.
 *
 * Feet flat on the ground do not turn: the centre of pressure takes up what the array leaves. Once it would
 * pass an edge of the support the body tips about that edge, as an edge-footed star whose line moves with the
 * gait, until it comes back flat and lands without a bounce.
 */
import type { AxisSchedule, PlanSetting } from '../planning';
import { AS_DRAWN, type Doubt, USUAL_DOUBT } from './build';
import type { Switches } from './evaluation';
import type { Motion } from './motion';
import { createMotion } from './motionRecorder';
import { prepareRun } from './previewRun';
import { advanceRun, GONE, LOST, tickRun } from './previewStep';
import { recordSample } from './recordSample';
import { perfectSense } from './sensing';

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
  const run = prepareRun(setting, schedules, switches, {
    build: { ...AS_DRAWN, ...doubt },
    sense: perfectSense(),
    length,
    commandRate: 1 / dt,
  });
  const motion = createMotion(setting, intervals + 1, length / intervals);
  let fallenAt: number | undefined;
  for (let sample = 0; sample <= intervals; sample++) {
    recordSample(run, schedules, motion, sample);
    if (sample === intervals) break;
    run.meanTorque.fill(0);
    for (let k = 0; k < perSample; k++) {
      const time = (sample * perSample + k) * dt;
      if (Math.abs(run.state[0]) < GONE) {
        tickRun(run, time, dt, compiled.rig.sensing.loopDelay);
        advanceRun(run, time, dt);
      }
      for (let axis = 0; axis < 3; axis++) run.meanTorque[axis] += run.torque[axis] / perSample;
      if (fallenAt === undefined && Math.abs(run.state[0]) > LOST[setting.kind]) fallenAt = time;
    }
  }
  return { motion, outcome: fallenAt === undefined ? { kind: 'holds' } : { kind: 'falls', at: fallenAt } };
}
