/** The Spin up station's numbers, each with its formula, inputs and source. */
import { MATERIALS } from '../rig';
import type { Figure } from '../units';
import { BALANCE_FORMULAS } from './balanceGrade';
import { BEARING_FORMULAS } from './bearings';
import { DISC_STRESS_FORMULAS } from './discStress';
import { figure, figureInput as input, speedInput as speedOf } from './figureParts';
import type { SpinReport } from './spin';
import { dragFigures, driveFigures } from './spinDriveFigures';
import { BURST_FORMULAS } from './wheelBurst';
import { WHEEL_PROPERTY_FORMULAS } from './wheelProperties';

export interface FigureGroup {
  readonly name: string;
  readonly figures: readonly Figure[];
}

function wheelFigures(report: SpinReport): readonly Figure[] {
  const { wheel, momentum } = report;
  const parts = wheel.parts.map((part, i) => input(`Mass of part ${i + 1}`, part.mass, 'mass'));
  const spins = wheel.parts.map((part, i) => input(`J_s of part ${i + 1}`, part.spinInertia, 'inertia'));
  const note = WHEEL_PROPERTY_FORMULAS;
  return [
    figure(
      'mass',
      'Mass',
      wheel.mass,
      'mass',
      { formula: 'm = Σ m_i, each ρ V', source: 'definition' },
      parts,
    ),
    figure(
      'spinInertia',
      'Inertia about the spin axis, J_s',
      wheel.spinInertia,
      'inertia',
      note.stack,
      spins,
    ),
    figure(
      'transverseInertia',
      'Inertia across it, J_t',
      wheel.transverseInertia,
      'inertia',
      note.stack,
      parts,
    ),
    figure('centre', 'Centre of mass along the axis', wheel.centre, 'length', note.stack, parts),
    figure(
      'momentum',
      'Momentum',
      momentum,
      'angularMomentum',
      { formula: 'h = J_s ω', source: 'definition' },
      [input('J_s', wheel.spinInertia, 'inertia'), speedOf(report)],
    ),
  ];
}

function stressFigures(report: SpinReport): readonly Figure[] {
  const { stress, burst, wheel, choices } = report;
  const worst = stress.lines[0]!;
  const material = MATERIALS[worst.material];
  const inputs = [
    input('Density', material.density, 'density'),
    input("Poisson's ratio", material.poissonRatio, 'ratio'),
    input('Radius of the peak', worst.radius, 'length'),
    speedOf(report),
  ];
  const safe = {
    formula: 'ω_safe = ω √(σ_allowable / (factor × σ))',
    source: `${worst.note.source}; minimum allowable: ${material.source}`,
  };
  const safeInputs = [
    input('Minimum allowable', worst.allowable, 'stress'),
    input('Factor on speed squared', choices.factor, 'ratio'),
    input('Stress', worst.stress, 'stress'),
    speedOf(report),
  ];
  const energy = [input('J_s', wheel.spinInertia, 'inertia'), speedOf(report)];
  const range: Figure[] =
    material.kind === 'printed'
      ? [
          figure(
            'safeSpeedHigh',
            'Safe speed of the best print',
            worst.safeSpeedRange[1],
            'spinRate',
            safe,
            safeInputs,
          ),
        ]
      : [];
  return [
    figure('peakStress', 'Greatest stress', worst.stress, 'stress', worst.note, inputs),
    figure('safeSpeed', 'Safe speed', stress.safeSpeed, 'spinRate', safe, safeInputs),
    ...range,
    figure('burstSpeed', 'Bursts near', stress.burstSpeed, 'spinRate', DISC_STRESS_FORMULAS.meanHoop, [
      input('Ultimate', material.ultimate, 'stress'),
      input('Density', material.density, 'density'),
      input('Outer radius', wheel.outerRadius, 'length'),
    ]),
    figure('rimSpeed', 'Rim speed', burst.rimSpeed, 'speed', BURST_FORMULAS.rimSpeed, [
      input('Outer radius', wheel.outerRadius, 'length'),
      speedOf(report),
    ]),
    figure('burstEnergy', 'Energy of a burst', burst.energy, 'energy', BURST_FORMULAS.energy, energy),
    figure(
      'throwHeight',
      'It could throw its own weight up',
      burst.throwHeight,
      'length',
      BURST_FORMULAS.throwHeight,
      [input('Energy', burst.energy, 'energy'), input('Mass', wheel.mass, 'mass')],
    ),
    figure(
      'boreGrowth',
      'Bore grows in diameter by',
      2 * stress.boreGrowth,
      'length',
      DISC_STRESS_FORMULAS.boreGrowth,
      [input("Young's modulus", material.youngsModulus, 'stress'), ...inputs],
    ),
  ];
}

