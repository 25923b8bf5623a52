import {
  cornerSpeed,
  createDriveFlows,
  type DragLaw,
  type DriveModel,
  driveFlows,
  fullCurrent,
  topSpeed,
} from './drive';

/** A spin-up: its curve, and where the battery's energy went, J. */
export interface SpinUp {
  /** points, s and rad/s, A in the winding, W from the battery. */
  readonly time: Float64Array;
  readonly speed: Float64Array;
  readonly current: Float64Array;
  readonly batteryPower: Float64Array;
  /** s. */
  readonly duration: number;
  readonly batteryEnergy: number;
  readonly batteryHeat: number;
  readonly controllerHeat: number;
  readonly copperHeat: number;
  readonly motorFriction: number;
  /** J, lost to windage and bearings on the way. */
  readonly dragLoss: number;
  /** J, put into the spin. */
  readonly stored: number;
  /** rad/s, the most this drive reaches. */
  readonly topSpeed: number;
  /** s, of the same wheel under full limit current with nothing in its way: no spin-up is faster. */
  readonly currentBound: number;
}

export type SpinUpOutcome =
  | { readonly kind: 'reaches'; readonly spinUp: SpinUp }
  /** The drag meets the drive below the speed asked for. */
  | { readonly kind: 'falls short'; readonly asked: number; readonly topSpeed: number };

export interface SpinDown {
  readonly time: Float64Array;
  readonly speed: Float64Array;
  /** s, to `endSpeed`. */
  readonly duration: number;
  readonly endSpeed: number;
  /** s, to the last of the spin; infinite when nothing constant drags. */
  readonly toRest: number;
}

/** Abscissae and weights of five-point Gauss-Legendre on -1..1. Source: Abramowitz & Stegun, table 25.4. */
const GAUSS: readonly (readonly [number, number])[] = [
  [-0.906179845938664, 0.23692688505618908],
  [-0.5384693101056831, 0.47862867049936647],
  [0, 0.5688888888888889],
  [0.5384693101056831, 0.47862867049936647],
  [0.906179845938664, 0.23692688505618908],
];

/** Speeds that crowd towards a limit as 1/(limit - speed), with the corner speed among them. */
function gradedSpeeds(from: number, to: number, limit: number, corner: number, panels: number): number[] {
  const speeds: number[] = [];
  const ratio = (limit - to) / (limit - from);
  for (let i = 0; i <= panels; i++) speeds.push(limit - (limit - from) * ratio ** (i / panels));
  speeds[0] = from;
  speeds[panels] = to;
  if (corner > from && corner < to) {
    const at = speeds.findIndex((speed) => speed >= corner);
    if (speeds[at] !== corner) speeds.splice(at, 0, corner);
  }
  return speeds;
}

/**
 * Spin-up at full current from one speed to another.
 *
 * @param drive    see DriveModel
 * @param inertia  kg*m^2, J_s of the wheel with the rotor
 * @param dragAt   N*m against rad/s
 * @param target   rad/s, above `from`
 * @param from     rad/s
 * @param panels   number of pieces of the curve
 * @returns        curve and energies, or the top speed when it falls short
 *
 * The motion has one state, so time and energies are integrals over speed: five-point Gauss-Legendre on panels
 * that crowd towards the top speed and break at the corner where the limit lets go. O(panels).
 * Source: Newton; energy balance of the circuit.
 */
