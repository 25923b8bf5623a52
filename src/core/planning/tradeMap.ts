/** A map over two numbers of a rig: at each pair, whether its jobs can be planned and with how much to spare. */
import { compileRig } from '../physics';
import type { Rig } from '../rig';
import type { Dimension } from '../units';
import type { LedgerLineName } from './ledger';
import { createPlanWork, defaultPlanOptions, type PlanOptions, type PlanWork } from './momentumPlan';
import { ledgerLines } from './planLedger';
import { attemptRigPlan } from './planRig';
import { setUpPlan } from './rigPlan';

/** One number of a rig that a map can run over. */
export interface TradeNumber {
  readonly id: string;
  readonly label: string;
  readonly dimension: Dimension;
  /** Range that is offered at first, about what the rig has. */
  readonly from: number;
  readonly to: number;
  readonly now: number;
  readonly put: (rig: Rig, value: number) => Rig;
}

/** What a map runs over: both numbers by their id, since a map may be worked out elsewhere. */
export interface TradeAsk {
  readonly across: { readonly id: string; readonly from: number; readonly to: number };
  readonly up: { readonly id: string; readonly from: number; readonly to: number };
  readonly columns: number;
  readonly rows: number;
}

export type TradeCell =
  | {
      readonly kind: 'planned';
      /** Least spare of the ledger, and its line. */
      readonly spare: number;
      readonly line: LedgerLineName;
      readonly label: string;
    }
  /** No plan within the limits. */
  | { readonly kind: 'impossible' }
  /** Numbers that make no rig, a gait no leg can walk, or no answer: why. */
  | { readonly kind: 'refused'; readonly sentence: string };

/** Plan instants of a cell: those of a gait's own plan, fewer than those of a long run's. */
const GRAIN = { intervals: 240, most: 240 } as const;

type Pattern = Extract<Rig['jobs']['gait'], { kind: 'pattern' }>;

const withPattern = (rig: Rig, change: Partial<Pattern>): Rig =>
  rig.jobs.gait.kind === 'pattern'
    ? { ...rig, jobs: { ...rig.jobs, gait: { ...rig.jobs.gait, ...change } } }
    : rig;

const withGyros = (
  rig: Rig,
  change: (gyro: Rig['array']['gyros'][number]) => Rig['array']['gyros'][number],
): Rig => ({ ...rig, array: { gyros: rig.array.gyros.map(change) } });

/** Numbers worth a map for this kind of rig, each with a range about what it has now. */
export function tradeNumbers(rig: Rig): readonly TradeNumber[] {
  return [...gaitNumbers(rig), ...bodyNumbers(rig), ...arrayNumbers(rig), ...waveNumbers(rig)];
}

const number = (
  id: string,
  label: string,
  dimension: Dimension,
  now: number,
  range: readonly [number, number],
  put: TradeNumber['put'],
): TradeNumber => ({ id, label, dimension, now, from: range[0], to: range[1], put });

function gaitNumbers({ body, jobs }: Rig): readonly TradeNumber[] {
  const { gait } = jobs;
  if (body.kind !== 'legged' || gait.kind !== 'pattern') return [];
  const { stepTime, sway, stanceWidth, dutyFactor, stepLength, stepHeight } = gait;
  const narrowest = body.foot.width;
  return [
    number('stepTime', 'Step time', 'time', stepTime, [0.5 * stepTime, 2 * stepTime], (rig, v) =>
      withPattern(rig, { stepTime: v }),
    ),
    number('sway', 'Hip sway', 'length', sway, [0, Math.max(0.02, 2 * sway)], (rig, v) =>
      withPattern(rig, { sway: v }),
    ),
    number(
      'stanceWidth',
      'Stance width',
      'length',
      stanceWidth,
      [Math.max(narrowest, 0.5 * stanceWidth), 1.5 * stanceWidth],
      (rig, v) => withPattern(rig, { stanceWidth: v }),
    ),
    number('dutyFactor', 'Duty factor', 'ratio', dutyFactor, [0.5, 0.9], (rig, v) =>
      withPattern(rig, { dutyFactor: v }),
    ),
    number('stepLength', 'Step length', 'length', stepLength, [0, Math.max(0.02, 2 * stepLength)], (rig, v) =>
      withPattern(rig, { stepLength: v }),
    ),
    number('stepHeight', 'Step height', 'length', stepHeight, [0.2 * stepHeight, 2 * stepHeight], (rig, v) =>
      withPattern(rig, { stepHeight: v }),
    ),
  ];
}

