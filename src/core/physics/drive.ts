import type { Motor, Power } from '../rig';
import type { FormulaNotes } from './formula';

/**
 * A wheel's motor on its controller and battery. Currents are those of the DC link referred to the winding
 * (six-step convention); a maker who quotes peak phase current of a sine drive means another number.
 */
export interface DriveModel {
  /** N*m/A, equal to V*s/rad. */
  readonly torqueConstant: number;
  /** ohm, winding. */
  readonly resistance: number;
  /** A, that the motor takes to turn itself; counted as a constant friction. */
  readonly noLoadCurrent: number;
  /** A, of the controller, in the winding. */
  readonly currentLimit: number;
  /** V, of the battery at no load. */
  readonly voltage: number;
  /** ohm, battery and leads. */
  readonly batteryResistance: number;
  /** Power out over power in of the controller. */
  readonly controllerEfficiency: number;
}

/** Power flows at an instant, W; `battery` is the sum of the others and of what speeds the wheel up. */
export interface DriveFlows {
  /** A, in the winding. */
  current: number;
  /** A, from the battery. */
  batteryCurrent: number;
  /** N*m, at the wheel, the motor's own friction taken off. */
  torque: number;
  battery: number;
  batteryHeat: number;
  controllerHeat: number;
  copperHeat: number;
  motorFriction: number;
}

export const DRIVE_FORMULAS: FormulaNotes<
  | 'torqueConstant'
  | 'freeSpeed'
  | 'stallTorque'
  | 'greatestPower'
  | 'current'
  | 'batteryCurrent'
  | 'torque'
  | 'timeConstant'
  | 'spinUp'
  | 'currentBound'
  | 'hold'
  | 'coast'
  | 'packEnergy'
  | 'runTime'
  | 'servoLine'
  | 'servoPower'
> = {
  torqueConstant: { formula: 'K_t = 1/K_v (SI) = 60/(2π K_v) with K_v in rpm/V', source: 'K_t = K_e in SI' },
  freeSpeed: { formula: 'ω_0 = V / K_t', source: 'textbook DC machine' },
  stallTorque: { formula: 'T_s = V K_t / R', source: 'textbook DC machine' },
  greatestPower: { formula: 'P_max = V² / (4 R) at ω_0/2', source: 'textbook DC machine' },
  current: {
    formula: 'I = min(I_limit, (V − K_t ω) / (R + R_b/η))',
    source: 'circuit, controller as a chopper',
  },
  batteryCurrent: {
    formula: 'V I_b − R_b I_b² = I (K_t ω + I R) / η',
    source: 'energy balance of a chopper',
  },
  torque: { formula: 'T = K_t (I − I_0)', source: 'textbook DC machine' },
  timeConstant: { formula: 'τ_m = J R / K_t², t_90 = τ_m ln 10', source: 'first-order closed form' },
  spinUp: { formula: 't = ∫ J dω / (K_t (I − I_0) − T_drag(ω))', source: 'Newton; Gauss-Legendre panels' },
  currentBound: { formula: 't ≥ J ω / (K_t (I_limit − I_0))', source: 'Newton' },
  hold: { formula: 'I = T_drag / K_t + I_0', source: 'Newton' },
  coast: { formula: 't = ∫ J dω / (T_drag(ω) + K_t I_0)', source: 'Newton' },
  packEnergy: {
    formula: 'E = cells × V_cell × charge',
    source: 'definition; LiPo nominal 3.7 V, 4.2 V full',
  },
  runTime: { formula: 't = (usable E − spin-up E) / ΣP', source: 'energy balance' },
  servoLine: { formula: 'ω_0 = (π/3) / t_60, P_max = T_s ω_0 / 4', source: 'linear servo model' },
  servoPower: { formula: 'P = T_s ω_0 (T/T_s)² + T ω', source: 'linear servo model' },
};

/** Usual start, common practice (from memory). */
export const USUAL_CONTROLLER_EFFICIENCY = 0.95;

/** Torque constant, N*m/A, from the velocity constant, rad/(s*V). */
export const torqueConstantOf = (velocityConstant: number): number => 1 / velocityConstant;

export const compileDrive = (
  motor: Motor,
  power: Power,
  controllerEfficiency: number = USUAL_CONTROLLER_EFFICIENCY,
): DriveModel => ({
  torqueConstant: torqueConstantOf(motor.velocityConstant),
  resistance: motor.resistance,
  noLoadCurrent: motor.noLoadCurrent,
  currentLimit: motor.currentLimit,
  voltage: power.cells * power.cellVoltage,
  batteryResistance: power.resistance,
  controllerEfficiency,
});

/** The ideal line of a DC machine: no friction, no limit, stiff supply. Source: textbook DC machine. */
export const motorLine = (torqueConstant: number, resistance: number, voltage: number) => ({
  freeSpeed: voltage / torqueConstant,
  stallTorque: (voltage * torqueConstant) / resistance,
  stallCurrent: voltage / resistance,
  greatestPower: (voltage * voltage) / (4 * resistance),
});

/** Mechanical time constant, s: of a spin-up at constant voltage with no drag. Source: first-order closed form. */
export const motorTimeConstant = (inertia: number, resistance: number, torqueConstant: number): number =>
  (inertia * resistance) / (torqueConstant * torqueConstant);

