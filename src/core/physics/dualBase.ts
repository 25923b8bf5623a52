/** The base's motion over dual numbers, by inertial accelerations; nothing shared with footingMotion's subspaces. */
import {
  constant3,
  type Dual,
  type Dual3,
  difference3,
  dual,
  outer3,
  over,
  plus,
  scaled,
  scaled3,
  sum3,
  times,
  turned3,
  zero,
  zero3,
} from './dual';
import type { StarModel } from './starModel';
import type { StarWork } from './starWork';

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
