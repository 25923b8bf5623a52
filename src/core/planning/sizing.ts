/** The smallest wheels that do a rig's jobs with a chosen spare, and the rig with them in it. */
import { compileRig } from '../physics';
import type { MaterialName, Rig, WheelPart } from '../rig';
import { attemptPlan, createPlanWork, defaultPlanOptions, type PlanWork } from './momentumPlan';
import { scaleMomentum } from './momentumPlanChanges';
import { sizeMomentum } from './momentumPlanSizing';
import { attemptRigPlan } from './planRig';
import { type PlanSetting, setUpPlan } from './rigPlan';
import { fitWheel, type RimSpeedLimit, type WheelAsk } from './wheelFitting';

export interface SizeAsk extends WheelAsk {
  /** Share of the array's momentum kept unused, 0 to less than 1. */
  readonly spare: number;
  /** rad, most lean allowed of a body that leans; undefined for the most that is planned with. */
  readonly lean: number | undefined;
}

export interface SizedWheel {
  readonly gyro: number;
  readonly name: string;
  /** N*m*s, rad/s, m/s, kg: as it must be. */
  readonly momentum: number;
  readonly speed: number;
  readonly rimSpeed: number;
  readonly mass: number;
  readonly innerRadius: number;
  readonly limit: RimSpeedLimit;
  readonly stressSpare: number;
  /** kg, of the wheel there is. */
  readonly massNow: number;
}

export type SizeOutcome =
  | {
      readonly kind: 'sized';
      /** Momentum needed, spare included, over what the rig has: with its own wheels' weight. */
      readonly share: number;
      /** N*m*s of the whole array about each planned axis, spare included. */
      readonly axes: readonly { readonly axis: 'roll' | 'pitch'; readonly momentum: number }[];
      /** The lightest wheels; or why none can be made of what was picked. */
      readonly wheels: readonly SizedWheel[];
      readonly refused: string | undefined;
      /** The rig with those wheels in it; undefined when there are none. */
      readonly rig: Rig | undefined;
      readonly passes: number;
    }
  | { readonly kind: 'none'; readonly sentence: string };

const MOST_PASSES = 8;
/** Share by which the last pass may differ from the one before; and what a wheel is made larger by so that it does. */
const SETTLED = 1e-3;
/** Steps of the search for a steered array, whose momentum is not a variable of one convex program. */
const BISECTIONS = 12;

type Least =
  | { readonly kind: 'least'; readonly share: number; readonly setting: PlanSetting }
  | { readonly kind: 'none'; readonly sentence: string };

/** The setting with a body that leans held within `lean`. */
function withLean<T extends PlanSetting>(setting: T, lean: number | undefined): T {
  if (lean === undefined) return setting;
  const axes = setting.problem.axes.map(({ support, ...axis }) => ({
    ...axis,
    support: support.kind === 'lean' ? { ...support, leanMin: -lean, leanMax: lean } : support,
  }));
  return { ...setting, problem: { ...setting.problem, axes } };
}

/** Under this share an array is not needed at all. */
const NOTHING = 1e-4;

/**
 * Least share of the rig's own momentum, spare included, with which its jobs have a plan.
 *
 * @param lean  rad, most lean of a body that leans; undefined for the most that is planned with
 */
