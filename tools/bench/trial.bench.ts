import { type Rig, SKIFF, STRIDER } from '../../src/core/rig';
import {
  type ManyRequest,
  runOne,
  runTrial,
  setUpTrial,
  type TrialSetup,
  USUAL_TOLERANCES,
  usualTrial,
} from '../../src/core/trial';
import type { Row } from './row';

const median = (values: number[]): number => values.sort((a, b) => a - b)[Math.floor(values.length / 2)]!;

/** s of processor time used so far: what one core does, whatever else the machine is busy with. */
const processorTime = (): number => {
  const used = process.cpuUsage();
  return (used.user + used.system) / 1e6;
};

const ALL_ON = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true };

function ready(rig: Rig): TrialSetup {
  const outcome = setUpTrial(rig);
  if (outcome.kind === 'refused') throw new Error('the benchmark rig is refused');
  return outcome.setup;
}

/** The walker on an edge, its loop at 1 kHz: a single pair, balanced on a line. */
const EDGED: Rig = {
  ...STRIDER,
  footing: { kind: 'edge', offset: 0 },
  sensing: { ...STRIDER.sensing, loopRate: 1000 },
  jobs: { ...STRIDER.jobs, gait: { kind: 'stand' }, duration: 60 },
};

const RUNS = 100;

/** s for a thousand runs of 5 s on two cores, from a hundred on one. */
function timeMany(setup: TrialSetup): number {
  const request: ManyRequest = {
    seed: 1,
    runs: RUNS,
    length: 5,
    tolerances: USUAL_TOLERANCES,
    // Small enough that hardly any falls: a run that ends early would flatter the figure.
    shove: { most: 0.2, height: 0.4, from: 0.5, to: 2.5 },
    switches: ALL_ON,
  };
  for (let k = 0; k < 10; k++) runOne(setup, request, k);
  const times: number[] = [];
  for (let i = 0; i < 3; i++) {
    const from = processorTime();
    for (let k = 0; k < RUNS; k++) runOne(setup, request, k);
    times.push(processorTime() - from);
  }
  return (median(times) * 1000) / RUNS / 2;
}

function timeTrial(setup: TrialSetup, length: number): number {
  const request = { ...usualTrial(ALL_ON, length), controller: setup.controller };
  runTrial(setup.setting, setup.schedules, request);
  const times: number[] = [];
  for (let i = 0; i < 3; i++) {
    const from = processorTime();
    runTrial(setup.setting, setup.schedules, { ...request, run: i });
    times.push(processorTime() - from);
  }
  return median(times);
}

export async function run(): Promise<Row[]> {
  const edged = ready(EDGED);
  const cases = [
    ['a pair on an edge, 1 kHz loop', edged],
    ['a walker on its feet, 500 Hz loop', ready(STRIDER)],
    ['a skiff at sea, 200 Hz loop', ready(SKIFF)],
  ] as const;
  const rows: Row[] = cases.map(([name, setup]) => {
    const value = timeMany(setup);
    return {
      name: `1,000 randomised trials of 5 s on two cores, ${name}`,
      value,
      unit: 's',
      target: 'at most 15 s',
      ok: value <= 15,
    };
  });
  rows.push({
    name: 'recorded trial of 60 s, a pair on an edge, 1 kHz loop, by the star',
    value: timeTrial(edged, 60),
    unit: 's',
  });
  const setups: number[] = [];
  for (let i = 0; i < 3; i++) {
    const from = processorTime();
    ready(STRIDER);
    setups.push(1000 * (processorTime() - from));
  }
  rows.push({
    name: 'a walker made ready for trials: planned, gains computed',
    value: median(setups),
    unit: 'ms',
  });
  return rows;
}