function bodyNumbers({ body, footing, payloads }: Rig): readonly TradeNumber[] {
  const numbers: TradeNumber[] = [];
  if (body.kind === 'legged' && footing.kind === 'firm') {
    const { width } = body.foot;
    numbers.push(
      number('footWidth', 'Foot width', 'length', width, [0.4 * width, 2.5 * width], (rig, v) =>
        rig.body.kind === 'legged'
          ? { ...rig, body: { ...rig.body, foot: { ...rig.body.foot, width: v } } }
          : rig,
      ),
    );
  }
  payloads.forEach(({ name, position }, i) => {
    const put = (axis: number) => (rig: Rig, v: number) => ({
      ...rig,
      payloads: rig.payloads.map((payload, j) =>
        j === i
          ? {
              ...payload,
              position: payload.position.map((p, k) => (k === axis ? v : p)) as [number, number, number],
            }
          : payload,
      ),
    });
    const [, across, up] = position;
    numbers.push(
      number(`payload${i}Height`, `${name}, height`, 'length', up, [0.6 * up, 1.4 * up], put(2)),
      number(
        `payload${i}Across`,
        `${name}, to the left`,
        'length',
        across,
        [across - 0.1, across + 0.1],
        put(1),
      ),
    );
  });
  return numbers;
}

function arrayNumbers({ array }: Rig): readonly TradeNumber[] {
  const first = array.gyros[0];
  if (!first) return [];
  const numbers: TradeNumber[] = [];
  if (first.speed > 0) {
    numbers.push(
      number(
        'speed',
        'Wheel speed',
        'spinRate',
        first.speed,
        [0.3 * first.speed, 1.5 * first.speed],
        (rig, v) => withGyros(rig, (gyro) => ({ ...gyro, speed: v })),
      ),
    );
  }
  const servo = array.gyros.find((gyro) => gyro.drive.kind === 'servo')?.drive;
  if (servo?.kind === 'servo') {
    const degrees = Math.PI / 180;
    numbers.push(
      number('tilt', 'Tilt limit', 'angle', first.tilt.max, [10 * degrees, 80 * degrees], (rig, v) =>
        withGyros(rig, (gyro) => ({ ...gyro, tilt: { min: -v, max: v } })),
      ),
      number(
        'servoSpeed',
        'Servo no-load speed',
        'angularRate',
        servo.servo.noLoadSpeed,
        [0.3 * servo.servo.noLoadSpeed, 2 * servo.servo.noLoadSpeed],
        (rig, v) =>
          withGyros(rig, (gyro) =>
            gyro.drive.kind === 'servo'
              ? { ...gyro, drive: { ...gyro.drive, servo: { ...gyro.drive.servo, noLoadSpeed: v } } }
              : gyro,
          ),
      ),
    );
  }
  return numbers;
}