export function leastShareOf(
  rig: Rig,
  spare: number,
  lean: number | undefined,
  work: PlanWork = createPlanWork(),
): Least {
  const compiled = compileRig(rig);
  if (compiled.kind === 'refused') return { kind: 'none', sentence: sentences(compiled.refusals) };
  const set = setUpPlan(compiled.compiled);
  if (set.kind === 'refused') return { kind: 'none', sentence: sentences(set.refusals) };
  const setting = withLean(set.setting, lean);
  if (setting.unplanned !== undefined) return { kind: 'none', sentence: setting.unplanned };
  if (setting.steered) return steeredShare(rig, setting, spare, lean, work);
  const warm = sizeMomentum(setting.problem, spare, defaultPlanOptions, work);
  const outcome =
    warm.kind === 'gave-up'
      ? sizeMomentum(setting.problem, spare, defaultPlanOptions, createPlanWork())
      : warm;
  switch (outcome.kind) {
    case 'sized':
      if (outcome.share < NOTHING) {
        return {
          kind: 'none',
          sentence:
            'These jobs are within every limit with no wheel at all; ask for less lean, or for more of the rig.',
        };
      }
      return { kind: 'least', share: outcome.share, setting };
    case 'gave-up': {
      const holds = (share: number): boolean =>
        attemptPlan(scaleMomentum(setting.problem, share), defaultPlanOptions, work).kind === 'planned';
      return bisectShare(holds, setting, spare);
    }
    default:
      return {
        kind: 'none',
        sentence: 'No amount of momentum alone would do: another limit forbids the plan.',
      };
  }
}

const sentences = (refusals: readonly { readonly sentence: string }[]): string =>
  refusals.map(({ sentence }) => sentence).join(' ');

const withMomentum = (rig: Rig, share: number): Rig => ({
  ...rig,
  array: { gyros: rig.array.gyros.map((gyro) => ({ ...gyro, speed: gyro.speed * share })) },
});

function steeredShare(
  rig: Rig,
  setting: PlanSetting,
  spare: number,
  lean: number | undefined,
  work: PlanWork,
): Least {
  const holds = (share: number): boolean => {
    const compiled = compileRig(withMomentum(rig, share));
    if (compiled.kind === 'refused') return false;
    const set = setUpPlan(compiled.compiled);
    return (
      set.kind === 'ready' &&
      attemptRigPlan(withLean(set.setting, lean), defaultPlanOptions, work).kind === 'planned'
    );
  };
  return bisectShare(holds, setting, spare);
}

/** Least share that holds, by halving; for arrays, and the rare problem, that one convex solve does not settle. */
function bisectShare(holds: (share: number) => boolean, setting: PlanSetting, spare: number): Least {
  let high = 1;
  while (high < 64 && !holds(high)) high *= 2;
  if (high >= 64) {
    return {
      kind: 'none',
      sentence: 'Even 32 times the momentum would not do: another limit forbids the plan.',
    };
  }
  let low = high === 1 ? 0 : high / 2;
  for (let step = 0; step < BISECTIONS; step++) {
    const middle = (low + high) / 2;
    if (holds(middle)) high = middle;
    else low = middle;
  }
  return { kind: 'least', share: high / (1 - spare), setting };
}

/**
 * Sizes a rig's wheels: the least momentum by one convex solve, then the lightest wheels that store it, then the same
 * again with their weight in the rig until nothing changes.
 *
 * @param isWanted  asked between solves; false ends the work with `none`
 *
 * A few solves for each pass; a steered array takes a dozen.
 */
export function sizeRig(rig: Rig, ask: SizeAsk, isWanted: () => boolean = () => true): SizeOutcome {
  if (!(ask.spare >= 0 && ask.spare < 1)) {
    return { kind: 'none', sentence: 'The spare must be from 0 % to less than 100 %.' };
  }
  const work = createPlanWork();
  const first = leastShareOf(rig, ask.spare, ask.lean, work);
  if (first.kind === 'none') return first;
  const axes = first.setting.axes.map(({ axis, array }) => ({
    axis,
    momentum: array.momentum * first.share,
  }));
  const done = (
    wheels: readonly SizedWheel[],
    refused: string | undefined,
    made: Rig | undefined,
    passes: number,
  ) => ({ kind: 'sized', share: first.share, axes, wheels, refused, rig: made, passes }) as const;
  let current = rig;
  let share = first.share;
  for (let pass = 1; pass <= MOST_PASSES; pass++) {
    if (!isWanted()) return { kind: 'none', sentence: 'Stopped.' };
    const made = remake(current, share * (1 + SETTLED / 2), ask);
    if (typeof made === 'string') return done([], made, undefined, pass);
    current = made.rig;
    const next = leastShareOf(current, ask.spare, ask.lean, work);
    if (next.kind === 'none') return done([], next.sentence, undefined, pass);
    share = next.share;
    if (share <= 1 && share >= 1 - 2 * SETTLED) {
      return done(listWheels(rig, made.rig, made.fits), undefined, current, pass);
    }
  }
  return done([], 'Wheel and rig did not settle on each other; choose other sizes.', undefined, MOST_PASSES);
}

