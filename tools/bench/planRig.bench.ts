/** Planning of whole rigs: a trade map as one worker does its half of it, a size, a walk with a shove. */
import { compileRig } from '../../src/core/physics';
import {
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  setUpPlan,
  sizeRig,
  type TradeAsk,
  tradeNumbers,
  tradeRow,
  usualSizeAsk,
} from '../../src/core/planning';
import { DEMONSTRATIONS, type Rig, SKIFF, STRIDER } from '../../src/core/rig';
import type { Row } from './row';

const CELLS = 20;
const CORES = 2;

const secondsOf = (work: () => void): number => {
  const start = performance.now();
  work();
  return (performance.now() - start) / 1000;
};

const median = (values: readonly number[]): number => {
  const sorted = values.toSorted((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)] as number;
};

function askFor(rig: Rig, across: string, up: string): TradeAsk {
  const find = (id: string) => {
    const found = tradeNumbers(rig).find((one) => one.id === id);
    if (!found) throw new Error(`${rig.name} has no ${id}`);
    return { id, from: found.from, to: found.to };
  };
  return { across: find(across), up: find(up), columns: CELLS, rows: CELLS };
}

/** Seconds that two workers take: the slower half of the rows, each half worked through by itself. */
function mapSeconds(rig: Rig, ask: TradeAsk): number {
  const halves = Array.from({ length: CORES }, (_, core) =>
    secondsOf(() => {
      const work = createPlanWork();
      for (let row = core; row < CELLS; row += CORES) tradeRow(rig, ask, row, work);
    }),
  );
  return Math.max(...halves);
}

function planSeconds(rig: Rig): number {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') throw new Error(`${rig.name} does not compile`);
  const { compiled } = outcome;
  return median(
    Array.from({ length: 9 }, () =>
      secondsOf(() => {
        const set = setUpPlan(compiled);
        if (set.kind === 'ready') attemptRigPlan(set.setting, defaultPlanOptions, createPlanWork());
      }),
    ),
  );
}

export async function run(): Promise<Row[]> {
  const rows: Row[] = [];
  const maps: readonly (readonly [Rig, string, string])[] = [
    [STRIDER, 'stepTime', 'sway'],
    [SKIFF, 'wave0Height', 'speed'],
  ];
  for (const [rig, across, up] of maps) {
    const value = mapSeconds(rig, askFor(rig, across, up));
    rows.push({
      name: `${rig.name}: trade map ${CELLS} x ${CELLS}, ${across} by ${up}, half on each of two cores`,
      value,
      unit: 's',
      target: 'at most 4',
      ok: value <= 4,
    });
  }
  for (const { rig } of DEMONSTRATIONS) {
    rows.push({ name: `${rig.name}: set up and plan, cold`, value: 1000 * planSeconds(rig), unit: 'ms' });
  }
  const shoved: Rig = {
    ...STRIDER,
    jobs: {
      ...STRIDER.jobs,
      sequence: [{ kind: 'shove', time: 2, impulse: 0.3, height: 0.4, direction: Math.PI / 2 }],
    },
  };
  rows.push({
    name: 'Strider: walk of 8 s with a shove, cold',
    value: 1000 * planSeconds(shoved),
    unit: 'ms',
  });
  const ask = usualSizeAsk(STRIDER);
  if (ask)
    rows.push({ name: 'Strider: smallest wheels', value: secondsOf(() => sizeRig(STRIDER, ask)), unit: 's' });
  return rows;
}
