import {
  type CompiledGait,
  compileGait,
  computeDemand,
  cycleTimes,
  groundOf,
  legMassCourse,
  legModelOf,
  sampleGait,
  trunkOf,
} from '../../src/core/planning';
import { type LeggedBody, PACER, type Rig, STRIDER } from '../../src/core/rig';
import type { Row } from './row';

const NODES = 240;
/** Its share of the time from a moved slider to a drawn plan. */
const TARGET_MS = 4;

const median = (values: number[]): number => values.sort((a, b) => a - b)[Math.floor(values.length / 2)]!;

/** Everything from the rig's gait to what the planner is asked, as after a moved slider. */
function demandFrom(rig: Rig): number {
  const outcome = compileGait(rig);
  const ground = groundOf(rig);
  if (outcome.kind === 'refused' || ground === undefined) throw new Error(`${rig.name} cannot walk`);
  const gait: CompiledGait = outcome.gait;
  const course = sampleGait(gait, cycleTimes(gait, NODES), true);
  const legs = legMassCourse(legModelOf(rig.body as LeggedBody), course);
  return computeDemand(course, trunkOf(rig), legs, ground).roll[0]!;
}

export async function run(): Promise<Row[]> {
  return [STRIDER, PACER].map((rig) => {
    for (let i = 0; i < 30; i++) demandFrom(rig);
    const times = Array.from({ length: 101 }, () => {
      const start = performance.now();
      demandFrom(rig);
      return performance.now() - start;
    });
    const value = median(times);
    const legs = (rig.body as LeggedBody).legs;
    return {
      name: `gait to demand, ${legs} legs, ${NODES} nodes, median`,
      value,
      unit: 'ms',
      target: `at most ${TARGET_MS} ms`,
      ok: value <= TARGET_MS,
    };
  });
}
