import { type Dimension, formatQuantity } from '../units';

export const CAUTION_KINDS = [
  'burst',
  'printed',
  'firstSpin',
  'knock',
  'trap',
  'battery',
  'discharge',
  'defer',
] as const;
export type CautionKind = (typeof CAUTION_KINDS)[number];

/** What set a caution off: a measure at or above its threshold, both SI. */
export interface CautionTrigger {
  readonly measure: string;
  readonly value: number;
  readonly threshold: number;
  readonly dimension: Dimension;
}

/** A warning as data: what must be said, and the numbers that call for it. A printed sheet shows every one. */
export interface Caution {
  readonly kind: CautionKind;
  readonly trigger: CautionTrigger;
  readonly sentence: string;
}

/** What is known of a rig that can hurt; leave out nothing that is there. */
export interface Hazards {
  /** m/s, J: the fastest rim and the sum of all spins. */
  readonly rimSpeed: number;
  readonly spinEnergy: number;
  /** m, to which the liveliest wheel could throw its own weight. */
  readonly throwHeight: number;
  /** Number of printed parts in wheels that spin. */
  readonly printedParts: number;
  /** N*m, the most that turns a gimbal: its drive, or the wheel's momentum times the body's rate. */
  readonly gimbalTorque: number;
  /** J, of the full battery. */
  readonly batteryEnergy: number;
}

/** Where each caution starts. Our own choice, low on purpose: common practice gives no line below which one may relax. */
export const CAUTION_THRESHOLDS = {
  /** m/s: a piece this fast harms an eye. */
  rimSpeed: 10,
  /** J. */
  spinEnergy: 1,
  /** N*m: 10 N on a finger 30 mm from the axis. */
  gimbalTorque: 0.3,
  /** J: a single small cell. */
  batteryEnergy: 3600,
} as const;

const SENTENCES: Readonly<Record<CautionKind, string>> = {
  burst:
    'The wheel can burst. Run it only inside a guard that stops its pieces, stand clear of its plane, and keep others clear.',
  printed:
    'Printed plastic varies, is weak across its layers, creeps and softens when warm. Take the low end of the range and spin-test every wheel in a guard.',
  firstSpin:
    'Make the first spin from a distance and in steps: a quarter, a half, three quarters and full speed, stopping to look at each.',
  knock:
    'After a drop or a knock, or a touch while spinning, inspect wheel, hub and bearings for cracks before it spins again.',
  trap: 'A gimbal can trap and crush a finger, and it moves without warning while the wheel turns. Keep hands out; fit a stop that the hand cannot pass.',
  battery:
    'The battery can burn. Fuse it, charge it attended and away from what burns, and do not use it swollen or dented.',
  discharge:
    'Before work on the rig, bring the wheels to rest and take the battery off. A wheel that still turns is still charged.',
  defer:
    'These figures do not replace local codes or a licensed engineer: ask one wherever a failure could hurt someone.',
};

/**
 * Every caution that a rig calls for, each with the measure that set it off.
 *
 * @param hazards  SI
 * @returns        in a fixed order; empty only for a rig with nothing that spins, pinches or burns
 */
export function cautionsFor(hazards: Hazards): readonly Caution[] {
  const cautions: Caution[] = [];
  const add = (kind: CautionKind, trigger: CautionTrigger): void => {
    cautions.push({ kind, trigger, sentence: SENTENCES[kind] });
  };
  const over = (
    measure: string,
    value: number,
    threshold: number,
    dimension: Dimension,
  ): CautionTrigger | undefined =>
    value >= threshold ? { measure, value, threshold, dimension } : undefined;

  const energy = over('Energy of the spin', hazards.spinEnergy, CAUTION_THRESHOLDS.spinEnergy, 'energy');
  const rim = over('Rim speed', hazards.rimSpeed, CAUTION_THRESHOLDS.rimSpeed, 'speed');
  const spinning = rim ?? energy;
  if (spinning) add('burst', spinning);
  const printed = over('Printed parts that spin', hazards.printedParts, 1, 'count');
  if (printed) add('printed', printed);
  if (spinning) {
    add('firstSpin', spinning);
    add('knock', spinning);
  }
  const trap = over('Torque of a gimbal', hazards.gimbalTorque, CAUTION_THRESHOLDS.gimbalTorque, 'torque');
  if (trap) add('trap', trap);
  const battery = over(
    'Energy of the battery',
    hazards.batteryEnergy,
    CAUTION_THRESHOLDS.batteryEnergy,
    'energy',
  );
  if (battery) add('battery', battery);
  const charged = energy ?? rim ?? battery;
  if (charged) add('discharge', charged);
  const first = cautions[0];
  if (first) add('defer', first.trigger);
  return cautions;
}

/** The trigger in words, such as `Rim speed 42.0 m/s, at or above 10.0 m/s`. */
export const describeTrigger = (trigger: CautionTrigger): string =>
  `${trigger.measure} ${formatQuantity(trigger.value, trigger.dimension)}, at or above ${formatQuantity(
    trigger.threshold,
    trigger.dimension,
  )}`;
