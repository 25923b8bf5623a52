/** Disturbances on a body that stands or walks, apart from what its gait asks by itself. */
import { STANDARD_GRAVITY } from '../physics';
import {
  computeDemand,
  type Demand,
  type FirmPlanSetting,
  groundOf,
  type Jump,
  runTimes,
  sampleDisturbances,
  trunkOf,
} from '../planning';

/** s between samples. */
const INTERVAL = 0.01;

export interface FirmOutside {
  /** The gait's demand with nothing from outside. */
  readonly calm: Demand;
  readonly jumps: readonly Jump[];
  /** Moves to an instant, s. */
  readonly moveTo: (time: number) => void;
  /** N*m of roll about a line on the ground at `y`, from all that is on at this instant; centre of mass at y, z. */
  readonly momentAbout: (y: number, centreY: number, centreZ: number) => number;
}

/**
 * What a firm-footed run meets from outside over its whole length. A gait's plan is made for one cycle in calm, so
 * its sequence must be laid over all its cycles here.
 *
 * O(samples x disturbances).
 */
export function firmOutside(setting: FirmPlanSetting, length: number): FirmOutside {
  const { compiled, course, gait, legs } = setting;
  const { sequence } = compiled.rig.jobs;
  if (sequence.length === 0)
    return { calm: setting.demand, jumps: [], moveTo: () => {}, momentAbout: () => 0 };
  const ground = groundOf(compiled.rig);
  const calm =
    course.isCyclic || !ground ? setting.demand : computeDemand(course, trunkOf(compiled.rig), legs, ground);
  const nodes = Math.max(2, Math.ceil(length / INTERVAL) + 1);
  const d = sampleDisturbances(sequence, runTimes(INTERVAL * (nodes - 1), nodes - 1), {
    referenceHeight: 0,
    velocity: gait.velocity,
    waves: undefined,
    road: undefined,
  });
  let k = 0;
  let share = 0;
  const at = (values: Float64Array, stride = 1, offset = 0): number => {
    const from = values[stride * k + offset] as number;
    return from + share * ((values[stride * (k + 1) + offset] as number) - from);
  };
  const mass = compiled.whole.mass;
  return {
    calm,
    jumps: d.jumps,
    moveTo: (time) => {
      const place = Math.min(Math.max(time / INTERVAL, 0), nodes - 1);
      k = Math.min(nodes - 2, Math.floor(place));
      share = place - k;
    },
    momentAbout: (y, centreY, centreZ) => {
      const gy = at(d.gravity, 3, 1);
      const gz = at(d.gravity, 3, 2);
      const added = at(d.addedMass);
      return (
        at(d.roll) +
        mass * ((centreY - y) * (gz + STANDARD_GRAVITY) - centreZ * gy) +
        (at(d.addedMoment, 3, 1) - added * y) * gz -
        at(d.addedMoment, 3, 2) * gy
      );
    },
  };
}
