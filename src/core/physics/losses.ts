/** Friction of gimbals and drag of wheels, as smooth laws that a fixed step and a linearisation can both take. */

/**
 * Gimbal friction with stiction: Coulomb, raised towards the static level at low rate (Stribeck), plus
 * viscous. The sign is softened over `creepRate`: a joint held by stiction creeps at a fraction of that rate
 * instead of standing quite still. Source of the shape: Armstrong-Helouvry, Dupont and Canudas de Wit,
 * Automatica 30(7), 1994, sec. 3 (from memory).
 */
export interface GimbalFriction {
  /** N*m. */
  readonly coulomb: number;
  /** N*m, at least `coulomb`. */
  readonly stiction: number;
  /** N*m per rad/s. */
  readonly viscous: number;
  /** rad/s, over which stiction falls to Coulomb friction; usual start 0.05. */
  readonly stribeckRate: number;
  /** rad/s, over which the sign is softened; usual start 0.001. */
  readonly creepRate: number;
}

/** Drag of a wheel against its housing: bearing constant and viscous, windage quadratic. */
export interface WheelDrag {
  /** N*m. */
  readonly constant: number;
  /** N*m per rad/s. */
  readonly viscous: number;
  /** N*m per (rad/s)^2. */
  readonly quadratic: number;
}

export const noFriction: GimbalFriction = {
  coulomb: 0,
  stiction: 0,
  viscous: 0,
  stribeckRate: 0.05,
  creepRate: 0.001,
};

export const noDrag: WheelDrag = { constant: 0, viscous: 0, quadratic: 0 };

/** rad/s over which the constant drag of a wheel changes sign. */
export const dragSoftening = 0.1;

/** Friction torque on a gimbal, N*m, against its rate. Odd; allocates nothing. */
export function gimbalFrictionTorque(
  coulomb: number,
  stiction: number,
  viscous: number,
  stribeckRate: number,
  creepRate: number,
  rate: number,
): number {
  const x = rate / stribeckRate;
  const level = coulomb + (stiction - coulomb) * Math.exp(-x * x);
  return -level * Math.tanh(rate / creepRate) - viscous * rate;
}

/** Drag torque on a wheel, N*m, at speed `speed` rad/s relative to its housing. Odd; allocates nothing. */
export function wheelDragTorque(constant: number, viscous: number, quadratic: number, speed: number): number {
  return -constant * Math.tanh(speed / dragSoftening) - viscous * speed - quadratic * speed * Math.abs(speed);
}
