/** What an identification needs besides the log: typed, or else as the rig has it. */
import { create } from 'zustand';
import type { Given, IdentifyKind, IdentifyRequest, PendulumSetup } from '../../../core/bench';
import type { QuantityInfo, Rig } from '../../../core/rig';
import type { BenchGivens } from '../../../workers';

export const KIND_WORDS: Readonly<Record<IdentifyKind, string>> = {
  decay: 'Roll or swing that dies down',
  toppling: 'Toppling from rest',
  pendulum: 'Thread pendulum',
  coastDown: 'Wheel coasting down',
  spinUp: 'Wheel spinning up',
  servoStep: 'Servo, steps',
  servoSweep: 'Servo, slow sweeps',
  stillSensor: 'Sensor at rest',
  closedLoop: 'Run with the loop closed',
};
export const KINDS = Object.keys(KIND_WORDS) as readonly IdentifyKind[];

/** How to make the log, in one sentence: what the fit takes for granted. */
export const KIND_RECIPES: Readonly<Record<IdentifyKind, string>> = {
  decay:
    'Wheels stopped, gimbals locked: heel it, let go, and log roll or roll rate for three swings or more.',
  toppling: 'Wheels stopped: hold it nearly upright, let go, and catch it. Log roll from before the release.',
  pendulum: 'Hang body or wheel by two or three equal threads, twist it a little, and log yaw or yaw rate.',
  coastDown: 'Spin the wheel up, cut the motor, and log its speed until it is slow.',
  spinUp: 'Full voltage from rest. Log wheel speed, and voltage and current if the controller gives them.',
  servoStep: 'Command steps of several sizes, large ones too. Log tilt command and measured tilt.',
  servoSweep: 'Command a slow triangle up and down twice or more. Log tilt command and measured tilt.',
  stillSensor: 'Motors off, on a solid bench. Log one rate or acceleration for ten minutes or more.',
  closedLoop: 'Let the loop hold the body and push it now and then. Log roll and tilt command.',
};

const info = (
  label: string,
  dimension: QuantityInfo['dimension'],
  min: number,
  max: number,
): QuantityInfo => ({ label, dimension, min, max });

export const GIVEN_INFO = {
  stiffness: info('Roll stiffness', 'stiffness', 1e-6, 1e9),
  inertia: info('Roll inertia', 'inertia', 0, 1e9),
  weight: info('Weight', 'force', 1e-3, 1e8),
  mass: info('Hanging mass', 'mass', 1e-4, 1e6),
  radius: info('Threads from the axis', 'length', 1e-3, 50),
  length: info('Length of the threads', 'length', 1e-2, 50),
  wheelInertia: info('Spin inertia of the wheel', 'inertia', 0, 1e6),
  voltage: info('Voltage, where not logged', 'voltage', 1e-2, 1e4),
  currentLimit: info('Current limit', 'current', 1e-3, 1e5),
  delay: info('Servo delay', 'time', 0, 1),
  lag: info('Servo lag', 'time', 1e-5, 5),
  backlash: info('Servo backlash', 'angle', 0, 0.5),
  swings: info('Swings timed', 'count', 1, 1000),
  reaction: info('One reading is sure to ±', 'time', 0, 2),
} as const satisfies Record<string, QuantityInfo>;

export type GivenName = keyof typeof GIVEN_INFO;

export const SURE_INFO = info('The typed are sure to ±', 'ratio', 0, 0.5);

export interface IdentifyForm {
  readonly kind: IdentifyKind;
  readonly typed: Readonly<Partial<Record<GivenName, number>>>;
  /** Half width of the 95 % interval of typed numbers, as a share of each. */
  readonly sure: number;
  readonly known: 'nothing' | 'stiffness' | 'inertia';
  readonly restoring: 'linear' | 'sine';
  readonly threads: PendulumSetup['kind'];
  readonly hung: 'bodyInertia' | 'wheelSpinInertia';
  readonly period: 'log' | 'typed';
  /** Stopwatch readings as typed. */
  readonly totals: string;
  readonly set: (change: Partial<Omit<IdentifyForm, 'set'>>) => void;
}

export const useIdentifyForm = create<IdentifyForm>()((set) => ({
  kind: 'decay',
  typed: {},
  sure: 0.02,
  known: 'stiffness',
  restoring: 'linear',
  threads: 'bifilar',
  hung: 'wheelSpinInertia',
  period: 'log',
  totals: '',
  set: (change) => set(change),
}));

