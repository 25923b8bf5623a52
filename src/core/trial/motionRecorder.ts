import type { PlanSetting } from '../planning';
import type { Motion } from './motion';

/** Room for a motion of a rig: every column allocated, planned tilt and pressure marked as not there. */
export function createMotion(setting: PlanSetting, samples: number, interval: number): Motion {
  const n = setting.compiled.rig.array.gyros.length;
  const { legs } = setting.course;
  const water = setting.kind === 'lean' && setting.waves ? samples : 0;
  return {
    samples,
    gyros: n,
    legs,
    isCyclic: setting.course.isCyclic,
    time: Float64Array.from({ length: samples }, (_, k) => k * interval),
    pose: new Float64Array(7 * samples),
    tilt: new Float64Array(n * samples),
    tiltRate: new Float64Array(n * samples),
    plannedTilt: new Float64Array(n * samples).fill(Number.NaN),
    feet: new Float64Array(3 * legs * samples),
    isFootDown: new Uint8Array(legs * samples),
    centreOfMass: new Float64Array(3 * samples),
    centreOfPressure: new Float64Array(2 * samples).fill(Number.NaN),
    momentum: new Float64Array(3 * samples),
    torque: new Float64Array(3 * samples),
    demand: new Float64Array(samples),
    water: new Float64Array(water),
    waterSlope: new Float64Array(water),
  };
}
