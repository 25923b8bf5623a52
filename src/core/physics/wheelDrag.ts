import type { Bearing, Gyro, Housing, WheelPart } from '../rig';
import { permissibleUnbalance } from './balanceGrade';
import { bearingDrag, bearingLoads, equivalentDynamicLoad, lubricantDrag } from './bearings';
import { type DragLaw, torqueConstantOf } from './drive';
import { noDrag, type WheelDrag } from './losses';
import { outerRadiusOf } from './wheelProperties';
import { airAt, type Gas, STANDARD_PRESSURE, type Surround, type Windage, windage } from './windage';

/** What the gas sees of a wheel. */
export interface WheelEnvelope {
  /** m. */
  readonly radius: number;
  /** m, of the outermost part along the axis. */
  readonly width: number;
}

const widthOf = (part: WheelPart): number => {
  switch (part.kind) {
    case 'disc':
      return part.thickness;
    case 'hub':
      return part.length;
    case 'rim':
      return part.width;
    case 'balls':
      return part.diameter;
    case 'bolts':
      return 0;
  }
};

/** Outer radius of a stack, and the width of what reaches within 2 % of it. */
export function wheelEnvelope(parts: readonly WheelPart[]): WheelEnvelope {
  const radius = Math.max(...parts.map(outerRadiusOf));
  const outermost = parts.filter((part) => outerRadiusOf(part) >= 0.98 * radius && part.kind !== 'bolts');
  return { radius, width: outermost.reduce((sum, part) => sum + widthOf(part), 0) };
}

export const surroundOf = (housing: Housing): Surround =>
  housing.kind === 'open' ? { kind: 'open' } : { kind: 'walled', gap: housing.gap };

/** Air in a housing; temperature K. */
export const gasIn = (housing: Housing, temperature = 293.15): Gas =>
  airAt(housing.kind === 'evacuated' ? housing.pressure : STANDARD_PRESSURE, temperature);

/** Outside over bore of common deep-groove bearings, to guess a mean diameter where only the bore is known. */
const USUAL_DIAMETER_RATIO = 2.3;

/** Grease base oil when warm, m^2/s; from memory. */
export const USUAL_GREASE_VISCOSITY = 25e-6;

export interface WheelDragParts {
  /** N*m, of all bearings: constant with speed. */
  readonly bearings: number;
  /** N*m, of their lubricant, at a speed. */
  readonly lubricant: DragLaw;
  /** N*m, at a speed. */
  readonly windage: DragLaw;
  /** The same opened up: faces, rim, regime. */
  readonly windageAt: (speed: number) => Windage;
  readonly total: DragLaw;
}

/**
 * All that drags on a wheel in its housing.
 *
 * @param envelope  outer size, m
 * @param housing   open, shrouded or evacuated
 * @param bearing   bore m, friction coefficient; two of them
 * @param loads     N, mean load of each bearing, preload included
 *
 * Sources: with WINDAGE_FORMULAS and BEARING_FORMULAS.
 */
export function wheelDragParts(
  envelope: WheelEnvelope,
  housing: Housing,
  bearing: Pick<Bearing, 'bore' | 'friction'>,
  loads: readonly number[],
  viscosity: number = USUAL_GREASE_VISCOSITY,
): WheelDragParts {
  const gas = gasIn(housing);
  const surround = surroundOf(housing);
  let bearings = 0;
  for (const load of loads) bearings += bearingDrag(bearing.friction, load, bearing.bore);
  const meanDiameter = (bearing.bore * (1 + USUAL_DIAMETER_RATIO)) / 2;
  const lubricant = (speed: number): number => loads.length * lubricantDrag(speed, meanDiameter, viscosity);
  const windageAt = (speed: number): Windage =>
    windage(envelope.radius, envelope.width, speed, gas, surround);
  const wind = (speed: number): number => windageAt(speed).torque;
  return {
    bearings,
    lubricant,
    windage: wind,
    windageAt,
    total: (speed) => bearings + lubricant(speed) + wind(speed),
  };
}

/**
 * The drag as the dynamics takes it, constant + viscous + quadratic: right at the running speed in size and
 * slope.
 *
 * @param parts  from `wheelDragParts`
 * @param speed  rad/s, running speed, above 0
 */
export function fitWheelDrag(parts: WheelDragParts, speed: number): WheelDrag {
  const changing = (at: number): number => parts.lubricant(at) + parts.windage(at);
  const torque = changing(speed);
  const h = 1e-3 * speed;
  const slope = (changing(speed + h) - changing(speed - h)) / (2 * h);
  const quadratic = (slope - torque / speed) / speed;
  // Drag that rises slower than speed leaves part of it constant rather than a negative quadratic term.
  if (quadratic < 0) {
    return { constant: parts.bearings + torque - slope * speed, viscous: slope, quadratic: 0 };
  }
  if (slope * speed > 2 * torque) {
    return { constant: parts.bearings, viscous: 0, quadratic: torque / (speed * speed) };
  }
  return { constant: parts.bearings, viscous: torque / speed - quadratic * speed, quadratic };
}

/** rad/s; slower than this a wheel counts as at rest, and no drag law is fitted to it. */
const SLOWEST_SPEED = 0.1;

/**
 * Drag of a wheel that coasts with its gimbal at rest, as the dynamics takes it: bearings under weight and the
 * unbalance its grade permits, their lubricant, windage, and the friction of the motor that turns along.
 *
 * @param mass  kg, of the wheel
 *
 * O(1). Sources: as for `wheelDragParts`.
 */
export function coastDrag(gyro: Gyro, mass: number): WheelDrag {
  const { speed, bearing, motor } = gyro;
  if (speed < SLOWEST_SPEED) return noDrag;
  const [load] = bearingLoads({
    mass,
    momentum: 0,
    unbalance: permissibleUnbalance(gyro.wheel.balanceGrade, speed, mass),
    speed,
    gimbalRate: 0,
    toLeft: bearing.span / 2,
    toRight: bearing.span / 2,
    preload: 0,
    loadFactor: 1,
  });
  const steady = equivalentDynamicLoad(load.radial, load.axial, bearing.staticRating);
  const parts = wheelDragParts(wheelEnvelope(gyro.wheel.parts), gyro.housing, bearing, [steady, steady]);
  const fitted = fitWheelDrag(parts, speed);
  const friction = torqueConstantOf(motor.velocityConstant) * motor.noLoadCurrent;
  return { ...fitted, constant: fitted.constant + friction };
}
