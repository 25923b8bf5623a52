/** The sideways trim of a rig and the ballast that cures it: numbers that open. */
import type { Figure } from '../units';
import type { CompiledRig } from './compile';
import { figure, figureInput as input } from './figureParts';
import type { FormulaNotes } from './formula';
import { STANDARD_GRAVITY } from './hydrostatics';
import type { TrimBallast } from './weigh';

const NOTES: FormulaNotes<'offset' | 'moment' | 'ballast' | 'left'> = {
  offset: { formula: 'y = Σ m_i y_i / m', source: 'composition of parts' },
  moment: { formula: 'M = m g y', source: 'statics' },
  ballast: { formula: 'm_b = m |y| / lever', source: 'moments about the middle line' },
  left: { formula: 'y = (m y + m_b y_b) / (m + m_b)', source: 'moments about the middle line' },
};

/** m. */
const DUST = 1e-12;

/** What stands off the middle line, and what a ballast leaves of it. Without a ballast: the first two figures alone. */
export function trimFigures(
  { whole }: Pick<CompiledRig, 'whole'>,
  ballast: TrimBallast | undefined,
): readonly Figure[] {
  const mass = input('Mass', whole.mass, 'mass');
  // Less than this is what rounding leaves of a body alike on both sides.
  const y = Math.abs(whole.com[1]) < DUST ? 0 : whole.com[1];
  const offset = input('Centre of mass to the left, y', y, 'length');
  const moment = whole.mass * STANDARD_GRAVITY * y;
  const figures = [
    figure('trimOffset', 'Centre of mass to the left', y, 'length', NOTES.offset, [mass]),
    figure('trimMoment', 'Moment it leaves', moment, 'torque', NOTES.moment, [mass, offset]),
  ];
  if (!ballast) return figures;
  const lever = input('Ballast to the left, y_b', ballast.position[1], 'length');
  const weight = input('Ballast, m_b', ballast.mass, 'mass');
  return [
    ...figures,
    figure('ballastMass', 'Ballast that cures it', ballast.mass, 'mass', NOTES.ballast, [
      mass,
      offset,
      lever,
    ]),
    figure('ballastY', 'Ballast to the left', ballast.position[1], 'length', NOTES.ballast, [mass, offset]),
    figure('trimLeft', 'Left over with it', ballast.offsetLeft, 'length', NOTES.left, [
      mass,
      offset,
      weight,
      lever,
    ]),
  ];
}
