/** The one gate from the rig as a document to the models that dynamics, planner and pictures compute with. */
import type { Gyro, HullBody, LeggedBody, Refusal, Rig } from '../rig';
import { formatQuantity } from '../units';
import { type Floating, floatHull } from './floatCompile';
import type { StarFooting } from './footing';
import { hipPositions, legReach, restFeet } from './legGeometry';
import { carrierPieces, combineBodies, gimbalFrame, rigPieces, stanceWidthOf } from './massProperties';
import { cross3, dot3, norm3, scale3, subtract3, unit3, type Vec3 } from './spatial';
import {
  compileStar,
  type RigidBody,
  type StarDescription,
  type StarGyro,
  type StarModel,
} from './starModel';
import { coastDrag } from './wheelDrag';
import { type WheelProperties, wheelProperties } from './wheelProperties';

export interface CompiledRig {
  readonly rig: Rig;
  readonly wheels: readonly WheelProperties[];
  /** Body, legs at rest and payloads, without the gyros; body frame. */
  readonly carrier: RigidBody;
  /** Everything, gimbals at rest. */
  readonly whole: RigidBody;
  /** Signed wheel speeds, rad/s. */
  readonly speeds: Float64Array;
  readonly star: StarDescription;
  readonly model: StarModel;
  /** How it floats; undefined on land. */
  readonly floating: Floating | undefined;
}

export type CompileOutcome =
  | { readonly kind: 'compiled'; readonly compiled: CompiledRig }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/**
 * Checks what the schema cannot say (parts that must fit each other) and compiles the rig.
 * Every refusal names the field, its value, the allowed range and the unit. O(parts).
 */
export function compileRig(rig: Rig): CompileOutcome {
  const refusals: Refusal[] = [...refuseFooting(rig), ...refuseLegs(rig)];
  const wheels: WheelProperties[] = [];
  rig.array.gyros.forEach((gyro, i) => {
    refusals.push(...refuseGyro(rig, gyro, i));
    const outcome = wheelProperties(gyro.wheel.parts);
    if (outcome.kind === 'wheel') wheels.push(outcome.wheel);
    else {
      for (const fault of outcome.faults) {
        const value = typeof fault.value === 'number' ? formatQuantity(fault.value, 'length') : fault.value;
        const field = `array.gyros[${i}].wheel.${fault.field}`;
        refusals.push({ field, sentence: `${field}: ${value}; it must be ${fault.allowed}.` });
      }
    }
  });
  if (refusals.length > 0) return { kind: 'refused', refusals };
  const carrier = combineBodies(carrierPieces(rig));
  const whole = combineBodies(rigPieces(rig));
  const met = meetWorld(rig, whole);
  if (met.kind === 'refused') return met;
  const star: StarDescription = {
    base: carrier,
    gyros: rig.array.gyros.map((gyro, i) => starGyro(gyro, wheels[i] as WheelProperties)),
    footing: met.footing,
  };
  const speeds = Float64Array.from(rig.array.gyros, (gyro) => gyro.sense * gyro.speed);
  const model = compileStar(star);
  return {
    kind: 'compiled',
    compiled: { rig, wheels, carrier, whole, speeds, star, model, floating: met.floating },
  };
}

function starGyro(gyro: Gyro, wheel: WheelProperties): StarGyro {
  const drive: StarGyro['drive'] =
    gyro.drive.kind === 'free'
      ? { kind: 'free', stiffness: gyro.drive.stiffness, restTilt: 0, damping: gyro.drive.damping }
      : gyro.drive.kind === 'locked'
        ? { kind: 'locked' }
        : { kind: 'servo', input: 'acceleration' };
  const spin = { held: 'held', coasting: 'coasting', actuated: 'driven' } as const;
  const { stiction, friction } = gyro.gimbal;
  return {
    position: gyro.position,
    gimbalAxis: unit3(gyro.gimbalAxis),
    spinAxis: unit3(gyro.spinAxis),
    frame: gimbalFrame(gyro),
    wheel: {
      mass: wheel.mass,
      axialInertia: wheel.spinInertia,
      transverseInertia: wheel.transverseInertia,
      centre: scale3(unit3(gyro.spinAxis), wheel.centre),
    },
    drive,
    spin: spin[gyro.spin.kind],
    ...(gyro.spin.kind === 'coasting' ? { drag: coastDrag(gyro, wheel.mass) } : {}),
    friction: { coulomb: 0.7 * stiction, stiction, viscous: friction, stribeckRate: 0.05, creepRate: 0.001 },
  };
}

type FootingOutcome =
  | { readonly kind: 'footing'; readonly footing: StarFooting; readonly floating: Floating | undefined }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

