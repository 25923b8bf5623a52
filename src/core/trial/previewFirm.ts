/** A preview of feet on the ground: flat, or tipping about an edge of the support. */
import { STANDARD_GRAVITY, setMovingBase, setPlanted, stepRk4 } from '../physics';
import { extentOf, type FirmPlanSetting } from '../planning';
import { builtWhole } from './build';
import type { FirmOutside } from './firmOutside';
import { MOVING_BASE } from './movingBase';
import type { PreviewRun } from './previewRun';

/** Feet on the ground: flat, or tipping about an edge of the support that the gait moves along. */
export function stepFirm(run: PreviewRun, setting: FirmPlanSetting, time: number, dt: number): void {
  const { place, state, model } = run;
  const outside = run.outside as FirmOutside;
  outside.moveTo(time);
  if (run.side === 0) {
    const pressure = -(calmMoment(run, setting) + run.torque[0]) / place.valueOf(outside.calm.verticalForce);
    const [right, left] = supportAt(setting, time);
    if (pressure >= right && pressure <= left) {
      for (let i = 0; i < model.gimbals; i++) {
        if (run.motorSigns[i] === 0) continue;
        const inertia = setting.compiled.wheels[i]?.spinInertia ?? 1;
        state[model.wheelSpeedAt + i] += (run.effort[model.gimbals + i] / inertia) * dt;
      }
      return;
    }
    tip(run, setting, time, pressure < right ? 1 : -1);
  }
  moveEdge(run, setting, time);
  placeWalkingBody(run, setting);
  run.effort[2 * model.gimbals] += outside.momentAbout(run.edge, centre(run, 1), centre(run, 2));
  stepRk4(run.derivative, time, state, dt, run.rk4);
  if (run.side * state[0] <= 0) land(run, setting, time);
}

/**
 * Feet come down flat without a bounce. The blow passes through the far edge, about which the body goes on turning
 * with the angular momentum it has about that edge, as a rocking block does (Housner, Bull. Seism. Soc. Am. 53,
 * 1963); too little to lift it over is taken up by the soles.
 */
function land(run: PreviewRun, setting: FirmPlanSetting, time: number): void {
  const { state, model, edge } = run;
  const [right, left] = supportAt(setting, time);
  const far = run.side > 0 ? left : right;
  const { whole } = setting.compiled;
  const y = centre(run, 1);
  const z = centre(run, 2);
  const own = whole.inertia[0];
  const kept =
    (own + whole.mass * ((y - edge) * (y - far) + z * z)) / (own + whole.mass * ((y - far) ** 2 + z * z));
  state[0] = 0;
  state[model.baseSpeedAt] *= Math.max(0, kept);
  run.side = run.side > 0 ? -1 : 1;
  run.edge = far;
  if (Math.abs(state[model.baseSpeedAt]) > SOFT_LANDING) return;
  state[model.baseSpeedAt] = 0;
  run.side = 0;
}

/** rad/s that soles and ankles take up by giving way. */
const SOFT_LANDING = 0.1;

/**
 * A blow too quick for the ground to answer: it tips a body that stands flat about the far edge, and adds to the
 * turning of one that is tipping. `roll`: N*m*s about the ground; the ground's own blow passes through the edge.
 */
export function knock(run: PreviewRun, setting: FirmPlanSetting, time: number, roll: number): void {
  if (run.side === 0) tip(run, setting, time, roll > 0 ? 1 : -1);
  run.state[run.model.baseSpeedAt] += roll / inertiaAboutEdge(run, setting);
}

function tip(run: PreviewRun, setting: FirmPlanSetting, time: number, side: -1 | 1): void {
  const [right, left] = supportAt(setting, time);
  run.side = side;
  run.edge = side > 0 ? right : left;
}

const centre = (run: PreviewRun, axis: 1 | 2): number =>
  run.place.valueOf((run.outside as FirmOutside).calm.centreOfMass, 3, axis);

/** Roll moment about the ground's middle that gait, weight and disturbances leave over, as built. */
function calmMoment(run: PreviewRun, setting: FirmPlanSetting): number {
  const { build, place } = run;
  const { calm, momentAbout } = run.outside as FirmOutside;
  const { carrier, whole } = setting.compiled;
  // What weight and gait leave over is in proportion to mass; a higher centre adds its arm to the sway.
  const share = 1 + ((build.mass - 1) * carrier.mass) / whole.mass;
  const weight = whole.mass * STANDARD_GRAVITY;
  const sway = place.valueOf(setting.course.bodyAcceleration, 3, 1);
  return (
    share * place.valueOf(calm.roll) +
    whole.mass * sway * build.centreUp -
    weight * build.centreAcross +
    momentAbout(0, centre(run, 1), centre(run, 2))
  );
}

function inertiaAboutEdge(run: PreviewRun, setting: FirmPlanSetting): number {
  const whole = builtWhole(setting.compiled, run.build);
  return whole.inertia[0] + whole.mass * ((centre(run, 1) - run.edge) ** 2 + centre(run, 2) ** 2);
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
  const { place, baseNow, planted, build } = run;
  const { course, compiled } = setting;
  if (run.base) for (let j = 0; j < MOVING_BASE; j++) baseNow[j] = place.valueOf(run.base, MOVING_BASE, j);
  const { mass } = compiled.whole;
  const { centreUp, centreAcross } = build;
  if (build.mass !== 1) for (let j = 0; j < MOVING_BASE; j++) baseNow[j] *= build.mass;
  if (centreUp !== 0) {
    // Raised by a mass pair: first moment up by m u, second moments by 2 m u z.
    const twice = (2 * centreUp * mass * baseNow[3]) / baseNow[0];
    baseNow[4] += twice;
    baseNow[5] += twice;
    baseNow[3] += mass * centreUp;
  }
  baseNow[2] += mass * centreAcross;
  setMovingBase(run.model, run.work, baseNow);
  planted.fill(0);
  planted[1] = run.edge - place.valueOf(course.body, 3, 1);
  planted[2] = -place.valueOf(course.body, 3, 2);
  planted[4] = -place.valueOf(course.bodyVelocity, 3, 1);
  planted[7] = -place.valueOf(course.bodyAcceleration, 3, 1);
  setPlanted(run.work, planted);
}
