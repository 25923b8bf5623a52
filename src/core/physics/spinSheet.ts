/** The Spin up station's answer as plain data: it crosses from a worker to the screen, and a printed sheet reads it too. */
import { MATERIALS, type Rig } from '../rig';
import { type Figure, formatQuantity } from '../units';
import type { Caution } from './cautions';
import { figure, figureInput as input, speedInput } from './figureParts';
import { type RigSpin, type SpinReport, spinRig } from './spin';
import { arraySpinFigures, shakeFigures } from './spinDriveFigures';
import { type FigureGroup, spinFigures } from './spinFigures';
import { type SpinChoices, spinFailures } from './spinStanding';
import type { WheelFault } from './wheelProperties';
import type { ContactLine, JointLine, StressLine } from './wheelStress';

/** One place of one part that is stressed. */
export interface StressRow {
  readonly part: number;
  readonly place: StressLine['place'];
  /** m. */
  readonly radius: number;
  /** The stress, with what it is held against. */
  readonly figure: Figure;
  /** 1 - factor x stress / allowable, at the stated factor; negative: too fast for this part. */
  readonly spare: number;
  /** rad/s, lowest and highest; the same for a metal. */
  readonly safeSpeed: readonly [low: number, high: number];
  readonly isPrinted: boolean;
}

export interface GyroSpinSheet {
  readonly name: string;
  /** What forbids spinning it so, in words. */
  readonly failures: readonly string[];
  readonly groups: readonly FigureGroup[];
  readonly stress: readonly StressRow[];
  readonly joints: readonly JointLine[];
  readonly contacts: readonly ContactLine[];
  /** What the unbalance does to the sensor. */
  readonly shake: readonly Figure[];
  /** rad/s, speed asked for, and the least and most that are safe: the same for a wheel of metal. */
  readonly speed: number;
  readonly safeSpeed: readonly [low: number, high: number];
  /** J. */
  readonly burstEnergy: number;
  /** The part of the bearing's load that rules, in words. */
  readonly rulingLoad: string;
  /** Spin-up: s, rad/s, A, W; undefined when the speed is not reached. */
  readonly spinUp: SpinUpCurve | undefined;
  /** rad/s, the most this drive reaches. */
  readonly topSpeed: number;
  /** Coasting down: s and rad/s. */
  readonly coast: { readonly time: Float64Array; readonly speed: Float64Array };
}

export interface SpinUpCurve {
  readonly time: Float64Array;
  readonly speed: Float64Array;
  readonly current: Float64Array;
  readonly batteryPower: Float64Array;
}

export interface SpinSheet {
  readonly gyros: readonly GyroSpinSheet[];
  /** All wheels on the one battery. */
  readonly figures: readonly Figure[];
  /** s. */
  readonly runTime: number;
  readonly cautions: readonly Caution[];
}

export type SpinSheetOutcome =
  | { readonly kind: 'sheet'; readonly sheet: SpinSheet }
  | { readonly kind: 'refused'; readonly sentences: readonly string[] };

const PLACE_WORDS: Readonly<Record<StressLine['place'], string>> = {
  spin: 'in the ring',
  'hole edge': 'at the edge of a bolt hole',
  'groove wall': 'in the wall of the groove',
};

function stressRow(line: StressLine, report: SpinReport): StressRow {
  const { factor } = report.choices;
  const material = MATERIALS[line.material];
  const spare = 1 - (factor * line.stress) / line.allowable;
  const note = {
    formula: `${line.note.formula}; spare = 1 − factor × σ / σ_allowable`,
    source: `${line.note.source}; minimum allowable: ${material.source}`,
  };
  return {
    part: line.part,
    place: line.place,
    radius: line.radius,
    figure: figure(
      `stress-${line.part}-${line.place}`,
      `Stress ${PLACE_WORDS[line.place]}`,
      line.stress,
      'stress',
      note,
      [
        input('Radius of the peak', line.radius, 'length'),
        speedInput(report),
        input('Density', material.density, 'density'),
        input("Poisson's ratio", material.poissonRatio, 'ratio'),
        input('Minimum allowable', line.allowable, 'stress'),
        input('Factor on speed squared', factor, 'ratio'),
        input('Safe speed', line.safeSpeed, 'spinRate'),
      ],
    ),
    spare,
    safeSpeed: line.safeSpeedRange,
    isPrinted: material.kind === 'printed',
  };
}

/** The load that makes up most of the greatest radial one, with its share. */
function rulingLoad({ bearing }: SpinReport): string {
  const loads = [
    ['the gyroscopic couple', bearing.gyroscopic],
    ['unbalance', bearing.unbalance],
    ['weight', bearing.weight],
  ] as const;
  const [word, value] = loads.reduce((most, load) => (load[1] > most[1] ? load : most));
  return `${word} rules: ${formatQuantity(value, 'force')} of ${formatQuantity(bearing.radial, 'force')}`;
}

function gyroSheet(report: SpinReport, spin: RigSpin, index: number, loopRate: number): GyroSpinSheet {
  const { spinUp, stress, coast } = report;
  const shake = spin.shakes[index];
  const up = spinUp.kind === 'reaches' ? spinUp.spinUp : undefined;
  return {
    name: report.gyro.name,
    failures: spinFailures(report),
    groups: spinFigures(report),
    stress: stress.lines.map((line) => stressRow(line, report)),
    joints: stress.joints,
    contacts: stress.contacts,
    shake: shake ? shakeFigures(shake, report, loopRate) : [],
    speed: report.gyro.speed,
    safeSpeed: stress.lines[0]!.safeSpeedRange,
    burstEnergy: report.burst.energy,
    rulingLoad: rulingLoad(report),
    spinUp: up && {
      time: up.time,
      speed: up.speed,
      current: up.current,
      batteryPower: up.batteryPower,
    },
    topSpeed: report.topSpeed,
    coast: { time: coast.time, speed: coast.speed },
  };
}

const faultSentence = (name: string, fault: WheelFault): string => {
  const value = typeof fault.value === 'number' ? formatQuantity(fault.value, 'length') : fault.value;
  return `${name}: wheel.${fault.field}: ${value}; it must be ${fault.allowed}.`;
};

/**
 * Everything the Spin up station shows of a rig.
 *
 * @param gimbalPower  W, mean power of all gimbal drives, from the plan; 0 when not known
 * @param choices      in place of the usual ones, for every gyro
 * @returns            the sheet; or for a wheel that cannot be, a sentence for each field
 *
 * Cost: about 2 ms for each gyro that is unlike the others.
 */
export function spinSheet(
  rig: Rig,
  gimbalPower: number,
  choices: Partial<SpinChoices> = {},
): SpinSheetOutcome {
  const spin = spinRig(rig, gimbalPower, choices);
  const reports: SpinReport[] = [];
  const sentences: string[] = [];
  spin.gyros.forEach((outcome, i) => {
    if (outcome.kind === 'spun') reports.push(outcome.report);
    else {
      const name = rig.array.gyros[i]?.name ?? `Gyro ${i + 1}`;
      sentences.push(...outcome.faults.map((fault) => faultSentence(name, fault)));
    }
  });
  if (sentences.length > 0) return { kind: 'refused', sentences };
  return {
    kind: 'sheet',
    sheet: {
      gyros: reports.map((report, i) => gyroSheet(report, spin, i, rig.sensing.loopRate)),
      figures: arraySpinFigures(spin),
      runTime: spin.runTime,
      cautions: spin.cautions,
    },
  };
}