function meetWorld(rig: Rig, whole: RigidBody): FootingOutcome {
  const { footing, body } = rig;
  const found = (value: StarFooting): FootingOutcome => ({
    kind: 'footing',
    footing: value,
    floating: undefined,
  });
  switch (footing.kind) {
    case 'firm':
      return found({ kind: 'firm', support: standingSupport(rig, body as LeggedBody), soleHeight: 0 });
    case 'edge':
      return found({ kind: 'edge', point: [0, footing.offset, 0], axis: [1, 0, 0] });
    case 'point':
      return found({ kind: 'point', point: footing.position });
    case 'rocker':
      return found({
        kind: 'rocker',
        shape: 'cylinder',
        centre: [0, 0, footing.radius],
        radius: footing.radius,
        axis: [1, 0, 0],
      });
    case 'float': {
      const outcome = floatHull(body as HullBody, footing, whole);
      if (outcome.kind === 'refused') return outcome;
      return { kind: 'footing', footing: outcome.floating.footing, floating: outcome.floating };
    }
  }
}

/** Corners of the ground covered by a legged rig standing at rest, anticlockwise, m. */
export function standingSupport(rig: Rig, body: LeggedBody): readonly (readonly [number, number])[] {
  const feet = restFeet(body, stanceWidthOf(rig, body));
  const halfLength = body.foot.length / 2;
  const halfWidth = body.foot.width / 2;
  const front = Math.max(...feet.map(([x]) => x)) + halfLength;
  const rear = Math.min(...feet.map(([x]) => x)) - halfLength;
  const left = Math.max(...feet.map(([, y]) => y)) + halfWidth;
  const right = Math.min(...feet.map(([, y]) => y)) - halfWidth;
  return [
    [rear, right],
    [front, right],
    [front, left],
    [rear, left],
  ];
}

function refuseFooting(rig: Rig): readonly Refusal[] {
  const { footing, body } = rig;
  const refuse = (sentence: string): readonly Refusal[] => [{ field: 'footing.kind', sentence }];
  if (footing.kind === 'firm' && body.kind !== 'legged') {
    return refuse(
      `footing.kind: "firm" needs feet, and the body is "${body.kind}"; choose edge, point, rocker or float.`,
    );
  }
  if (footing.kind === 'float' && body.kind !== 'hull') {
    return refuse(
      `footing.kind: "float" needs a hull, and the body is "${body.kind}"; choose firm, edge, point or rocker.`,
    );
  }
  return [];
}

function refuseLegs(rig: Rig): readonly Refusal[] {
  if (rig.body.kind !== 'legged') return [];
  const body = rig.body;
  const hips = hipPositions(body);
  const feet = restFeet(body, stanceWidthOf(rig, body));
  const needed = Math.max(...hips.map((hip, i) => norm3(subtract3(feet[i] as Vec3, hip))));
  const reach = legReach(body);
  if (needed <= reach) return [];
  const short = formatQuantity(needed, 'length');
  return [
    {
      field: 'body.hips.height',
      sentence: `body.hips.height: the hips at ${formatQuantity(body.hips.height, 'length')} are ${short} from the feet, and thigh and shank reach ${formatQuantity(reach, 'length')}; lower the hips, narrow the stance or lengthen the legs.`,
    },
  ];
}

function refuseGyro(rig: Rig, gyro: Gyro, i: number): readonly Refusal[] {
  const refusals: Refusal[] = [];
  const refuse = (name: string, sentence: string) => {
    const field = `array.gyros[${i}].${name}`;
    refusals.push({ field, sentence: `${field}: ${sentence}` });
  };
  if (norm3(gyro.gimbalAxis) < 1e-6)
    refuse('gimbalAxis', 'has no length; give it a direction, such as 0, 1, 0.');
  if (norm3(gyro.spinAxis) < 1e-6) refuse('spinAxis', 'has no length; give it a direction, such as 0, 0, 1.');
  if (refusals.length === 0) {
    const g = unit3(gyro.gimbalAxis);
    const s = unit3(gyro.spinAxis);
    const angle = Math.atan2(norm3(cross3(g, s)), Math.abs(dot3(g, s)));
    if (gyro.drive.kind !== 'locked' && angle < 0.1) {
      refuse(
        'spinAxis',
        `is ${formatQuantity(angle, 'angle')} from the gimbal axis, where tilting does nothing; it must be from 5.73° to 90°.`,
      );
    }
  }
  if (gyro.drive.kind === 'geared') {
    const leader = rig.array.gyros[gyro.drive.leader];
    if (leader === undefined || gyro.drive.leader === i || leader.drive.kind !== 'servo') {
      refuse(
        'drive.leader',
        `names gyro ${gyro.drive.leader}, which has no servo to lead with; it must be the place of a gyro with a servo, from 0 to ${rig.array.gyros.length - 1}.`,
      );
    }
    if (gyro.drive.ratio === 0) refuse('drive.ratio', 'is 0; gears need a ratio from −4 to 4 other than 0.');
  }
  return refusals;
}