type Fits = readonly (Extract<ReturnType<typeof fitWheel>, { kind: 'fitted' }> | undefined)[];

/** The rig with every working wheel made anew for a share of what it stores now. */
function remake(rig: Rig, share: number, ask: WheelAsk): { readonly rig: Rig; readonly fits: Fits } | string {
  const compiled = compileRig(rig);
  if (compiled.kind === 'refused') return sentences(compiled.refusals);
  const fits: (Fits[number] | undefined)[] = [];
  const gyros: Rig['array']['gyros'][number][] = [];
  for (const [i, gyro] of rig.array.gyros.entries()) {
    const isReaction = gyro.spin.kind === 'actuated';
    const inertia = compiled.compiled.wheels[i].spinInertia;
    const top = gyro.motor.velocityConstant * rig.power.cells * rig.power.cellVoltage;
    // A reaction wheel stores J times its range of speed, which its motor fixes: only J can be chosen.
    const wanted = isReaction ? { ...ask, rimSpeed: top * ask.radius } : ask;
    const fit = fitWheel(gyro, rig.power, inertia * share * (isReaction ? top * 0.9 : gyro.speed), wanted);
    if (fit.kind === 'too small') return `${gyro.name}: ${fit.sentence}`;
    if (isReaction && fit.limit === 'stress') {
      return `${gyro.name}: at the motor's top speed this rim is over its safe speed; choose a smaller radius.`;
    }
    fits.push(fit);
    gyros.push({ ...gyro, wheel: fit.wheel, speed: isReaction ? gyro.speed : fit.speed });
  }
  return { rig: { ...rig, array: { gyros } }, fits };
}

function listWheels(before: Rig, after: Rig, fits: Fits): readonly SizedWheel[] {
  const was = compileRig(before);
  const is = compileRig(after);
  if (was.kind === 'refused' || is.kind === 'refused') return [];
  return fits.flatMap((fit, i): readonly SizedWheel[] => {
    if (!fit) return [];
    const rim = fit.wheel.parts.find(
      (part): part is Extract<WheelPart, { kind: 'rim' }> => part.kind === 'rim',
    );
    return [
      {
        gyro: i,
        name: after.array.gyros[i].name,
        momentum: is.compiled.wheels[i].spinInertia * after.array.gyros[i].speed,
        speed: fit.speed,
        rimSpeed: fit.rimSpeed,
        mass: fit.mass,
        innerRadius: rim?.innerRadius ?? 0,
        limit: fit.limit,
        stressSpare: fit.stressSpare,
        massNow: was.compiled.wheels[i].mass,
      },
    ];
  });
}

/** Most roll a float is sized for until another is picked, rad; our own choice. */
const USUAL_ROLL = (5 * Math.PI) / 180;

/** What the rig's own first wheel suggests: its radius, width and material, as fast as is safe. */
export function usualSizeAsk(rig: Rig): SizeAsk | undefined {
  const parts = rig.array.gyros[0]?.wheel.parts;
  if (!parts) return undefined;
  const rim = parts.find((part) => part.kind === 'rim');
  const disc = parts.find((part) => part.kind === 'disc');
  const radius = rim?.kind === 'rim' ? rim.outerRadius : disc?.kind === 'disc' ? disc.radius : 0.05;
  const width = rim?.kind === 'rim' ? rim.width : 0.015;
  const material: MaterialName =
    rim?.kind === 'rim' ? rim.material : disc?.kind === 'disc' ? disc.material : 'steel S235';
  const lean = rig.footing.kind === 'float' ? USUAL_ROLL : undefined;
  return { spare: 0.2, lean, radius, width, material, rimSpeed: undefined };
}
