import {
  assembleTiltPlant,
  chooseEstimator,
  type DesignOutcome,
  designGains,
  type EstimatorModel,
  judgeLoop,
  LAW_GAINS,
  type Law,
  type LoopVerdict,
  mountSensor,
  NO_VIBRATION,
  nameLaw,
  type RollTiltPlant,
  readGains,
} from '../control';
import { compileRig, STANDARD_GRAVITY } from '../physics';
import { pivotHeight, setUpPlan } from '../planning';
import type { Rig } from '../rig';
import { type EvaluationWork, evaluate, type PlanView } from '../trial';
import type { Figure } from '../units';
import type { ClosedLoopRig } from './identify/closedLoop';

/** One line of the ledger or one figure, before and after. Undefined where the other rig has no such line. */
export interface BeforeAfter {
  readonly name: string;
  readonly label: string;
  readonly before: Figure | undefined;
  readonly after: Figure | undefined;
  /** Spare before and after, for ledger lines. */
  readonly spareBefore?: number;
  readonly spareAfter?: number;
}

export type RetunedGains =
  | {
      readonly kind: 'retuned';
      readonly law: Law;
      readonly names: readonly string[];
      readonly before: DesignOutcome;
      readonly after: DesignOutcome;
      /** What the gains of before would do on the corrected rig; undefined when there were none. */
      readonly oldOnNew: LoopVerdict | undefined;
    }
  | { readonly kind: 'none'; readonly sentence: string };

export type Retuning =
  | {
      readonly kind: 'retuned';
      readonly figures: readonly BeforeAfter[];
      readonly ledger: readonly BeforeAfter[];
      readonly planBefore: PlanView;
      readonly planAfter: PlanView;
      readonly gains: RetunedGains;
    }
  | { readonly kind: 'refused'; readonly sentences: readonly string[] };

const ALL_ON = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true } as const;

/**
 * New plan and new gains from a corrected rig, beside those of the rig as it was.
 *
 * @param work  evaluator's scratch and clock
 * Two plans, two previews and two gain designs: tenths of a second.
 */
export function retune(before: Rig, after: Rig, work: EvaluationWork): Retuning {
  const was = evaluate(before, ALL_ON, work);
  const is = evaluate(after, ALL_ON, work);
  if (was.kind === 'refused')
    return { kind: 'refused', sentences: was.refusals.map(({ sentence }) => sentence) };
  if (is.kind === 'refused')
    return { kind: 'refused', sentences: is.refusals.map(({ sentence }) => sentence) };
  const figures = pairByName(was.weigh, is.weigh, (f) => f.id).map(
    ([id, b, a]): BeforeAfter => ({ name: id, label: (a ?? b)?.label ?? id, before: b, after: a }),
  );
  const ledger = pairByName(was.ledger.lines, is.ledger.lines, (l) => l.name).map(
    ([name, b, a]): BeforeAfter => ({
      name,
      label: (a ?? b)?.label ?? name,
      before: b?.ask,
      after: a?.ask,
      ...(b ? { spareBefore: b.spare } : {}),
      ...(a ? { spareAfter: a.spare } : {}),
    }),
  );
  return {
    kind: 'retuned',
    figures,
    ledger,
    planBefore: was.plan,
    planAfter: is.plan,
    gains: retuneGains(before, after),
  };
}

function pairByName<T>(
  before: readonly T[],
  after: readonly T[],
  name: (item: T) => string,
): [string, T | undefined, T | undefined][] {
  const names = [...new Set([...after.map(name), ...before.map(name)])];
  return names.map((n) => [n, before.find((x) => name(x) === n), after.find((x) => name(x) === n)]);
}

interface RollLoop {
  readonly kind: 'loop';
  readonly plant: RollTiltPlant;
  readonly estimator: EstimatorModel;
  readonly weight: number;
}

/** The linear roll loop of a rig that leans and is held by servo-driven gimbals. */
function describeLoop(rig: Rig): RollLoop | { readonly kind: 'none'; readonly sentence: string } {
  const none = (sentence: string) => ({ kind: 'none', sentence }) as const;
  const compiled = compileRig(rig);
  if (compiled.kind === 'refused') return none(compiled.refusals.map(({ sentence }) => sentence).join(' '));
  const set = setUpPlan(compiled.compiled);
  if (set.kind === 'refused') return none(set.refusals.map(({ sentence }) => sentence).join(' '));
  const { setting } = set;
  if (setting.kind !== 'lean')
    return none('With its feet flat the body does not lean, and there is no roll loop to tune.');
  const axis = setting.axes.find((a) => a.axis === 'roll');
  if (!axis?.servo || axis.array.kind !== 'gimballed')
    return none('No gimbals driven by servos act on the roll of this rig.');
  const lineHeight = pivotHeight(setting.compiled);
  const body = {
    inertia: setting.inertia,
    stiffness: -setting.stiffness,
    damping: rig.footing.kind === 'float' ? rig.footing.linearDamping : 0,
    momentum: axis.array.momentum,
    lineHeight,
    gravity: STANDARD_GRAVITY,
  };
  const plant = assembleTiltPlant(body, axis.servo, rig.sensing);
  const sensor = mountSensor(rig.sensing, {
    rollLineHeight: lineHeight,
    gravity: STANDARD_GRAVITY,
    vibration: NO_VIBRATION,
  });
  return {
    kind: 'loop',
    plant,
    estimator: chooseEstimator(rig.sensing, sensor, 0),
    weight: setting.compiled.whole.mass * STANDARD_GRAVITY,
  };
}

function retuneGains(before: Rig, after: Rig): RetunedGains {
  const was = describeLoop(before);
  const is = describeLoop(after);
  if (was.kind === 'none') return was;
  if (is.kind === 'none') return is;
  const named = nameLaw(after.control, false);
  const given = named.kind === 'given' ? readGains(named.controller) : undefined;
  if (named.kind === 'given' && !given)
    return { kind: 'none', sentence: 'A passive gimbal has no gains to tune.' };
  const law: Law = named.kind === 'to-compute' ? named.law : (given?.law ?? 'feedback');
  const old = designGains({ plant: was.plant, estimator: was.estimator, law });
  const fresh = designGains({ plant: is.plant, estimator: is.estimator, law });
  const oldGains = given?.gains ?? (old.kind === 'designed' ? old.gains : undefined);
  const oldOnNew = oldGains
    ? judgeLoop({ plant: is.plant, estimator: is.estimator, law, gains: oldGains })
    : undefined;
  return { kind: 'retuned', law, names: LAW_GAINS[law], before: old, after: fresh, oldOnNew };
}

/** What a rig says of the five numbers that a closed-loop run can correct; a sentence where it has no such loop. */
export function closedLoopRigOf(
  rig: Rig,
): ClosedLoopRig | { readonly kind: 'none'; readonly sentence: string } {
  const loop = describeLoop(rig);
  if (loop.kind === 'none') return loop;
  const { plant, weight } = loop;
  return {
    inertia: plant.inertia,
    momentum: plant.momentum,
    lag: plant.servoLag,
    delay: plant.delay,
    centreOffset: 0,
    stiffness: plant.stiffness,
    weight,
  };
}
