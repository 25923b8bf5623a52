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
  constant3,
  type Dual,
  type Dual3,
  difference3,
  dual,
  inner3,
  minus,
  outer3,
  plus,
  scaled,
  scaled3,
  sum3,
  turned3,
  zero3,
} from './dual';
import { type DualBase, placeDualBase } from './dualBase';
import { passiveGimbal, waterWrench, wheelDrag } from './dualForces';
import { type Sym3, unit3, type Vec3 } from './spatial';
import type { StarModel } from './starModel';
import type { StarWork } from './starWork';

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
