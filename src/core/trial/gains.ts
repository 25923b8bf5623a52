/** Gains for the rig's own hardware, how sure they are, and how they change with wheel speed. */
import {
  buildController,
  type Controller,
  type DesignOutcome,
  designGains,
  findLeastSpeed,
  type GainMap,
  judgeLoop,
  LAW_GAINS,
  type LeastSpeed,
  type LoopModel,
  type LoopVerdict,
  mapGains,
  type SpeedRow,
  scheduleGains,
} from '../control';
import type { PlanSetting } from '../planning';
import type { Control } from '../rig';
import { type LoopSetting, setUpLoop } from './rollLoop';

/** What is said of a set of gains. */
export interface GainReport {
  readonly loop: LoopSetting;
  readonly gains: Float64Array;
  readonly verdict: LoopVerdict;
  readonly leastSpeed: LeastSpeed;
}

export type GainOutcome =
  | { readonly kind: 'report'; readonly report: GainReport; readonly design: DesignOutcome | undefined }
  | { readonly kind: 'none'; readonly sentence: string };

/**
 * Computes gains for the rig where it leaves them to be computed, or judges those it names.
 *
 * @param always  design even when the rig names gains; the law stays
 *
 * About 0.1 s.
 */
export function computeGains(setting: PlanSetting, always = false): GainOutcome {
  const outcome = setUpLoop(setting);
  if (outcome.kind === 'none') return outcome;
  const { loop } = outcome;
  if (loop.gains && !always)
    return { kind: 'report', design: undefined, report: judgeGains(loop, loop.gains) };
  const hasTrim = setting.kind === 'lean' && loop.topples && loop.law === 'feedback';
  const { plant, estimator, law } = loop;
  let design = designGains({ plant, estimator, law, hasTrim });
  if (design.kind === 'impossible' && hasTrim) design = designGains({ plant, estimator, law });
  if (design.kind === 'impossible') return { kind: 'none', sentence: explainNoGains(design) };
  return { kind: 'report', design, report: judgeGains(loop, design.gains) };
}

/** Margins and least speed of one set of gains. */
export function judgeGains(loop: LoopSetting, gains: ArrayLike<number>): GainReport {
  const model = modelOf(loop, gains);
  return {
    loop,
    gains: Float64Array.from(gains),
    verdict: judgeLoop(model),
    leastSpeed: findLeastSpeed(model),
  };
}

const modelOf = ({ plant, estimator, law }: LoopSetting, gains: ArrayLike<number>): LoopModel => ({
  plant,
  estimator,
  law,
  gains,
});

function explainNoGains(design: Extract<DesignOutcome, { kind: 'impossible' }>): string {
  const ms = (seconds: number): string => `${(1000 * seconds).toFixed(0)} ms`;
  switch (design.reason) {
    case 'delay-too-long':
      return `No gains hold this body: lean and lean rate feedback can bear a delay of ${ms(design.delayLimit)} at most, and loop and servo take longer. A quicker servo or loop would cure it.`;
    case 'neutral-body':
      return 'The body neither topples nor rights itself, so nothing ties its lean to the tilt.';
    case 'no-gains-found':
      return design.holdsNominally
        ? 'Gains were found that hold the rig as drawn, but none that still hold with 30 % more delay and 15 % less gain. A quicker servo or a larger wheel would cure it.'
        : 'No gains were found that hold this rig. A quicker servo or loop, or a larger wheel, would cure it.';
  }
}

/** Which two gains a map is drawn over, and how far: from nothing to well past the present ones. */
export function mapAround(
  loop: LoopSetting,
  gains: ArrayLike<number>,
  columns: number,
  rows: number,
): GainMap {
  const [across, up] = mapAxes(loop);
  const range = (value: number): readonly [number, number] =>
    value >= 0 ? [0, Math.max(2.5 * value, 1e-3)] : [2.5 * value, 0];
  return mapGains({
    ...modelOf(loop, gains),
    across,
    up,
    acrossRange: range(gains[across] as number),
    upRange: range(gains[up] as number),
    columns,
    rows,
  });
}

/** Places of the two gains that carry the loop: stiffness across, damping up. */
export function mapAxes({ law }: LoopSetting): readonly [number, number] {
  if (law === 'pidTilt') return [1, 0];
  return law === 'pidTiltRate' ? [0, 2] : [0, 1];
}

/** Gains at falling shares of wheel speed, so that the loop stays as it was while tilt and servo have room. */
export const gainsAgainstSpeed = (
  { loop, gains }: GainReport,
  shares: readonly number[],
): readonly SpeedRow[] => scheduleGains(modelOf(loop, gains), shares);

/** Gains as the rig's document keeps them. */
export function controlOf(law: GainReport['loop']['law'], gains: ArrayLike<number>): Control {
  return Object.fromEntries([
    ['kind', law],
    ...LAW_GAINS[law].map((name, i) => [name, gains[i] as number]),
  ]) as unknown as Control;
}

export const controllerOf = ({ loop, gains }: GainReport): Controller => buildController(loop.law, gains);
