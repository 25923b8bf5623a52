/** Forces that come by themselves, over dual numbers: springs, friction, drag, water. */
import {
  angleOf,
  constant3,
  type Dual,
  type Dual3,
  difference3,
  dual,
  exponential,
  hyperbolicTangent,
  inner3,
  magnitude,
  minus,
  outer3,
  over,
  plus,
  root,
  scaled,
  scaled3,
  sum3,
  times,
  zero,
} from './dual';
import type { DualBase } from './dualBase';
import { rightingArm, rightingSlope } from './footingFloat';
import { dragSoftening } from './losses';
import type { StarModel } from './starModel';

/** Torque a gimbal's spring, damper and friction give. */
export function passiveGimbal(model: StarModel, i: number, tilt: Dual, rate: Dual): Dual {
  const s = model.spring;
  let torque = plus(scaled(minus(tilt, dual(s[3 * i + 1]!)), -s[3 * i]!), scaled(rate, -s[3 * i + 2]!));
  if (model.hasFriction) {
    const f = model.friction.subarray(5 * i, 5 * i + 5);
    const x = scaled(rate, 1 / f[3]!);
    const raise = scaled(exponential(scaled(times(x, x), -1)), f[1]! - f[0]!);
    const level = plus(dual(f[0]!), raise);
    torque = minus(torque, times(level, hyperbolicTangent(scaled(rate, 1 / f[4]!))));
    torque = minus(torque, scaled(rate, f[2]!));
  }
  return torque;
}

export function wheelDrag(model: StarModel, i: number, speed: Dual): Dual {
  const d = model.drag.subarray(3 * i, 3 * i + 3);
  const constant = scaled(hyperbolicTangent(scaled(speed, 1 / dragSoftening)), -d[0]!);
  return minus(minus(constant, scaled(speed, d[1]!)), scaled(times(speed, magnitude(speed)), d[2]!));
}

/** The water's moment about O and force; the rig's weight at rest taken out of it. */
export function waterWrench(model: StarModel, base: DualBase, x: readonly Dual[]): readonly [Dual3, Dual3] {
  const floats = model.footing.floats!;
  const rest = model.restRig;
  const G = model.gravity_W;
  const weight = rest[0]! * Math.sqrt(G[0]! ** 2 + G[1]! ** 2 + G[2]! ** 2);
  const axis = constant3(model.footing.axis);
  const p = inner3(axis, base.rate);
  const damping = minus(
    scaled(p, -floats.linearDamping),
    scaled(times(p, magnitude(p)), floats.quadraticDamping),
  );
  const [nx, ny, nz] = base.up;
  const roll = angleOf(ny, nz);
  const arm = dual(
    rightingArm(floats.righting, roll.value),
    rightingSlope(floats.righting, roll.value) * roll.slope,
  );
  const righting = scaled(arm, -weight);
  const force = scaled3(base.gravity, dual(-rest[0]!));
  const weightMoment = outer3(constant3(rest, 1), base.gravity);
  let moment = difference3(scaled3(axis, damping), weightMoment);
  if (model.footing.pose !== 'free') return [sum3(moment, [righting, zero, zero]), force];
  // Gradients of roll and pitch angle with respect to turning the body.
  const level = plus(times(ny, ny), times(nz, nz));
  const rollGradient: Dual3 = [
    dual(1),
    scaled(over(times(nx, ny), level), -1),
    scaled(over(times(nx, nz), level), -1),
  ];
  const cosPitch = root(level);
  const pitchGradient: Dual3 = [zero, over(nz, cosPitch), scaled(over(ny, cosPitch), -1)];
  const pitching = scaled(nx, weight * floats.pitchHeight);
  moment = sum3(moment, scaled3(rollGradient, righting));
  moment = sum3(moment, scaled3(pitchGradient, pitching));
  moment = sum3(moment, [zero, scaled(base.rate[1], -floats.pitchDamping), zero]);
  const at = constant3(model.footing.point);
  const rise = minus(plus(x[6]!, inner3(base.up, at)), dual(model.footing.point[2]!));
  const climb = inner3(base.up, sum3(base.velocity, outer3(base.rate, at)));
  const lift = minus(scaled(rise, -floats.heaveStiffness), scaled(climb, floats.heaveDamping));
  const push = scaled3(base.up, lift);
  return [sum3(moment, outer3(at, push)), sum3(force, push)];
}
