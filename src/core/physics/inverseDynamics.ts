/**
 * Inverse dynamics: the efforts a motion asks for. A route of its own, sharing nothing with the forward kernel but
 * the model's description: base, frames and wheels are separate bodies, each with force = mass times inertial
 * acceleration of its centre and moment = inertia times inertial angular acceleration plus w x (I w), wheels
 * spinning as they are; the results are projected on the freedoms (Kane's partial velocities). Written over dual
 * numbers, so it gives exact derivatives as well.
 *
 * Source: Kane and Levinson, Dynamics: Theory and Applications (1985), ch. 6.
 */
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
  turned3,
  zero,
  zero3,
} from './dual';
import { rightingArm, rightingSlope } from './footingFloat';
import { dragSoftening } from './losses';
import { type Sym3, unit3, type Vec3 } from './spatial';
import type { StarWork } from './starDynamics';
import type { StarModel } from './starModel';

/** The base at a state: world axes in body components, motion, and partial velocities of O for each base speed. */
export interface DualBase {
  readonly up: Dual3;
  readonly gravity: Dual3;
  readonly rate: Dual3;
  readonly rateRate: Dual3;
  readonly velocity: Dual3;
  readonly acceleration: Dual3;
  readonly turns: readonly Dual3[];
  readonly moves: readonly Dual3[];
}

const units: readonly Dual3[] = [constant3([1, 0, 0]), constant3([0, 1, 0]), constant3([0, 0, 1])];

/** World directions in body components: rows of the rotation. */
function worldAxes(model: StarModel, x: readonly Dual[]): readonly [Dual3, Dual3, Dual3] {
  const pose = model.footing.pose;
  if (pose === 'none') return [units[0]!, units[1]!, units[2]!];
  if (pose === 'angle') {
    const axis = constant3(model.footing.axis);
    const back = scaled(x[0]!, -1);
    return [turned3(units[0]!, axis, back), turned3(units[1]!, axis, back), turned3(units[2]!, axis, back)];
  }
  const q = x.slice(0, 4);
  const size = q.reduce((sum, c) => plus(sum, times(c, c)), zero);
  const v: Dual3 = [q[1]!, q[2]!, q[3]!];
  const w = q[0]!;
  // R^T e = e - 2 w (v x e)/|q|^2 + 2 v x (v x e)/|q|^2
  const back = (e: Dual3): Dual3 => {
    const t = outer3(v, e);
    const turn = difference3(outer3(v, t), scaled3(t, w));
    return sum3(e, scaled3(turn, over(dual(2), size)));
  };
  return [back(units[0]!), back(units[1]!), back(units[2]!)];
}

/** Motion of the base from its speeds and their rates. Accelerations are inertial. */
export function placeDualBase(
  model: StarModel,
  work: StarWork,
  x: readonly Dual[],
  accelerations: readonly Dual[],
): DualBase {
  const footing = model.footing;
  const [ex, ey, up] = worldAxes(model, x);
  const G = model.gravity_W;
  const gravity = sum3(sum3(scaled3(ex, dual(G[0]!)), scaled3(ey, dual(G[1]!))), scaled3(up, dual(G[2]!)));
  const nu = x.slice(model.baseSpeedAt, model.baseSpeedAt + footing.speeds);
  const dnu = accelerations.slice(0, footing.speeds);
  if (footing.pose === 'free') {
    const rate: Dual3 = [nu[0]!, nu[1]!, nu[2]!];
    const velocity: Dual3 = [nu[3]!, nu[4]!, nu[5]!];
    const acceleration = sum3([dnu[3]!, dnu[4]!, dnu[5]!], outer3(rate, velocity));
    return {
      up,
      gravity,
      rate,
      rateRate: [dnu[0]!, dnu[1]!, dnu[2]!],
      velocity,
      acceleration,
      turns: [...units, zero3, zero3, zero3],
      moves: [zero3, zero3, zero3, ...units],
    };
  }
  const turns = footing.pose === 'none' ? [] : footing.pose === 'angle' ? [constant3(footing.axis)] : units;
  const combine = (of: readonly Dual[]): Dual3 =>
    turns.reduce((sum, turn, k) => sum3(sum, scaled3(turn, of[k]!)), zero3);
  const rate = combine(nu);
  const rateRate = combine(dnu);
  const P = constant3(work.place.planted);
  const P1 = constant3(work.place.planted, 3);
  const P2 = constant3(work.place.planted, 6);
  const rolling = (w: Dual3): Dual3 => scaled3(outer3(w, up), dual(footing.radius));
  const moves = turns.map((turn) => sum3(outer3(P, turn), rolling(turn)));
  // O sits at (centre or planted point) minus P; the centre of a rolling body moves at r w x n, n fixed in the world.
  const away = sum3(
    sum3(outer3(rateRate, P), outer3(rate, outer3(rate, P))),
    sum3(scaled3(outer3(rate, P1), dual(2)), P2),
  );
  const acceleration = difference3(rolling(rateRate), away);
  const velocity = difference3(rolling(rate), sum3(outer3(rate, P), P1));
  return { up, gravity, rate, rateRate, velocity, acceleration, turns, moves };
}

