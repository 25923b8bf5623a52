import { type Gyro, type Refusal, type Rig, readRig } from '../rig';
import type { Patch } from './identify/result';

export interface AppliedPatch {
  readonly patch: Patch;
  /** Field of the rig, such as `array.gyros[0].motor.resistance`. */
  readonly field: string;
  readonly before: number;
  readonly after: number;
}

export interface PatchedRig {
  readonly rig: Rig;
  readonly applied: readonly AppliedPatch[];
  /** What could not be put in, and what to do instead. */
  readonly left: readonly { readonly patch: Patch; readonly sentence: string }[];
}

/** Why a quantity is no field: the rig works it out from others. */
const DERIVED: Readonly<Partial<Record<Patch['quantity'], string>>> = {
  bodyInertia:
    'The rig works its inertia out from masses and sizes: correct those, or for a float its added roll inertia.',
  rollStiffness: 'The rig works its roll stiffness out from weight, centre and footing: correct those.',
  metacentricHeight:
    'The rig works its metacentric height out from section and centre of mass: correct the height of what it carries.',
  naturalPeriod: 'The natural period follows from inertia and stiffness: correct those.',
  topplingRate: 'The toppling rate follows from inertia and centre of mass: correct those.',
  dryFriction: 'The rig has no dry friction of the body: the linear and quadratic damping stand for it.',
  wheelSpinInertia: 'The rig works the wheel’s inertia out from its parts: correct their sizes or materials.',
  wheelDragConstant: 'The rig works drag out from bearings and housing: correct the bearing friction.',
  wheelDragLinear: 'The rig works drag out from bearings and housing: correct the bearing friction.',
  wheelDragWindage: 'The rig works windage out from the wheel and its housing: correct the housing.',
  sensorRandomWalk: 'The rig has no random walk of the bias: its bias instability stands for it.',
  arrayMomentum: 'Momentum follows from wheel and speed: correct the wheel speed or the wheel.',
  centreOfMassOffset:
    'The centre of mass follows from what the rig carries: move a payload by as much moment.',
};

/**
 * Puts identified numbers into a rig. Each change is checked by the rig's own rules; what they forbid, or what is no field of
 * the document, is left out and told. The rig given is not changed.
 *
 * @param gyros  places of the gyros the wheel and servo results are for; all when absent
 */
export function patchRig(rig: Rig, patches: readonly Patch[], gyros?: readonly number[]): PatchedRig {
  let current = rig;
  const applied: AppliedPatch[] = [];
  const left: { patch: Patch; sentence: string }[] = [];
  for (const patch of patches) {
    const changes = findFields(current, patch, gyros);
    if (changes.length === 0) {
      left.push({ patch, sentence: DERIVED[patch.quantity] ?? 'This rig has no such field.' });
      continue;
    }
    const next = structuredCloneOf(current);
    for (const { field, after } of changes) writeField(next, field, after);
    const outcome = readRig(next);
    if (outcome.kind === 'read') {
      current = outcome.rig;
      applied.push(...changes);
    } else {
      const refusals: readonly Refusal[] = outcome.kind === 'refused' ? outcome.refusals : [];
      left.push({
        patch,
        sentence: refusals.map(({ sentence }) => sentence).join(' ') || 'The rig refuses it.',
      });
    }
  }
  return { rig: current, applied, left };
}

const structuredCloneOf = (rig: Rig): Record<string, unknown> =>
  JSON.parse(JSON.stringify(rig)) as Record<string, unknown>;

function writeField(target: Record<string, unknown>, field: string, value: number): void {
  const steps = field.replace(/\[(\d+)\]/g, '.$1').split('.');
  let at = target;
  for (const step of steps.slice(0, -1)) at = at[step] as Record<string, unknown>;
  at[steps[steps.length - 1]] = value;
}

function findFields(rig: Rig, patch: Patch, gyros: readonly number[] | undefined): AppliedPatch[] {
  const one = (field: string, before: number, after = patch.value): AppliedPatch[] => [
    { patch, field, before, after },
  ];
  const each = (of: (gyro: Gyro, field: string) => AppliedPatch[]): AppliedPatch[] =>
    rig.array.gyros.flatMap((gyro, i) => (gyros && !gyros.includes(i) ? [] : of(gyro, `array.gyros[${i}]`)));
  const servo = (key: 'delay' | 'lag' | 'backlash' | 'resolution' | 'noLoadSpeed'): AppliedPatch[] =>
    each(({ drive }, field) =>
      drive.kind === 'servo' ? one(`${field}.drive.servo.${key}`, drive.servo[key]) : [],
    );
  const isAcceleration = patch.unit.startsWith('m/s²');
  switch (patch.quantity) {
    case 'motorResistance':
      return each(({ motor }, field) => one(`${field}.motor.resistance`, motor.resistance));
    case 'motorTorqueConstant':
      return each(({ motor }, field) =>
        one(`${field}.motor.velocityConstant`, motor.velocityConstant, 1 / patch.value),
      );
    case 'servoDelay':
      return servo('delay');
    case 'servoLag':
      return servo('lag');
    case 'servoSpeedLimit':
      return servo('noLoadSpeed');
    case 'servoBacklash':
      return servo('backlash');
    case 'servoResolution':
      return servo('resolution');
    case 'sensorNoiseDensity':
      return isAcceleration
        ? one('sensing.accelNoise', rig.sensing.accelNoise)
        : one('sensing.gyroNoise', rig.sensing.gyroNoise);
    case 'sensorBiasInstability':
      return isAcceleration ? [] : one('sensing.gyroDrift', rig.sensing.gyroDrift);
    case 'linearDamping':
      return rig.footing.kind === 'float' ? one('footing.linearDamping', rig.footing.linearDamping) : [];
    case 'quadraticDamping':
      return rig.footing.kind === 'float'
        ? one('footing.quadraticDamping', rig.footing.quadraticDamping)
        : [];
    default:
      return [];
  }
}