/** Current the winding takes at full demand, A: the limit, or what the voltage still drives. */
export function fullCurrent(drive: DriveModel, speed: number): number {
  const loop = drive.resistance + drive.batteryResistance / drive.controllerEfficiency;
  return Math.min(drive.currentLimit, (drive.voltage - drive.torqueConstant * speed) / loop);
}

/** Speed above which the voltage, not the limit, sets the current, rad/s; negative when it always does. */
export const cornerSpeed = (drive: DriveModel): number =>
  (drive.voltage -
    drive.currentLimit * (drive.resistance + drive.batteryResistance / drive.controllerEfficiency)) /
  drive.torqueConstant;

/**
 * Currents, torque and power flows of the drive at a speed and a winding current.
 *
 * @param current  A, at least 0 and at most `fullCurrent`
 * @param out      filled
 *
 * O(1), allocates nothing. Source: circuit of a chopper, energy balance.
 */
export function driveFlows(drive: DriveModel, speed: number, current: number, out: DriveFlows): void {
  const { voltage: V, batteryResistance: Rb, controllerEfficiency: eta, torqueConstant: Kt } = drive;
  const motorPower = current * (Kt * speed + current * drive.resistance);
  const asked = motorPower / eta;
  // The smaller root of V i - Rb i^2 = asked, in the form that does not cancel when Rb is small.
  const root = Math.sqrt(Math.max(0, V * V - 4 * Rb * asked));
  const batteryCurrent = (2 * asked) / (V + root);
  out.current = current;
  out.batteryCurrent = batteryCurrent;
  out.torque = Kt * (current - drive.noLoadCurrent);
  out.battery = V * batteryCurrent;
  out.batteryHeat = Rb * batteryCurrent * batteryCurrent;
  out.controllerHeat = asked - motorPower;
  out.copperHeat = current * current * drive.resistance;
  out.motorFriction = Kt * drive.noLoadCurrent * speed;
}

export const createDriveFlows = (): DriveFlows => ({
  current: 0,
  batteryCurrent: 0,
  torque: 0,
  battery: 0,
  batteryHeat: 0,
  controllerHeat: 0,
  copperHeat: 0,
  motorFriction: 0,
});

/** Drag torque of the wheel, N*m, against speed, rad/s, at least 0; not falling with speed. */
export type DragLaw = (speed: number) => number;

/** Speed at which full current just meets the drag, rad/s; 0 when it cannot start at all. By halving. */
export function topSpeed(drive: DriveModel, dragAt: DragLaw): number {
  const spareTorque = (speed: number): number =>
    drive.torqueConstant * (fullCurrent(drive, speed) - drive.noLoadCurrent) - dragAt(speed);
  if (!(spareTorque(0) > 0)) return 0;
  let low = 0;
  let high = drive.voltage / drive.torqueConstant;
  for (let i = 0; i < 60 && high - low > 1e-14 * high; i++) {
    const middle = (low + high) / 2;
    if (spareTorque(middle) > 0) low = middle;
    else high = middle;
  }
  return low;
}

export type HoldOutcome =
  | {
      readonly kind: 'held';
      readonly drag: number;
      readonly flows: Readonly<DriveFlows>;
      readonly motorHeat: number;
    }
  /** The drag asks more current than limit and voltage give at that speed. */
  | { readonly kind: 'too fast'; readonly asked: number; readonly most: number };

/** Power to keep a speed, W, and the heat left in the motor. Source: Newton, energy balance. */
export function holdSpeed(drive: DriveModel, dragAt: DragLaw, speed: number): HoldOutcome {
  const drag = dragAt(speed);
  const asked = drag / drive.torqueConstant + drive.noLoadCurrent;
  const most = fullCurrent(drive, speed);
  if (!(asked <= most)) return { kind: 'too fast', asked, most };
  const flows = createDriveFlows();
  driveFlows(drive, speed, asked, flows);
  return { kind: 'held', drag, flows, motorHeat: flows.copperHeat + flows.motorFriction };
}

/** Energy of a pack, J; charge A*s. Source: definition. */
export const packEnergy = (cells: number, cellVoltage: number, charge: number): number =>
  cells * cellVoltage * charge;

/** Share of a pack's charge that may be used without harm; common practice. */
export const USUAL_USABLE_CHARGE = 0.8;

/**
 * Time the pack lasts once the wheels are up, s; 0 when the spin-up alone empties it.
 *
 * @param energy    J, of the full pack
 * @param spinUp    J, taken from it to bring all wheels up
 * @param powers    W, everything that runs on: wheels, servos, legs, electronics
 * @param usable    share of the energy that may be used
 */
export function runTime(
  energy: number,
  spinUp: number,
  powers: readonly number[],
  usable: number = USUAL_USABLE_CHARGE,
): number {
  let total = 0;
  for (const power of powers) total += power;
  return Math.max(0, (usable * energy - spinUp) / total);
}

/** No-load speed, rad/s, of a servo that turns 60 degrees in a time, s. Source: linear servo model. */
export const servoSpeedOf = (timeFor60: number): number => Math.PI / 3 / timeFor60;

/** Greatest shaft power of a servo, W. Source: linear servo model. */
export const servoGreatestPower = (stallTorque: number, noLoadSpeed: number): number =>
  (stallTorque * noLoadSpeed) / 4;

/** Electrical power of a servo, W, at a torque and speed of the same or opposite sign; never gives back. */
export const servoPower = (stallTorque: number, noLoadSpeed: number, torque: number, speed: number): number =>
  Math.max(0, stallTorque * noLoadSpeed * (torque / stallTorque) ** 2 + torque * speed);