function balanceFigures(report: SpinReport): readonly Figure[] {
  const { gyro, unbalance, wheel, bearing } = report;
  const grade = input('Grade G (mm/s)', gyro.wheel.balanceGrade, 'ratio');
  const note = BALANCE_FORMULAS;
  return [
    figure('unbalance', 'Residual unbalance allowed', unbalance, 'unbalance', note.unbalance, [
      grade,
      input('Mass', wheel.mass, 'mass'),
      speedOf(report),
    ]),
    figure(
      'eccentricity',
      'Centre off the axis by at most',
      unbalance / wheel.mass,
      'length',
      note.eccentricity,
      [grade, speedOf(report)],
    ),
    figure('unbalanceForce', 'Turning force it makes', 2 * bearing.unbalance, 'force', note.force, [
      input('Unbalance', unbalance, 'unbalance'),
      speedOf(report),
    ]),
  ];
}

function bearingFigures(report: SpinReport): readonly Figure[] {
  const { bearing, meanLoad, gyro, momentum, gimbalRate } = report;
  const note = BEARING_FORMULAS;
  return [
    figure('gyroscopicLoad', 'Load from tilting', bearing.gyroscopic, 'force', note.gyroscopicLoad, [
      input('Momentum', momentum, 'angularMomentum'),
      input('Greatest gimbal rate', gimbalRate, 'angularRate'),
      input('Distance between bearings', gyro.bearing.span, 'length'),
    ]),
    figure('radialLoad', 'Greatest radial load', bearing.radial, 'force', note.radialLoad, [
      input('From weight', bearing.weight, 'force'),
      input('From unbalance', bearing.unbalance, 'force'),
      input('From tilting', bearing.gyroscopic, 'force'),
    ]),
    figure('meanLoad', 'Mean load for wear', meanLoad, 'force', note.meanLoad, [
      input('Swing, as a sine', bearing.gyroscopic, 'force'),
      input('Steady', bearing.weight + bearing.unbalance, 'force'),
    ]),
    figure('bearingLife', 'Life of nine in ten', report.bearingLife, 'time', note.life, [
      input('C', gyro.bearing.dynamicRating, 'force'),
      input('P', meanLoad, 'force'),
      speedOf(report),
    ]),
    figure('staticSafety', 'Static safety', report.staticSafety, 'ratio', note.staticLoad, [
      input('C₀', gyro.bearing.staticRating, 'force'),
      input('Radial load', bearing.radial, 'force'),
      input('Axial load', bearing.axial, 'force'),
    ]),
  ];
}

/** All figures of one gyro's wheel, in the order a person checks them. */
export const spinFigures = (report: SpinReport): readonly FigureGroup[] => [
  { name: 'Wheel', figures: wheelFigures(report) },
  { name: 'Stress', figures: stressFigures(report) },
  { name: 'Balance', figures: balanceFigures(report) },
  { name: 'Bearings', figures: bearingFigures(report) },
  { name: 'Drag', figures: dragFigures(report) },
  { name: 'Drive', figures: driveFigures(report) },
];