const symmetricTimes = (S: Sym3, a: Dual3): Dual3 => [
  plus(plus(scaled(a[0], S[0]), scaled(a[1], S[3])), scaled(a[2], S[4])),
  plus(plus(scaled(a[0], S[3]), scaled(a[1], S[1])), scaled(a[2], S[5])),
  plus(plus(scaled(a[0], S[4]), scaled(a[1], S[5])), scaled(a[2], S[2])),
];

/** Force and moment about O of everything that moves, so far; and the gimbal and wheel projections. */
interface Asked {
  force: Dual3;
  moment: Dual3;
}

function askBase(work: StarWork, base: DualBase, asked: Asked): void {
  const b = work.base;
  const first = constant3(b, 1);
  const I = Array.from(b.subarray(4, 10)) as unknown as Sym3;
  const Idot = Array.from(b.subarray(16, 22)) as unknown as Sym3;
  const u = constant3(b, 10);
  const { rate, rateRate } = base;
  const fall = difference3(base.acceleration, base.gravity);
  let force = scaled3(fall, dual(b[0]!));
  force = sum3(force, sum3(outer3(rateRate, first), outer3(rate, outer3(rate, first))));
  force = sum3(force, sum3(scaled3(outer3(rate, u), dual(2)), constant3(b, 22)));
  const momentum = sum3(symmetricTimes(I, rate), constant3(b, 13));
  let moment = sum3(outer3(first, fall), symmetricTimes(I, rateRate));
  moment = sum3(moment, sum3(symmetricTimes(Idot, rate), constant3(b, 25)));
  moment = sum3(moment, outer3(rate, momentum));
  asked.force = sum3(asked.force, force);
  asked.moment = sum3(asked.moment, moment);
}

/** One gyro: its frame and wheel added to `asked`; returns gimbal torque and motor torque the motion asks for. */
function askGyro(
  model: StarModel,
  base: DualBase,
  x: readonly Dual[],
  accelerations: readonly Dual[],
  i: number,
  asked: Asked,
): readonly [Dual, Dual] {
  const gyro = model.description.gyros[i]!;
  const nb = model.footing.speeds;
  const n = model.gimbals;
  const axis = constant3(unit3(gyro.gimbalAxis));
  const tilt = x[model.tiltAt + i]!;
  const tiltRate = scaled3(axis, x[model.rateAt + i]!);
  const Omega = x[model.wheelSpeedAt + i]!;
  const turn = (v: Vec3): Dual3 => turned3(constant3(v), axis, tilt);
  const unturn = (v: Dual3): Dual3 => turned3(v, axis, scaled(tilt, -1));
  const pivot = constant3(gyro.position);
  const rate = sum3(base.rate, tiltRate);
  const rateRate = sum3(
    sum3(base.rateRate, scaled3(axis, accelerations[nb + i]!)),
    outer3(base.rate, tiltRate),
  );
  const { rate: w, rateRate: dw } = base;
  const atPivot = sum3(base.acceleration, sum3(outer3(dw, pivot), outer3(w, outer3(w, pivot))));
  const forceOn = (arm: Dual3, mass: number): Dual3 => {
    const acceleration = sum3(atPivot, sum3(outer3(rateRate, arm), outer3(rate, outer3(rate, arm))));
    return scaled3(difference3(acceleration, base.gravity), dual(mass));
  };
  const frameArm = turn(gyro.frame.com);
  const frameForce = forceOn(frameArm, gyro.frame.mass);
  const inertia = (v: Dual3): Dual3 => turned3(symmetricTimes(gyro.frame.inertia, unturn(v)), axis, tilt);
  const frameMoment = sum3(inertia(rateRate), outer3(rate, inertia(rate)));

  const wheelArm = turn(gyro.wheel.centre);
  const wheelForce = forceOn(wheelArm, gyro.wheel.mass);
  const spin = turn(unit3(gyro.spinAxis));
  const { axialInertia: Js, transverseInertia: Jt } = gyro.wheel;
  const wheelRate = sum3(rate, scaled3(spin, Omega));
  const wheelRateRate = sum3(
    rateRate,
    sum3(scaled3(spin, accelerations[nb + n + i]!), scaled3(outer3(rate, spin), Omega)),
  );
  const wheelInertia = (v: Dual3): Dual3 =>
    sum3(scaled3(v, dual(Jt)), scaled3(spin, scaled(inner3(spin, v), Js - Jt)));
  const wheelMoment = sum3(wheelInertia(wheelRateRate), outer3(wheelRate, wheelInertia(wheelRate)));

  const aboutPivot = sum3(
    sum3(frameMoment, outer3(frameArm, frameForce)),
    sum3(wheelMoment, outer3(wheelArm, wheelForce)),
  );
  const force = sum3(frameForce, wheelForce);
  asked.force = sum3(asked.force, force);
  asked.moment = sum3(asked.moment, sum3(aboutPivot, outer3(pivot, force)));
  const reflected = scaled(accelerations[nb + i]!, model.reflectedInertia[i]!);
  return [plus(inner3(axis, aboutPivot), reflected), inner3(spin, wheelMoment)];
}

