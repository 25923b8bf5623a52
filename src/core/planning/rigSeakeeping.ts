/** A floating rig's wave work: how it rolls in a train of waves bare and with its own array, and what that costs. */
import { type CompiledRig, compileRighting, fallOf, rollReduction, STANDARD_GRAVITY } from '../physics';
import { arrayAxes } from './arrayAxes';
import { type RollRun, rollInTime } from './rollRun';
import {
  largestGain,
  type RollArray,
  type RollBody,
  rollByFrequency,
  rollPerSlope,
  type Spectral,
} from './seakeeping';
import { createWaveTrain, type Waves } from './waveLoad';

export interface Seakeeping {
  /** N*m*s/rad: momentum held for each radian of roll. */
  readonly gain: number;
  readonly bare: { readonly spectral: Spectral; readonly run: RollRun };
  readonly held: { readonly spectral: Spectral; readonly run: RollRun };
  /** Percent by which the root-mean-square roll ANGLE is less with the array: by frequencies, and in this run. */
  readonly spectralReduction: number;
  readonly runReduction: number;
  /** Roll amplitude over wave slope against the frequency of encounter of a hull that lies still, rad/s. */
  readonly response: {
    readonly frequency: Float64Array;
    readonly bare: Float64Array;
    readonly held: Float64Array;
  };
}

export type SeakeepingOutcome =
  | { readonly kind: 'rolled'; readonly seakeeping: Seakeeping }
  | { readonly kind: 'none'; readonly sentence: string };

/** Natural periods left out of the figures at the start of a run. */
const SETTLING_PERIODS = 5;
const RESPONSE_POINTS = 160;

/** The rig as a body that rolls on the water; undefined when it does not float upright. */
export function rollBodyOf(compiled: CompiledRig): RollBody | undefined {
  const { floating, rig, whole } = compiled;
  const fall = fallOf(compiled);
  if (floating === undefined || rig.footing.kind !== 'float' || fall.stiffness <= 0) return undefined;
  return {
    inertia: fall.inertia,
    stiffness: fall.stiffness,
    linearDamping: rig.footing.linearDamping,
    quadraticDamping: rig.footing.quadraticDamping,
    righting: {
      weight: whole.mass * STANDARD_GRAVITY,
      arms: compileRighting(floating.footing.righting),
    },
    waves: {
      stiffness: fall.stiffness,
      beam: floating.flotation.waterlineBeam,
      draught: floating.flotation.draught,
    },
  };
}

/** The rig's gimballed array about its roll axis; undefined when there is none that works as one. */
export function rollArrayOf(compiled: CompiledRig): RollArray | undefined {
  const arrays = arrayAxes(compiled);
  if (arrays.kind !== 'axes') return undefined;
  const roll = arrays.axes.find(({ axis }) => axis === 'roll');
  if (roll === undefined || roll.array.kind !== 'gimballed') return undefined;
  const { momentum, tiltMin, tiltMax, tiltRate, torque, servo } = roll.array;
  return {
    momentum,
    tilt: Math.min(-tiltMin, tiltMax),
    tiltRate,
    torque,
    gimbalInertia: (servo?.gimbalInertia ?? 0) * roll.followers.length,
    lag: roll.servo?.lag ?? 0,
  };
}

/**
 * Rolls a floating rig in waves with and without its array.
 *
 * @param waves  a regular train or a seeded sea; its duration is that of the run
 * @param gain   N*m*s/rad; undefined for the largest that these waves leave within the array's limits
 *
 * O(duration x components).
 */
export function seakeepingOf(compiled: CompiledRig, waves: Waves, gain?: number): SeakeepingOutcome {
  const body = rollBodyOf(compiled);
  if (body === undefined) {
    return {
      kind: 'none',
      sentence: 'Waves are for a rig that floats upright: footing float, metacentric height above 0 mm.',
    };
  }
  const array = rollArrayOf(compiled);
  if (array === undefined) {
    return {
      kind: 'none',
      sentence: 'Nothing here works about the roll axis as one: lay out a single wheel or a scissored pair.',
    };
  }
  const train = createWaveTrain(waves);
  const used = gain ?? largestGain(body, train, array);
  const natural = 2 * Math.PI * Math.sqrt(body.inertia / body.stiffness);
  const settle = Math.min(SETTLING_PERIODS * natural, waves.duration / 2);
  const rolled = (g: number) => ({
    spectral: rollByFrequency(body, train, g, array.momentum),
    run: rollInTime(body, train, array, g, waves.duration, settle),
  });
  const bare = rolled(0);
  const held = rolled(used);
  const frequency = Float64Array.from(
    { length: RESPONSE_POINTS },
    (_, i) => ((2 * Math.PI) / natural) * (0.2 + (2.8 * i) / (RESPONSE_POINTS - 1)),
  );
  const response = (extra: number) =>
    frequency.map((w) => rollPerSlope(body, body.linearDamping + extra, w, Math.PI / 2));
  return {
    kind: 'rolled',
    seakeeping: {
      gain: used,
      bare,
      held,
      spectralReduction: 100 * rollReduction(held.spectral.rmsRoll, bare.spectral.rmsRoll),
      runReduction: 100 * rollReduction(held.run.rmsRoll, bare.run.rmsRoll),
      response: {
        frequency,
        bare: response(bare.spectral.equivalentDamping),
        held: response(held.spectral.equivalentDamping + used),
      },
    },
  };
}
