/** Speed of the Spin up station's work: it must never be felt behind a slider. */
import {
  flotation,
  hullSection,
  rightingArms,
  solveDiscFlow,
  spinFigures,
  spinGyro,
  spinRig,
  splitSea,
  wheelStress,
} from '../../src/core/physics';
import { BENCH_GYRO, BENCH_POWER, SKIFF } from '../../src/core/rig';
import type { Row } from './row';

/** Median of repeated timings, s; a first batch warms up and is not counted. */
function medianTime(work: () => unknown, repeats = 41, perRepeat = 5): number {
  for (let i = 0; i < 10; i++) work();
  const times: number[] = [];
  for (let i = 0; i < repeats; i++) {
    const start = performance.now();
    for (let k = 0; k < perRepeat; k++) work();
    times.push((performance.now() - start) / perRepeat / 1000);
  }
  times.sort((a, b) => a - b);
  return times[Math.floor(repeats / 2)]!;
}

const row = (name: string, seconds: number, most: number): Row => ({
  name,
  value: seconds * 1e3,
  unit: 'ms',
  target: `below ${most} ms`,
  ok: seconds * 1e3 < most,
});

export async function run(): Promise<Row[]> {
  if (SKIFF.body.kind !== 'hull') throw new Error('the skiff is a hull');
  const drawn = hullSection(SKIFF.body);
  if (drawn.kind !== 'section') throw new Error('the skiff has a section');
  const { section } = drawn;
  const load = { mass: 480, centreHeight: 0.35, centreOffset: 0, waterDensity: 1025 };
  const spun = spinGyro(BENCH_GYRO, BENCH_POWER, 4);
  if (spun.kind !== 'spun') throw new Error('the bench wheel can be spun');
  let state = 1;
  const draw = () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
  return [
    row(
      'stress of a wheel',
      medianTime(() => wheelStress(BENCH_GYRO.wheel.parts, BENCH_GYRO.speed)),
      1,
    ),
    row(
      'spin report of a gyro',
      medianTime(() => spinGyro(BENCH_GYRO, BENCH_POWER, 4)),
      5,
    ),
    row(
      'its figures',
      medianTime(() => spinFigures(spun.report)),
      1,
    ),
    row(
      'spin report of a rig of two',
      medianTime(() => spinRig(SKIFF)),
      10,
    ),
    row(
      'flotation of a hull',
      medianTime(() => flotation(section, load)),
      1,
    ),
    row(
      'righting arms to 60 degrees',
      medianTime(() => rightingArms(section, load)),
      5,
    ),
    row(
      'sea of 200 components',
      medianTime(() => splitSea({ kind: 'jonswap', height: 0.5, peakPeriod: 3, gamma: 3.3 }, 200, draw)),
      10,
    ),
    row(
      'Karman-Cochran flow, once a run',
      medianTime(() => solveDiscFlow(), 9, 1),
      50,
    ),
  ];
}