/** Size and time scale of what happens to the rig: waves, shoves and side loads of its sequence. */
function waveNumbers({ jobs }: Rig): readonly TradeNumber[] {
  return jobs.sequence.flatMap((d, i): readonly TradeNumber[] => {
    const put = (change: (value: number) => object) => (rig: Rig, v: number) => ({
      ...rig,
      jobs: {
        ...rig.jobs,
        sequence: rig.jobs.sequence.map((other, j) =>
          j === i ? ({ ...other, ...change(v) } as typeof other) : other,
        ),
      },
    });
    switch (d.kind) {
      case 'waves':
        return [
          number(
            `wave${i}Height`,
            'Wave height',
            'length',
            d.height,
            [0, 2 * d.height],
            put((height) => ({ height })),
          ),
          number(
            `wave${i}Period`,
            'Wave period',
            'time',
            d.period,
            [0.5 * d.period, 2 * d.period],
            put((period) => ({ period })),
          ),
        ];
      case 'sea':
        return [
          number(
            `wave${i}Height`,
            'Significant height',
            'length',
            d.significantHeight,
            [0, 2 * d.significantHeight],
            put((significantHeight) => ({ significantHeight })),
          ),
          number(
            `wave${i}Period`,
            'Peak period',
            'time',
            d.peakPeriod,
            [0.5 * d.peakPeriod, 2 * d.peakPeriod],
            put((peakPeriod) => ({ peakPeriod })),
          ),
        ];
      case 'shove':
        return [
          number(
            `shove${i}`,
            'Impulse of the shove',
            'impulse',
            d.impulse,
            [0, 2 * d.impulse],
            put((impulse) => ({ impulse })),
          ),
        ];
      case 'sideLoad':
        return [
          number(
            `load${i}`,
            'Side load',
            'force',
            d.force,
            [0, 2 * d.force],
            put((force) => ({ force })),
          ),
        ];
      default:
        return [];
    }
  });
}

/** Value of a number at a place along an axis of so many cells: the middle of the first cell is `from`, of the last `to`. */
export const tradeValue = (
  range: { readonly from: number; readonly to: number },
  cells: number,
  at: number,
): number => (cells > 1 ? range.from + ((range.to - range.from) * at) / (cells - 1) : range.from);

/** The rig with both numbers of a cell put in; undefined when the map's numbers are not this rig's. */
export function tradeRig(rig: Rig, ask: TradeAsk, column: number, row: number): Rig | undefined {
  const numbers = tradeNumbers(rig);
  const across = numbers.find(({ id }) => id === ask.across.id);
  const up = numbers.find(({ id }) => id === ask.up.id);
  if (!across || !up) return undefined;
  return up.put(
    across.put(rig, tradeValue(ask.across, ask.columns, column)),
    tradeValue(ask.up, ask.rows, row),
  );
}

/** A start from the last plan helps a plan along, and only holds up the proof that there is none. */
const COLD: PlanOptions = {
  ...defaultPlanOptions,
  solver: { ...defaultPlanOptions.solver, warm: false },
};

/**
 * One cell: a plan of the rig as it then is. A few milliseconds.
 *
 * @param isLikely  whether the cell before had a plan, so that this one may start from it
 */
export function tradeCell(rig: Rig, work: PlanWork, isLikely = true): TradeCell {
  const compiled = compileRig(rig);
  if (compiled.kind === 'refused') return refuse(compiled.refusals);
  const set = setUpPlan(compiled.compiled, GRAIN);
  if (set.kind === 'refused') return refuse(set.refusals);
  const outcome = attemptRigPlan(set.setting, isLikely ? defaultPlanOptions : COLD, work);
  switch (outcome.kind) {
    case 'planned': {
      const lines = ledgerLines(outcome.setting, outcome.schedules);
      const least = lines.reduce((a, b) => (b.spare < a.spare ? b : a));
      return { kind: 'planned', spare: least.spare, line: least.name, label: least.label };
    }
    case 'impossible':
    case 'unsteered':
      return { kind: 'impossible' };
    case 'unplanned':
      return { kind: 'refused', sentence: outcome.sentence };
    case 'gave-up':
      return { kind: 'refused', sentence: 'Neither a plan nor a proof that there is none was found.' };
  }
}

const refuse = (refusals: readonly { readonly sentence: string }[]): TradeCell => ({
  kind: 'refused',
  sentence: refusals[0]?.sentence ?? '',
});

/** One row of a map, from its first column on. O(columns) plans. */
export function tradeRow(
  rig: Rig,
  ask: TradeAsk,
  row: number,
  work: PlanWork = createPlanWork(),
): readonly TradeCell[] {
  let isLikely = false;
  return Array.from({ length: ask.columns }, (_, column): TradeCell => {
    const changed = tradeRig(rig, ask, column, row);
    if (!changed) return { kind: 'refused', sentence: 'This rig has no such number.' };
    const cell = tradeCell(changed, work, isLikely);
    isLikely = cell.kind === 'planned';
    return cell;
  });
}
