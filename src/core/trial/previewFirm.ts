/** A preview of feet on the ground: flat, or tipping about an edge of the support. */
import { STANDARD_GRAVITY, setMovingBase, setPlanted, stepRk4 } from '../physics';
import { extentOf, type FirmPlanSetting } from '../planning';
import { MOVING_BASE } from './movingBase';
import type { PreviewRun } from './previewRun';

/** Feet on the ground: flat, or tipping about an edge of the support that the gait moves along. */
export function stepFirm(run: PreviewRun, setting: FirmPlanSetting, time: number, dt: number): void {
  const { demand, compiled } = setting;
  const { place, doubt, state, model } = run;
  if (run.side === 0) {
    const force = place.valueOf(demand.verticalForce);
    const weight = compiled.whole.mass * STANDARD_GRAVITY;
    const moment = place.valueOf(demand.roll) - weight * doubt.centreAcross + run.torque[0];
    const pressure = -moment / force;
    const [right, left] = supportAt(setting, time);
    if (pressure >= right && pressure <= left) {
      for (let i = 0; i < model.gimbals; i++) {
        if (run.motorSigns[i] === 0) continue;
        const inertia = compiled.wheels[i]?.spinInertia ?? 1;
        state[model.wheelSpeedAt + i] += (run.effort[model.gimbals + i] / inertia) * dt;
      }
      return;
    }
    run.side = pressure < right ? 1 : -1;
    run.edge = run.side > 0 ? right : left;
  }
  moveEdge(run, setting, time);
  placeWalkingBody(run, setting);
  stepRk4(run.derivative, time, state, dt, run.rk4);
  if (run.side * state[0] <= 0) {
    state[0] = 0;
    state[model.baseSpeedAt] = 0;
    run.side = 0;
  }
}

/** Right and left edge of the ground under the feet now, m, walking frame, no margin kept. */
function supportAt(setting: FirmPlanSetting, time: number): readonly [number, number] {
  const { demand, course, problem } = setting;
  const at = Math.floor(time / problem.step + 1e-9);
  const node = course.isCyclic ? at % demand.nodes : Math.min(demand.nodes - 1, at);
  const polygon = demand.support[node];
  return (polygon ? extentOf(polygon, 1) : undefined) ?? [0, 0];
}

/**
 * Moves the pivot to the support's edge of now. When a foot comes down further out, the turning about the old
 * edge becomes turning about the new one with its angular momentum kept, as when a wheel meets a kerb.
 */
function moveEdge(run: PreviewRun, setting: FirmPlanSetting, time: number): void {
  const [right, left] = supportAt(setting, time);
  const edge = run.side > 0 ? right : left;
  if (Math.abs(edge - run.edge) < 1e-6) return;
  const { whole } = setting.compiled;
  const y = run.place.valueOf(setting.demand.centreOfMass, 3, 1);
  const z = run.place.valueOf(setting.demand.centreOfMass, 3, 2);
  const own = whole.inertia[0];
  const kept = own + whole.mass * ((y - run.edge) * (y - edge) + z * z);
  const about = own + whole.mass * ((y - edge) ** 2 + z * z);
  run.state[run.model.baseSpeedAt] *= kept / about;
  run.edge = edge;
}

/** Gives the star the base as its legs stand now and the pivot as the body moves over it. */
function placeWalkingBody(run: PreviewRun, setting: FirmPlanSetting): void {
  const { place, baseNow, planted, doubt } = run;
  const { course, compiled } = setting;
  if (run.base) for (let j = 0; j < MOVING_BASE; j++) baseNow[j] = place.valueOf(run.base, MOVING_BASE, j);
  baseNow[2] += compiled.whole.mass * doubt.centreAcross;
  setMovingBase(run.model, run.work, baseNow);
  planted.fill(0);
  planted[1] = run.edge - place.valueOf(course.body, 3, 1);
  planted[2] = -place.valueOf(course.body, 3, 2);
  planted[4] = -place.valueOf(course.bodyVelocity, 3, 1);
  planted[7] = -place.valueOf(course.bodyAcceleration, 3, 1);
  setPlanted(run.work, planted);
}
