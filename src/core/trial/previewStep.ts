/** One tick of the loop and one step of the body: what preview and trial share. */
import { STANDARD_GRAVITY, stepRk4 } from '../physics';
import type { LeanPlanSetting, PlanSetting } from '../planning';
import { knock, stepFirm } from './previewFirm';
import {
  driveWheels,
  findTorque,
  gainedMomentum,
  moveServos,
  type PreviewRun,
  readGimbals,
  sendCommands,
  writeGimbals,
} from './previewRun';

/** Lean past which the motion is stopped where it is, rad. */
export const GONE = 1.2;
/** Lean counted as going over, rad: feet no longer where the gait wants them, or water over the side. */
export const LOST: Readonly<Record<PlanSetting['kind'], number>> = { firm: 0.3, lean: 0.9 };

/** The firmware's turn: sense, decide, send. `tick`: s to its next turn; `late`: s until its commands are in force. */
export function tickRun(run: PreviewRun, time: number, tick: number, late: number): void {
  const { state, model, setting, sense } = run;
  run.place.moveTo(time);
  const isFlat = setting.kind === 'firm' && run.side === 0;
  const sway = setting.kind === 'firm' ? run.place.valueOf(setting.course.bodyAcceleration, 3, 1) : 0;
  sense.look(time, state[0], state[model.baseSpeedAt], sway, isFlat);
  run.law.tick(time, sense.lean, sense.leanRate, isFlat, tick, gainedMomentum(run));
  if (run.law.isArrayOn) sendCommands(run, late);
}

/** The body's step. */
export function advanceRun(run: PreviewRun, time: number, dt: number): void {
  const { model, state, effort, setting } = run;
  run.place.moveTo(time);
  for (const jump of run.jumps) {
    if (jump.time < time || jump.time >= time + dt) continue;
    if (setting.kind === 'firm') knock(run, setting, time, jump.roll);
    else state[model.baseSpeedAt] += jump.roll / run.leanInertia;
  }
  effort.fill(0);
  if (run.law.isArrayOn) moveServos(run, state[model.baseSpeedAt], dt);
  readGimbals(run, dt);
  driveWheels(run, dt);
  if (setting.kind === 'firm') stepFirm(run, setting, time, dt);
  else stepLeaning(run, setting, time, dt);
  writeGimbals(run);
  findTorque(run);
}

/** Any footing that leans freely: disturbances, and weight that the footing's own law does not know of. */
function stepLeaning(run: PreviewRun, setting: LeanPlanSetting, time: number, dt: number): void {
  const { compiled } = setting;
  const { model, state, effort, build, place } = run;
  const weight = compiled.whole.mass * STANDARD_GRAVITY;
  const cos = Math.cos(state[0]);
  const trim = compiled.floating?.trimMoment ?? 0;
  const outside = place.valueOf(setting.outside) - (trim + weight * build.centreAcross) * cos;
  effort[2 * model.gimbals] += outside + run.heel * Math.sin(state[0]);
  stepRk4(run.derivative, time, state, dt, run.rk4);
}
