/** Changes of a rig that would let an impossible plan exist, each proven by planning the changed rig. */
import { compileRig, wheelStress } from '../physics';
import { attemptRigPlan, createPlanWork, defaultPlanOptions, type PlanWork, setUpPlan } from '../planning';
import type { Gyro, PatternGait, Rig } from '../rig';
import { formatQuantity } from '../units';
import type { Cure } from './evaluation';

/** One way to change a rig, by amounts that grow; undefined where an amount cannot be had. */
interface Remedy {
  readonly amounts: readonly number[];
  readonly apply: (rig: Rig, amount: number) => Rig | undefined;
  readonly say: (rig: Rig, amount: number) => string;
  /** Least step the answer is rounded up to. */
  readonly grain: number;
}

const steps = (grain: number, counts: readonly number[]): readonly number[] =>
  counts.map((count) => grain * count);
const GROWING = [1, 2, 4, 7, 12, 20, 32, 50] as const;

const withGait = (rig: Rig, change: (gait: PatternGait) => PatternGait): Rig | undefined =>
  rig.jobs.gait.kind === 'pattern'
    ? { ...rig, jobs: { ...rig.jobs, gait: change(rig.jobs.gait) } }
    : undefined;

const withGyros = (rig: Rig, change: (gyro: Gyro) => Gyro): Rig | undefined =>
  rig.array.gyros.length > 0 ? { ...rig, array: { gyros: rig.array.gyros.map(change) } } : undefined;

const mm = (value: number): string => formatQuantity(value, 'length');

const widerFeet: Remedy = {
  grain: 0.001,
  amounts: steps(0.001, GROWING),
  apply: (rig, amount) => {
    if (rig.body.kind !== 'legged' || rig.footing.kind !== 'firm') return undefined;
    const width = rig.body.foot.width + amount;
    const room = rig.jobs.gait.kind === 'pattern' ? rig.jobs.gait.stanceWidth : rig.body.hips.width;
    return width <= room ? { ...rig, body: { ...rig.body, foot: { ...rig.body.foot, width } } } : undefined;
  },
  say: (rig, amount) =>
    `Make the feet ${mm(amount)} wider (${mm((rig.body.kind === 'legged' ? rig.body.foot.width : 0) + amount)}).`,
};

/** Steps taken in a share of their time: below 1 quicker, above 1 slower. */
const stepTime = (word: 'quicker' | 'slower'): Remedy => ({
  grain: 0.02,
  amounts: steps(0.02, [1, 3, 6, 10, 15, 22, 30]),
  apply: (rig, amount) =>
    withGait(rig, (gait) => ({
      ...gait,
      stepTime: gait.stepTime * (word === 'quicker' ? 1 - amount : 1 + amount),
    })),
  say: (rig, amount) => {
    const now = rig.jobs.gait.kind === 'pattern' ? rig.jobs.gait.stepTime : 0;
    const then = now * (word === 'quicker' ? 1 - amount : 1 + amount);
    return `Step ${word}: ${formatQuantity(then, 'time')} instead of ${formatQuantity(now, 'time')}.`;
  },
});

const moreSway: Remedy = {
  grain: 0.001,
  amounts: steps(0.001, GROWING),
  apply: (rig, amount) => withGait(rig, (gait) => ({ ...gait, sway: gait.sway + amount })),
  say: (rig, amount) =>
    `Sway the hips ${mm(amount)} more (${mm((rig.jobs.gait.kind === 'pattern' ? rig.jobs.gait.sway : 0) + amount)}).`,
};

const narrowerStance: Remedy = {
  grain: 0.001,
  amounts: steps(0.001, GROWING),
  apply: (rig, amount) => {
    const least = rig.body.kind === 'legged' ? rig.body.foot.width : 0;
    if (rig.jobs.gait.kind === 'pattern' && rig.jobs.gait.stanceWidth - amount < least) return undefined;
    return withGait(rig, (gait) => ({ ...gait, stanceWidth: gait.stanceWidth - amount }));
  },
  say: (rig, amount) =>
    `Narrow the stance by ${mm(amount)} (to ${mm((rig.jobs.gait.kind === 'pattern' ? rig.jobs.gait.stanceWidth : 0) - amount)}).`,
};

const fasterWheels: Remedy = {
  grain: 0.02,
  amounts: steps(0.02, [2, 5, 10, 18, 30, 50]),
  apply: (rig, amount) => {
    const isSafe = rig.array.gyros.every((gyro) => {
      const outcome = wheelStress(gyro.wheel.parts, gyro.speed * (1 + amount));
      return outcome.kind === 'stressed' && outcome.stress.spare > 0;
    });
    return isSafe ? withGyros(rig, (gyro) => ({ ...gyro, speed: gyro.speed * (1 + amount) })) : undefined;
  },
  say: (rig, amount) =>
    `Spin the wheels at ${formatQuantity((rig.array.gyros[0]?.speed ?? 0) * (1 + amount), 'spinRate')}, ${formatQuantity(amount, 'ratio', '%', 2)} faster; they stay within their safe speed.`,
};

