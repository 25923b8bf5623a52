import fc from 'fast-check';
import { Solver } from 'odex';
import { describe, expect, it } from 'vitest';
import {
  compileDrive,
  cornerSpeed,
  createDriveFlows,
  type DriveModel,
  driveFlows,
  fullCurrent,
  holdSpeed,
  motorLine,
  motorTimeConstant,
  packEnergy,
  runTime,
  servoGreatestPower,
  servoPower,
  servoSpeedOf,
  topSpeed,
  torqueConstantOf,
} from '../../../src/core/physics/drive';
import { brakeWheel, currentBound, type SpinUp, spinDown, spinUp } from '../../../src/core/physics/spinCurve';
import { BENCH_MOTOR, BENCH_POWER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const RPM = (2 * Math.PI) / 60;
const noDrag = () => 0;

const ideal = (changes: Partial<DriveModel> = {}): DriveModel => ({
  torqueConstant: torqueConstantOf(1000 * RPM),
  resistance: 0.1,
  noLoadCurrent: 0,
  currentLimit: Number.POSITIVE_INFINITY,
  voltage: 11.1,
  batteryResistance: 0,
  controllerEfficiency: 1,
  ...changes,
});

const curveOf = (...of: Parameters<typeof spinUp>): SpinUp => {
  const outcome = spinUp(...of);
  if (outcome.kind !== 'reaches') throw new Error(`falls short at ${outcome.topSpeed} rad/s`);
  return outcome.spinUp;
};

const balanceOf = (up: SpinUp): number =>
  (up.batteryHeat + up.controllerHeat + up.copperHeat + up.motorFriction + up.dragLoss + up.stored) /
    up.batteryEnergy -
  1;

describe('drive', () => {
  it('torque constants of 100, 400, 1000 and 2300 rpm/V', () => {
    const constants = [100, 400, 1000, 2300].map((kv) => torqueConstantOf(kv * RPM));
    expectClose(constants, [0.0954929658551, 0.0238732414638, 0.00954929658551, 0.00415186808066], {
      rel: 1e-11, // measured 6.6e-13
    });
  });

  it('torque-speed line at 1000 rpm/V, 11.1 V, 0.1 ohm, textbook DC machine', () => {
    const line = motorLine(torqueConstantOf(1000 * RPM), 0.1, 11.1);
    expectClose(
      [line.freeSpeed, line.freeSpeed / RPM, line.stallTorque, line.stallCurrent, line.greatestPower],
      [1162.38928183, 11100, 1.05997192099, 111, 308.025],
      { rel: 1e-11 }, // measured 1.9e-12
    );
  });

  it('voltage-limited spin-up: tau 0.1097 s, 90 % in tau ln 10, first-order closed form', () => {
    const drive = ideal();
    const tau = motorTimeConstant(1e-4, 0.1, drive.torqueConstant);
    expectClose([tau, tau * Math.log(10)], [0.109662271123, 0.252506710752], { rel: 1e-11 }); // measured 2e-12
    const up = curveOf(drive, 1e-4, noDrag, 0.9 * 1162.38928183);
    expectClose(up.duration, 0.252506710752, { rel: 1e-9 }); // measured 6.7e-12
    for (let i = 0; i < up.time.length; i += 20) {
      expectClose(up.speed[i]!, 1162.38928183 * (1 - Math.exp(-up.time[i]! / tau)), { rel: 1e-9, abs: 1e-9 }); // measured rel 1.5e-12, abs 1.6e-9
    }
  });

  it('half of the energy is lost at constant voltage, energy balance', () => {
    const up = curveOf(ideal(), 1e-4, noDrag, 1162.38928183 * (1 - 1e-8), 0, 400);
    expectClose(up.stored / up.batteryEnergy, 0.5, { abs: 1e-7 }); // measured 5e-9
  });

  it('current-limited spin-up takes J omega / (Kt I), and the bound is met exactly', () => {
    const drive = ideal({ currentLimit: 20, noLoadCurrent: 0.5 });
    const target = 0.5 * cornerSpeed(drive);
    const up = curveOf(drive, 2e-4, noDrag, target);
    expectClose(up.duration, (2e-4 * target) / (drive.torqueConstant * 19.5), { rel: 1e-12 }); // measured 0
    expectClose(up.currentBound, up.duration, { rel: 1e-12 }); // measured 0
  });

  it('pack and servo figures', () => {
    expectClose(packEnergy(3, 3.7, 2.2 * 3600), 87912, { rel: 1e-14 }); // measured 1.7e-16
    expectClose(packEnergy(3, 3.7, 2.2 * 3600) / 3600, 24.42, { rel: 1e-14 }); // measured 1.5e-16
    expectClose(packEnergy(3, 4.2, 2.2 * 3600) / 3600, 27.72, { rel: 1e-14 }); // measured 3.8e-16
    expectClose(servoSpeedOf(0.1), 10.471975512, { rel: 1e-10 }); // measured 3.2e-12
    expectClose(servoGreatestPower(1.5, servoSpeedOf(0.1)), 3.92699081699, { rel: 1e-11 }); // measured 7e-13
    // At half stall torque and half speed a linear servo turns half of its input into work.
    expectClose(servoPower(1.5, 10, 0.75, 5), 2 * 0.75 * 5, { rel: 1e-14 }); // measured 0
    expectClose(runTime(1000, 100, [4, 3], 0.8), 100, { rel: 1e-14 }); // measured 0
    expect(runTime(1000, 900, [4], 0.8)).toBe(0);
  });

  it('the flows of the circuit close at every speed and current', () => {
    const drive = compileDrive(BENCH_MOTOR, BENCH_POWER);
    const flows = createDriveFlows();
    for (const speed of [0, 100, 500, 900, 1200]) {
      const current = fullCurrent(drive, speed);
      driveFlows(drive, speed, current, flows);
      const shaft = flows.torque * speed;
      const sum = flows.batteryHeat + flows.controllerHeat + flows.copperHeat + flows.motorFriction + shaft;
      expectClose(sum, flows.battery, { rel: 1e-13 }); // measured 2.6e-16
      // A chopper steps down: the battery gives no more current than the winding takes, controller losses aside.
      expect(flows.batteryCurrent * drive.controllerEfficiency).toBeLessThanOrEqual(current * (1 + 1e-12));
    }
  });

  it('spin-up by integrals over speed is the motion integrated over time by another solver', () => {
    const drive = compileDrive(BENCH_MOTOR, BENCH_POWER);
    const dragAt = (speed: number) => 2e-3 + 1e-6 * speed + 6e-9 * speed ** 2;
    const inertia = 4e-4;
    const top = topSpeed(drive, dragAt);
    const up = curveOf(drive, inertia, dragAt, 0.97 * top, 0, 200);
    const flows = createDriveFlows();
    const solver = new Solver(2);
    solver.absoluteTolerance = 1e-9;
    solver.relativeTolerance = 1e-10;
    const end = solver.solve(
      (_t: number, y: number[]) => {
        driveFlows(drive, y[0]!, fullCurrent(drive, y[0]!), flows);
        return [(flows.torque - dragAt(y[0]!)) / inertia, flows.battery];
      },
      0,
      [0, 0],
      up.duration,
      () => {},
    );
    expectClose(end.y[0]!, 0.97 * top, { rel: 1e-9 }); // measured 2.6e-11
    expectClose(end.y[1]!, up.batteryEnergy, { rel: 1e-9 }); // measured 7.1e-11
  });

  it('no spin-up is faster than the current limit allows, and its energies close to 0.1 %', () => {
    fc.assert(
      fc.property(
        fc.record({
          kv: fc.double({ min: 100, max: 3000, noNaN: true }),
          resistance: fc.double({ min: 0.01, max: 1, noNaN: true }),
          noLoadCurrent: fc.double({ min: 0, max: 1, noNaN: true }),
          currentLimit: fc.double({ min: 2, max: 60, noNaN: true }),
          voltage: fc.double({ min: 6, max: 50, noNaN: true }),
          batteryResistance: fc.double({ min: 0, max: 0.2, noNaN: true }),
          controllerEfficiency: fc.double({ min: 0.8, max: 1, noNaN: true }),
        }),
        fc.double({ min: 1e-5, max: 0.1, noNaN: true }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.double({ min: 0.05, max: 0.98, noNaN: true }),
        ({ kv, ...rest }, inertia, dragShare, share) => {
          const drive: DriveModel = { ...rest, torqueConstant: torqueConstantOf(kv * RPM) };
          const free = drive.voltage / drive.torqueConstant;
          const coefficient = (dragShare * 0.5 * drive.torqueConstant * drive.currentLimit) / free ** 1.8;
          const dragAt = (speed: number) => coefficient * speed ** 1.8;
          const top = topSpeed(drive, dragAt);
          if (!(top > 0)) return;
          const up = curveOf(drive, inertia, dragAt, share * top);
          expect(up.duration).toBeGreaterThanOrEqual(up.currentBound * (1 - 1e-9));
          expect(currentBound(drive, inertia, share * top)).toBe(up.currentBound);
          // Asked: 0.1 %. The same panels carry every share, so it closes to rounding; the test above, by another
          // solver over time, is the one that could find a wrong integral.
          expectClose(balanceOf(up), 0, { abs: 1e-12 }); // measured 2e-15
          for (let i = 1; i < up.time.length; i++) expect(up.time[i]!).toBeGreaterThan(up.time[i - 1]!);
        },
      ),
      { seed: 20260006 },
    );
  });

  it('says the top speed when the drag is too much', () => {
    const drive = compileDrive(BENCH_MOTOR, BENCH_POWER);
    const dragAt = (speed: number) => 1e-7 * speed ** 2;
    const top = topSpeed(drive, dragAt);
    expectClose(drive.torqueConstant * (fullCurrent(drive, top) - drive.noLoadCurrent), dragAt(top), {
      rel: 1e-9, // measured 2.9e-15
    });
    expect(spinUp(drive, 1e-4, dragAt, top * 1.01)).toMatchObject({ kind: 'falls short', topSpeed: top });
    expect(holdSpeed(drive, dragAt, top * 1.01).kind).toBe('too fast');
    const held = holdSpeed(drive, dragAt, top * 0.5);
    if (held.kind !== 'held') throw new Error('not held');
    expectClose(held.flows.torque, dragAt(top * 0.5), { rel: 1e-12 }); // measured 0
    expectClose(held.motorHeat, held.flows.copperHeat + held.flows.motorFriction, { rel: 1e-15 }); // measured 0
    expect(topSpeed(drive, () => 1e3)).toBe(0);
  });

  it('coasts and brakes as the closed forms of constant, viscous and quadratic drag', () => {
    const constant = spinDown(2e-4, () => 1e-3, 5e-4, 800);
    expectClose(constant.toRest, (2e-4 * 800) / 1.5e-3, { rel: 1e-12 }); // measured 2.7e-16
    const viscous = spinDown(2e-4, (w) => 1e-6 * w, 0, 800);
    expectClose(viscous.duration, (2e-4 / 1e-6) * Math.log(100), { rel: 1e-12 }); // measured 7.4e-16
    expect(viscous.toRest).toBe(Number.POSITIVE_INFINITY);
    const quadratic = spinDown(2e-4, (w) => 1e-9 * w * w, 0, 800);
    expectClose(quadratic.duration, (2e-4 / 1e-9) * (1 / 8 - 1 / 800), { rel: 1e-9 }); // measured 0
    const drive = ideal();
    const stop = brakeWheel(drive, 2e-4, noDrag, 800, 10);
    expectClose(stop.duration, (2e-4 * 800) / (drive.torqueConstant * 10), { rel: 1e-12 }); // measured 4e-16
    expectClose(stop.absorbed + stop.copperHeat, 0.5 * 2e-4 * 800 ** 2, { rel: 1e-12 }); // measured 1.1e-15
    expectClose(stop.greatestPower, drive.torqueConstant * 10 * 800, { rel: 1e-14 }); // measured 0
  });
});