/** What the rig says of a number that was not typed. */
export function usualGiven(
  name: GivenName,
  form: Pick<IdentifyForm, 'hung'>,
  rig: Rig,
  givens: BenchGivens | undefined,
  gyro: number,
): number {
  const drive = rig.array.gyros[gyro]?.drive;
  const servo = drive?.kind === 'servo' ? drive.servo : undefined;
  const loop = givens && 'inertia' in givens.loop ? givens.loop : undefined;
  switch (name) {
    case 'stiffness':
      return Math.abs(loop?.stiffness ?? 1);
    case 'inertia':
      return loop?.inertia ?? 1;
    case 'weight':
      return givens?.weight ?? 10;
    case 'mass':
      return (form.hung === 'bodyInertia' ? givens?.mass : givens?.wheelMass[gyro]) ?? 1;
    case 'wheelInertia':
      return givens?.wheelInertia[gyro] ?? 1e-4;
    case 'voltage':
      return rig.power.cells * rig.power.cellVoltage;
    case 'currentLimit':
      return rig.array.gyros[gyro]?.motor.currentLimit ?? 20;
    case 'delay':
      return servo?.delay ?? 0.01;
    case 'lag':
      return servo?.lag ?? 0.02;
    case 'backlash':
      return servo?.backlash ?? 0;
    case 'radius':
      return 0.1;
    case 'length':
      return 1;
    case 'swings':
      return 10;
    case 'reaction':
      return 0.2;
  }
}

/** Which numbers a kind asks for as the form stands. */
export function wantedGivens(form: IdentifyForm, isFloat: boolean): readonly GivenName[] {
  switch (form.kind) {
    case 'decay':
      if (form.known === 'nothing') return [];
      return form.known === 'stiffness' ? ['stiffness'] : isFloat ? ['inertia', 'weight'] : ['inertia'];
    case 'toppling':
      return form.known === 'stiffness' ? ['stiffness'] : [];
    case 'pendulum':
      return form.period === 'typed'
        ? ['mass', 'radius', 'length', 'swings', 'reaction']
        : ['mass', 'radius', 'length'];
    case 'coastDown':
      return ['wheelInertia'];
    case 'spinUp':
      return ['wheelInertia', 'voltage', 'currentLimit'];
    case 'servoStep':
      return ['backlash'];
    case 'servoSweep':
      return ['delay', 'lag'];
    case 'stillSensor':
    case 'closedLoop':
      return [];
  }
}

/** Seconds typed with blanks, commas between or decimal commas; undefined when one of them is no number. */
export function readTotals(text: string): readonly number[] | undefined {
  const parts = text
    .trim()
    .split(/[\s;]+/)
    .filter((part) => part !== '');
  const values = parts.map((part) => Number(part.replace(/,$/, '').replace(',', '.')));
  return values.length > 0 && values.every((value) => Number.isFinite(value) && value > 0)
    ? values
    : undefined;
}

export type BuiltRequest =
  | { readonly kind: 'log'; readonly request: IdentifyRequest }
  | { readonly kind: 'typed'; readonly setup: PendulumSetup; readonly totals: readonly number[] }
  | { readonly kind: 'refused'; readonly sentence: string };

/** The request the form amounts to, or what is wrong with it in words. */
export function buildRequest(
  form: IdentifyForm,
  rig: Rig,
  givens: BenchGivens | undefined,
  gyro: number,
): BuiltRequest {
  const number = (name: GivenName): number => form.typed[name] ?? usualGiven(name, form, rig, givens, gyro);
  const given = (name: GivenName): Given => {
    const value = number(name);
    return { value, halfWidth: Math.abs(value) * form.sure };
  };
  const ask = (request: IdentifyRequest): BuiltRequest => ({ kind: 'log', request });
  switch (form.kind) {
    case 'decay': {
      const known =
        form.known === 'nothing'
          ? {}
          : form.known === 'stiffness'
            ? { stiffness: given('stiffness') }
            : {
                inertia: given('inertia'),
                ...(rig.footing.kind === 'float' ? { weight: given('weight') } : {}),
              };
      return ask({ kind: 'decay', options: { restoring: form.restoring, ...known } });
    }
    case 'toppling':
      return ask({
        kind: 'toppling',
        options: form.known === 'stiffness' ? { stiffness: given('stiffness') } : {},
      });
    case 'pendulum': {
      const setup: PendulumSetup = {
        kind: form.threads,
        mass: given('mass'),
        radius: given('radius'),
        length: given('length'),
      };
      if (form.period === 'log') return ask({ kind: 'pendulum', setup, options: { target: form.hung } });
      const totals = readTotals(form.totals);
      return totals
        ? { kind: 'typed', setup, totals }
        : {
            kind: 'refused',
            sentence: `Readings: "${form.totals}" will not do; type seconds above zero with blanks between, as in 15.2 15.3.`,
          };
    }
    case 'coastDown':
      return ask({ kind: 'coastDown', options: { inertia: given('wheelInertia') } });
    case 'spinUp':
      return ask({
        kind: 'spinUp',
        voltage: number('voltage'),
        options: { inertia: given('wheelInertia'), currentLimit: number('currentLimit') },
      });
    case 'servoStep':
      return ask({ kind: 'servoStep', backlash: number('backlash') });
    case 'servoSweep':
      return ask({ kind: 'servoSweep', dynamics: { delay: given('delay'), lag: given('lag') } });
    case 'stillSensor':
      return ask({ kind: 'stillSensor' });
    case 'closedLoop':
      if (!givens) return { kind: 'refused', sentence: 'The rig as it stands cannot be worked out.' };
      if (!('inertia' in givens.loop)) return { kind: 'refused', sentence: givens.loop.sentence };
      return ask({ kind: 'closedLoop', rig: givens.loop, options: {} });
  }
}
