import {
  type ClosedLoopOptions,
  type ClosedLoopResult,
  type ClosedLoopRig,
  identifyClosedLoop,
} from './identify/closedLoop';
import { type CoastDownOptions, identifyCoastDown } from './identify/coastDown';
import { type DecayOptions, identifyDecay } from './identify/decay';
import { identifyPendulum, type PendulumOptions, type PendulumSetup } from './identify/pendulum';
import { type Identification, type Refused, refuse } from './identify/result';
import { identifyServoStep } from './identify/servo';
import { identifyServoSweep, type ServoDynamics } from './identify/servoSweep';
import { identifySpinUp, type SpinUpOptions } from './identify/spinUp';
import { identifyStillSensor, type StillSensorResult } from './identify/stillSensor';
import { identifyToppling, type TopplingOptions } from './identify/toppling';
import type { BenchLog, LogQuantity } from './logs/columnMapping';
import { resampleEvenly } from './resampling';

/** What to identify from a log, with what must be known besides it. */
export type IdentifyRequest =
  | { readonly kind: 'decay'; readonly options: DecayOptions }
  | { readonly kind: 'toppling'; readonly options: TopplingOptions }
  | { readonly kind: 'pendulum'; readonly setup: PendulumSetup; readonly options: PendulumOptions }
  | { readonly kind: 'coastDown'; readonly options: CoastDownOptions }
  | {
      readonly kind: 'spinUp';
      readonly options: SpinUpOptions /** V, where the log has none. */;
      readonly voltage?: number;
    }
  | { readonly kind: 'servoStep'; readonly backlash: number }
  | { readonly kind: 'servoSweep'; readonly dynamics: ServoDynamics }
  | { readonly kind: 'stillSensor' }
  | { readonly kind: 'closedLoop'; readonly rig: ClosedLoopRig; readonly options: ClosedLoopOptions };

export type IdentifyKind = IdentifyRequest['kind'];

const WORDS: Readonly<Partial<Record<LogQuantity, string>>> = {
  roll: 'roll angle',
  rollRate: 'roll rate',
  wheelSpeed: 'wheel speed',
  tilt: 'tilt',
  tiltCommand: 'tilt command',
  motorVoltage: 'motor voltage',
};

const lacks = (...wanted: LogQuantity[]): Refused =>
  refuse(
    `The log has no column for ${wanted.map((q) => WORDS[q] ?? q).join(' or ')}: say which column it is.`,
  );

/**
 * Runs one identification on a log in SI units, taking the columns it needs.
 *
 * @returns as the identification itself, or a sentence that says which column is not there
 */
export function identifyLog(
  log: BenchLog,
  request: IdentifyRequest,
): Identification | StillSensorResult | ClosedLoopResult {
  const { time, quantities: q } = log;
  switch (request.kind) {
    case 'decay':
    case 'pendulum': {
      const values = q.roll ?? q.yaw ?? q.rollRate ?? q.yawRate;
      if (!values) return lacks('roll', 'rollRate');
      const signal = q.roll || q.yaw ? 'angle' : 'rate';
      if (request.kind === 'decay') return identifyDecay({ time, values }, { ...request.options, signal });
      return identifyPendulum(
        request.setup,
        { kind: 'log', samples: { time, values }, signal },
        request.options,
      );
    }
    case 'toppling':
      return q.roll ? identifyToppling({ time, values: q.roll }, request.options) : lacks('roll');
    case 'coastDown':
      return q.wheelSpeed
        ? identifyCoastDown({ time, values: q.wheelSpeed }, request.options)
        : lacks('wheelSpeed');
    case 'spinUp': {
      const voltage = q.motorVoltage ?? request.voltage;
      if (!q.wheelSpeed) return lacks('wheelSpeed');
      if (voltage === undefined) return lacks('motorVoltage');
      return identifySpinUp(
        { time, speed: q.wheelSpeed, voltage, ...(q.motorCurrent ? { current: q.motorCurrent } : {}) },
        request.options,
      );
    }
    case 'servoStep':
    case 'servoSweep': {
      if (!q.tilt) return lacks('tilt');
      if (!q.tiltCommand) return lacks('tiltCommand');
      const servo = { time, command: q.tiltCommand, angle: q.tilt };
      return request.kind === 'servoStep'
        ? identifyServoStep(servo, request.backlash)
        : identifyServoSweep(servo, request.dynamics);
    }
    case 'stillSensor':
      return identifySensor(log);
    case 'closedLoop':
      if (!q.roll) return lacks('roll');
      if (!q.tiltCommand) return lacks('tiltCommand');
      return identifyClosedLoop(
        { time, roll: q.roll, tiltCommand: q.tiltCommand, ...(q.moment ? { moment: q.moment } : {}) },
        request.rig,
        request.options,
      );
  }
}

/** The first rate or acceleration of the log, on an even grid; single missing rows are bridged, longer gaps are not. */
function identifySensor(log: BenchLog): StillSensorResult | Refused {
  const { time, quantities: q } = log;
  const rate = q.rollRate ?? q.pitchRate ?? q.yawRate;
  const values = rate ?? q.accelerationX ?? q.accelerationY ?? q.accelerationZ;
  if (!values) return lacks('rollRate');
  const count = Math.floor((time[time.length - 1] - time[0]) / log.step + 1e-6) + 1;
  const even = resampleEvenly({ time, values }, time[0], log.step, count, 2.5 * log.step);
  return identifyStillSensor(even, log.step, { unit: rate ? 'rad/s' : 'm/s²' });
}