export function spinUp(
  drive: DriveModel,
  inertia: number,
  dragAt: DragLaw,
  target: number,
  from = 0,
  panels = 60,
): SpinUpOutcome {
  const top = topSpeed(drive, dragAt);
  if (!(target < top)) return { kind: 'falls short', asked: target, topSpeed: top };
  const speeds = gradedSpeeds(from, target, top, cornerSpeed(drive), panels);
  const n = speeds.length;
  const time = new Float64Array(n);
  const current = new Float64Array(n);
  const batteryPower = new Float64Array(n);
  const flows = createDriveFlows();
  let batteryEnergy = 0;
  let batteryHeat = 0;
  let controllerHeat = 0;
  let copperHeat = 0;
  let motorFriction = 0;
  let dragLoss = 0;
  for (let i = 0; i < n; i++) {
    driveFlows(drive, speeds[i]!, fullCurrent(drive, speeds[i]!), flows);
    current[i] = flows.current;
    batteryPower[i] = flows.battery;
    if (i === 0) continue;
    const half = (speeds[i]! - speeds[i - 1]!) / 2;
    const middle = (speeds[i]! + speeds[i - 1]!) / 2;
    let dt = 0;
    for (let k = 0; k < GAUSS.length; k++) {
      const speed = middle + half * GAUSS[k]![0];
      driveFlows(drive, speed, fullCurrent(drive, speed), flows);
      const drag = dragAt(speed);
      const slice = (GAUSS[k]![1] * half * inertia) / (flows.torque - drag);
      dt += slice;
      batteryEnergy += flows.battery * slice;
      batteryHeat += flows.batteryHeat * slice;
      controllerHeat += flows.controllerHeat * slice;
      copperHeat += flows.copperHeat * slice;
      motorFriction += flows.motorFriction * slice;
      dragLoss += drag * speed * slice;
    }
    time[i] = time[i - 1]! + dt;
  }
  return {
    kind: 'reaches',
    spinUp: {
      time,
      speed: Float64Array.from(speeds),
      current,
      batteryPower,
      duration: time[n - 1]!,
      batteryEnergy,
      batteryHeat,
      controllerHeat,
      copperHeat,
      motorFriction,
      dragLoss,
      stored: 0.5 * inertia * (target * target - from * from),
      topSpeed: top,
      currentBound: currentBound(drive, inertia, target - from),
    },
  };
}

/** Least time of any spin-up through a rise of speed, s: full limit current, no drag, voltage to spare. */
export const currentBound = (drive: DriveModel, inertia: number, rise: number): number =>
  (inertia * rise) / (drive.torqueConstant * (drive.currentLimit - drive.noLoadCurrent));

/**
 * Slowing of a wheel by its drag, its motor's own friction and, if any, a braking torque.
 *
 * @param inertia     kg*m^2
 * @param dragAt      N*m against rad/s
 * @param friction    N*m, constant: the motor's K_t I_0, and the brake's torque
 * @param from        rad/s
 * @param endFraction of the starting speed at which the curve ends
 *
 * O(panels). Source: Newton.
 */
export function spinDown(
  inertia: number,
  dragAt: DragLaw,
  friction: number,
  from: number,
  endFraction = 0.01,
  panels = 60,
): SpinDown {
  const time = new Float64Array(panels + 1);
  const speed = new Float64Array(panels + 1);
  const slowing = (at: number): number => (dragAt(at) + friction) / inertia;
  const span = (high: number, low: number): number => {
    const half = (high - low) / 2;
    const middle = (high + low) / 2;
    let dt = 0;
    for (const [x, w] of GAUSS) dt += (w * half) / slowing(middle + half * x);
    return dt;
  };
  for (let i = 0; i <= panels; i++) {
    speed[i] = from * endFraction ** (i / panels);
    if (i > 0) time[i] = time[i - 1]! + span(speed[i - 1]!, speed[i]!);
  }
  const endSpeed = speed[panels]!;
  const duration = time[panels]!;
  const isConstantAtRest = dragAt(0) + friction > 0;
  return {
    time,
    speed,
    duration,
    endSpeed,
    toRest: isConstantAtRest ? duration + span(endSpeed, 0) : Number.POSITIVE_INFINITY,
  };
}

/** Braking with the motor at a current: how long, and what must be taken up, J. */
export interface Braking {
  /** s, to rest. */
  readonly duration: number;
  /** J, of the spin that reach the brake resistor or go back to the battery; drag takes the rest. */
  readonly absorbed: number;
  /** W, at the start. */
  readonly greatestPower: number;
  /** J, left as heat in the winding. */
  readonly copperHeat: number;
}

/**
 * Stopping a wheel with its motor as a brake.
 *
 * @param current  A, braking current in the winding, at most the controller's limit
 *
 * Cost as `spinDown`. Source: Newton; energy balance.
 */
export function brakeWheel(
  drive: DriveModel,
  inertia: number,
  dragAt: DragLaw,
  from: number,
  current: number,
): Braking {
  const brake = drive.torqueConstant * current;
  const friction = drive.torqueConstant * drive.noLoadCurrent;
  const down = spinDown(inertia, dragAt, brake + friction, from, 1e-3, 60);
  let turned = 0;
  for (let i = 1; i < down.time.length; i++) {
    turned += ((down.speed[i]! + down.speed[i - 1]!) / 2) * (down.time[i]! - down.time[i - 1]!);
  }
  turned += (down.endSpeed / 2) * (down.toRest - down.duration);
  const copperHeat = current * current * drive.resistance * down.toRest;
  return {
    duration: down.toRest,
    absorbed: Math.max(0, brake * turned - copperHeat),
    greatestPower: brake * from,
    copperHeat,
  };
}
