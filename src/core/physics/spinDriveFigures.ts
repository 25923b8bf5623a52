/** Drag, motor and battery figures of the Spin up station. */
import type { Figure } from '../units';
import { BALANCE_FORMULAS } from './balanceGrade';
import { BEARING_FORMULAS } from './bearings';
import { DRIVE_FORMULAS } from './drive';
import { figure, figureInput as input, speedInput as speedOf } from './figureParts';
import type { SensorShake } from './sensorShake';
import type { RigSpin, SpinReport } from './spin';
import { BURST_FORMULAS } from './wheelBurst';
import { WINDAGE_FORMULAS } from './windage';

export function dragFigures(report: SpinReport): readonly Figure[] {
  const { gyro, drag, envelope, windage, openAir } = report;
  const housed = gyro.housing.kind === 'open' ? WINDAGE_FORMULAS.freeDisc : WINDAGE_FORMULAS.enclosedDisc;
  const size = [
    input('Radius', envelope.radius, 'length'),
    input('Width of the rim', envelope.width, 'length'),
    input('Reynolds number', windage.reynolds, 'ratio'),
    speedOf(report),
  ];
  const bearingInputs = [
    input('Friction coefficient', gyro.bearing.friction, 'ratio'),
    input('Mean load', report.meanLoad, 'force'),
    input('Bore', gyro.bearing.bore, 'length'),
    speedOf(report),
  ];
  return [
    figure('windage', 'Windage', windage.power, 'power', housed, size),
    figure(
      'windageOpen',
      'The same wheel in open air',
      openAir.power,
      'power',
      WINDAGE_FORMULAS.freeDisc,
      size,
    ),
    figure(
      'bearingDrag',
      'Bearing friction, gimbal swinging',
      drag.bearings * gyro.speed,
      'power',
      BEARING_FORMULAS.simpleDrag,
      bearingInputs,
    ),
    figure(
      'lubricantDrag',
      'Lubricant',
      drag.lubricant(gyro.speed) * gyro.speed,
      'power',
      BEARING_FORMULAS.lubricantDrag,
      bearingInputs,
    ),
  ];
}

export function driveFigures(report: SpinReport): readonly Figure[] {
  const { drive, hold, spinUp, coast, braking, wheel, choices } = report;
  const note = DRIVE_FORMULAS;
  const motor = [
    input('Torque constant', drive.torqueConstant, 'torqueConstant'),
    input('Resistance', drive.resistance, 'resistance'),
    input('Current limit', drive.currentLimit, 'current'),
    input('Battery', drive.voltage, 'voltage'),
  ];
  const inertia = input('J_s', wheel.spinInertia, 'inertia');
  const figures: Figure[] = [];
  const top = spinUp.kind === 'reaches' ? spinUp.spinUp.topSpeed : spinUp.topSpeed;
  figures.push(figure('topSpeed', 'Top speed', top, 'spinRate', note.current, motor));
  if (spinUp.kind === 'reaches') {
    const { duration, currentBound, batteryEnergy } = spinUp.spinUp;
    figures.push(
      figure('spinUpTime', 'Time to spin up', duration, 'time', note.spinUp, [inertia, ...motor]),
      figure('spinUpBound', 'No faster than', currentBound, 'time', note.currentBound, [inertia, ...motor]),
      figure('spinUpEnergy', 'Taken from the battery', batteryEnergy, 'energy', note.batteryCurrent, [
        inertia,
        ...motor,
      ]),
    );
  }
  if (hold.kind === 'held') {
    const drag = input('Drag', hold.drag, 'torque');
    figures.push(
      figure(
        'holdPower',
        'Power to hold speed, gimbal swinging',
        hold.flows.battery,
        'power',
        note.batteryCurrent,
        [drag, ...motor],
      ),
      figure('holdCurrent', 'Current to hold speed', hold.flows.current, 'current', note.hold, [
        drag,
        ...motor,
      ]),
      figure(
        'motorHeat',
        'Heat in the motor',
        hold.motorHeat,
        'power',
        { formula: 'P = I² R + K_t I_0 ω', source: 'textbook DC machine' },
        [input('Current', hold.flows.current, 'current'), ...motor],
      ),
    );
  }
  figures.push(
    figure('coastTime', 'Coasts to 1 % in', coast.duration, 'time', note.coast, [inertia, speedOf(report)]),
    figure('stopTime', 'Stops under braking in', braking.duration, 'time', note.coast, [
      inertia,
      input('Braking current', choices.brakeCurrent, 'current'),
      speedOf(report),
    ]),
    figure(
      'brakeEnergy',
      'Energy the brake takes up',
      braking.absorbed,
      'energy',
      { formula: 'E = ∫ K_t I ω dt − I² R t', source: 'energy balance' },
      [input('Braking current', choices.brakeCurrent, 'current'), inertia],
    ),
  );
  return figures;
}

/** What one wheel's unbalance does to the sensor, as figures. */
export function shakeFigures(shake: SensorShake, report: SpinReport, loopRate: number): readonly Figure[] {
  const inputs = [input('Unbalance', report.unbalance, 'unbalance'), speedOf(report)];
  const { vibration, alias } = BALANCE_FORMULAS;
  return [
    figure(
      'sensorAcceleration',
      'Shake at the sensor',
      shake.acceleration,
      'acceleration',
      vibration,
      inputs,
    ),
    figure('sensorRate', 'Shake of the rate gyro', shake.rate, 'angularRate', vibration, inputs),
    figure('alias', 'Shows in the samples at', shake.alias, 'frequency', alias, [
      input('Frequency of the wheel', shake.frequency, 'frequency'),
      input('Loop rate', loopRate, 'frequency'),
    ]),
  ];
}

/** What the run time and the ledger's battery line call the gimbals' share, so that one can be found by the other. */
export const GIMBAL_POWER = 'Mean power of the gimbal drives';

/** Figures of the whole array on its battery. */
export function arraySpinFigures(spin: RigSpin): readonly Figure[] {
  const note = DRIVE_FORMULAS;
  const wheels = input('Wheels', spin.gyros.length, 'count');
  const battery = input('Energy of the battery', spin.batteryEnergy, 'energy');
  return [
    figure('storedEnergy', 'Energy in all wheels', spin.stored, 'energy', BURST_FORMULAS.energy, [wheels]),
    figure('arrayPower', 'Power with all wheels held', spin.power, 'power', note.hold, [wheels]),
    figure('arraySpinUp', 'All wheels up, one after another', spin.spinUpTime, 'time', note.spinUp, [wheels]),
    figure('runTime', 'Run time on one charge', spin.runTime, 'time', note.runTime, [
      battery,
      input('Energy to spin up', spin.spinUpEnergy, 'energy'),
      input('Power with all wheels held', spin.power, 'power'),
      input(GIMBAL_POWER, spin.gimbalPower, 'power'),
    ]),
  ];
}
