/** A floating rig weighed: its righting-arm curve, its figures, and its roll period with and without the water's share. */
import type { Figure } from '../units';
import type { CompiledRig } from './compile';
import { figure, figureInput as input } from './figureParts';
import { hullFigures, usualHullRollStart } from './hullFigures';
import { hullSection } from './hullSection';
import { type Loading, type RightingArms, rightingArms } from './hydrostatics';
import { ROLL_FORMULAS, type RollStart, rollPeriodOf } from './rollMotion';

export interface AfloatReport {
  readonly figures: readonly Figure[];
  /** GZ to 60 degrees of heel, the load off the middle line included. */
  readonly arms: RightingArms;
  /** Usual starting values of what only a roll-decay test can tell. */
  readonly usual: RollStart;
}

/** All that is told of a rig afloat; undefined on land. Cost: two righting-arm curves. Source: as for `hullFigures`. */
export function reportAfloat({ rig, whole, floating }: CompiledRig): AfloatReport | undefined {
  if (!floating || rig.body.kind !== 'hull' || rig.footing.kind !== 'float') return undefined;
  const outcome = hullSection(rig.body);
  if (outcome.kind === 'refused') return undefined;
  const load: Loading = {
    mass: whole.mass,
    centreHeight: whole.com[2],
    centreOffset: whole.com[1],
    waterDensity: rig.footing.density,
  };
  const righting = rightingArms(outcome.section, load);
  if (righting.kind === 'sinks') return undefined;
  const dry = whole.inertia[0];
  const { GM } = floating.flotation;
  const inputs = [
    input('Inertia in air', dry, 'inertia'),
    input('Mass', whole.mass, 'mass'),
    input('GM', GM, 'length'),
  ];
  return {
    figures: [
      figure(
        'draught',
        'Draught',
        floating.flotation.draught,
        'length',
        {
          formula: 'ρ L A(z) = m',
          source: 'Archimedes; section cut at the waterline',
        },
        [input('Mass', whole.mass, 'mass'), input('Volume', floating.flotation.volume, 'volume')],
      ),
      ...hullFigures(outcome.section, load, dry + rig.footing.addedInertia),
      ...(GM > 0
        ? [
            figure(
              'dryRollPeriod',
              'Roll period without added inertia',
              rollPeriodOf(dry, whole.mass, GM),
              'time',
              ROLL_FORMULAS.period,
              inputs,
            ),
          ]
        : []),
    ],
    arms: righting.arms,
    usual: usualHullRollStart(rig.body, load, dry, GM),
  };
}