/** Torque a gimbal's spring, damper and friction give. */
function passiveGimbal(model: StarModel, i: number, tilt: Dual, rate: Dual): Dual {
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

function wheelDrag(model: StarModel, i: number, speed: Dual): Dual {
  const d = model.drag.subarray(3 * i, 3 * i + 3);
  const constant = scaled(hyperbolicTangent(scaled(speed, 1 / dragSoftening)), -d[0]!);
  return minus(minus(constant, scaled(speed, d[1]!)), scaled(times(speed, magnitude(speed)), d[2]!));
}

/** The water's moment about O and force; the rig's weight at rest taken out of it. */
function waterWrench(model: StarModel, base: DualBase, x: readonly Dual[]): readonly [Dual3, Dual3] {
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

/**
 * Efforts a motion asks for, over dual numbers, less what springs, friction, drag, water and the wrench give.
 *
 * @param x              state, model.stateSize
 * @param accelerations  model.accelerationSize
 * @param wrench         6, on the base: moment about O, force; body components
 * @returns base speeds' generalised forces (zero for a motion that happens by itself), gimbal torques n, motor
 *          torques n. For a held wheel the motor torque is what its controller must give.
 */
export function inverseDynamicsOver(
  model: StarModel,
  work: StarWork,
  x: readonly Dual[],
  accelerations: readonly Dual[],
  wrench: readonly Dual[],
): Dual[] {
  const base = placeDualBase(model, work, x, accelerations);
  const asked: Asked = { force: zero3, moment: zero3 };
  askBase(work, base, asked);
  const gimbals: Dual[] = [];
  const motors: Dual[] = [];
  for (let i = 0; i < model.gimbals; i++) {
    const [gimbal, motor] = askGyro(model, base, x, accelerations, i, asked);
    gimbals.push(minus(gimbal, passiveGimbal(model, i, x[model.tiltAt + i]!, x[model.rateAt + i]!)));
    motors.push(minus(motor, wheelDrag(model, i, x[model.wheelSpeedAt + i]!)));
  }
  let moment = difference3(asked.moment, [wrench[0]!, wrench[1]!, wrench[2]!]);
  let force = difference3(asked.force, [wrench[3]!, wrench[4]!, wrench[5]!]);
  if (model.footing.floats !== null) {
    const [waterMoment, waterForce] = waterWrench(model, base, x);
    moment = difference3(moment, waterMoment);
    force = difference3(force, waterForce);
  }
  const onBase = base.turns.map((turn, k) => plus(inner3(turn, moment), inner3(base.moves[k]!, force)));
  return [...onBase, ...gimbals, ...motors];
}

const constants = (a: ArrayLike<number>): Dual[] => Array.from(a, (value) => dual(value));

/**
 * Efforts a motion asks for: see inverseDynamicsOver. Allocates; O(n).
 *
 * @param out  model.accelerationSize: base generalised forces, gimbal torques, motor torques
 */
export function inverseDynamics(
  model: StarModel,
  work: StarWork,
  state: ArrayLike<number>,
  acceleration: ArrayLike<number>,
  wrench: ArrayLike<number>,
  out: Float64Array,
): void {
  inverseDynamicsOver(model, work, constants(state), constants(acceleration), constants(wrench)).forEach(
    (force, k) => {
      out[k] = force.value;
    },
  );
}

/**
 * Constraint wrench of the footing at a state and acceleration: what the ground or water line must give beyond the
 * modelled water and the wrench, as moment about O then force, body components.
 */
export function footingWrench(
  model: StarModel,
  work: StarWork,
  state: ArrayLike<number>,
  acceleration: ArrayLike<number>,
  wrench: ArrayLike<number>,
  out: Float64Array,
): void {
  const x = constants(state);
  const accelerations = constants(acceleration);
  const base = placeDualBase(model, work, x, accelerations);
  const asked: Asked = { force: zero3, moment: zero3 };
  askBase(work, base, asked);
  for (let i = 0; i < model.gimbals; i++) askGyro(model, base, x, accelerations, i, asked);
  if (model.footing.floats !== null) {
    const [waterMoment, waterForce] = waterWrench(model, base, x);
    asked.moment = difference3(asked.moment, waterMoment);
    asked.force = difference3(asked.force, waterForce);
  }
  for (let j = 0; j < 3; j++) {
    out[j] = asked.moment[j]!.value - wrench[j]!;
    out[3 + j] = asked.force[j]!.value - wrench[3 + j]!;
  }
}