const DEGREE = Math.PI / 180;
const WIDEST_TILT = 80 * DEGREE;

const widerTilt: Remedy = {
  grain: DEGREE,
  amounts: steps(DEGREE, [2, 5, 10, 16, 24, 34]),
  apply: (rig, amount) => {
    if (
      rig.array.gyros.some(({ tilt }) => tilt.max + amount > WIDEST_TILT || -tilt.min + amount > WIDEST_TILT)
    ) {
      return undefined;
    }
    return withGyros(rig, (gyro) => ({
      ...gyro,
      tilt: { min: gyro.tilt.min - amount, max: gyro.tilt.max + amount },
    }));
  },
  say: (rig, amount) =>
    `Let the gimbals tilt ${formatQuantity(amount, 'angle')} further each way (to ${formatQuantity((rig.array.gyros[0]?.tilt.max ?? 0) + amount, 'angle')}).`,
};

/** Moves the heaviest payload sideways, which moves the centre of mass by its share of the whole mass. */
const movedPayload = (side: 'left' | 'right'): Remedy => ({
  grain: 0.001,
  amounts: steps(0.001, [1, 3, 7, 15, 30, 60, 120]),
  apply: (rig, amount) => {
    const heaviest = heaviestPayload(rig);
    if (heaviest < 0) return undefined;
    const by = side === 'left' ? amount : -amount;
    return {
      ...rig,
      payloads: rig.payloads.map((payload, i) =>
        i === heaviest
          ? {
              ...payload,
              position: [payload.position[0], payload.position[1] + by, payload.position[2]] as const,
            }
          : payload,
      ),
    };
  },
  say: (rig, amount) =>
    `Move "${rig.payloads[heaviestPayload(rig)]?.name ?? ''}" ${mm(amount)} to the ${side}, which moves the centre of mass.`,
});

const heaviestPayload = (rig: Rig): number =>
  rig.payloads.reduce((best, payload, i) => (payload.mass > (rig.payloads[best]?.mass ?? 0) ? i : best), -1);

const REMEDIES: readonly Remedy[] = [
  widerFeet,
  moreSway,
  stepTime('quicker'),
  stepTime('slower'),
  narrowerStance,
  fasterWheels,
  widerTilt,
  movedPayload('left'),
  movedPayload('right'),
];

/** Plan instants a cure is proven with; the plan itself then uses as many as ever. */
const PROOF_INTERVALS = 120;

function hasPlan(rig: Rig | undefined, work: PlanWork): boolean {
  if (!rig) return false;
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') return false;
  const set = setUpPlan(outcome.compiled, PROOF_INTERVALS);
  if (set.kind === 'refused') return false;
  return attemptRigPlan(set.setting, defaultPlanOptions, work).kind === 'planned';
}

/** Least amount of a remedy that lets a plan exist, to its grain; undefined when none does. */
function leastAmount(rig: Rig, remedy: Remedy, work: PlanWork): number | undefined {
  let below = 0;
  for (const amount of remedy.amounts) {
    if (!hasPlan(remedy.apply(rig, amount), work)) {
      below = amount;
      continue;
    }
    let low = Math.round(below / remedy.grain);
    let high = Math.round(amount / remedy.grain);
    while (high - low > 1) {
      const middle = Math.floor((low + high) / 2);
      if (hasPlan(remedy.apply(rig, middle * remedy.grain), work)) high = middle;
      else low = middle;
    }
    return high * remedy.grain;
  }
  return undefined;
}

/**
 * Cures for a rig that has no plan, each the least of its kind and proven by a plan of the changed rig.
 *
 * @param isWanted  asked between solves; false ends the search with what has been found
 *
 * Up to a hundred solves: a second or so. Run it apart from the evaluation.
 */
export function findCures(rig: Rig, isWanted: () => boolean = () => true): readonly Cure[] {
  const work = createPlanWork();
  const cures: Cure[] = [];
  for (const remedy of REMEDIES) {
    if (!isWanted()) break;
    const amount = leastAmount(rig, remedy, work);
    const changed = amount === undefined ? undefined : remedy.apply(rig, amount);
    if (amount !== undefined && changed) cures.push({ sentence: remedy.say(rig, amount), rig: changed });
  }
  return cures;
}
