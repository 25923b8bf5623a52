/** A floating rig's hydrostatics as numbers that open, and the usual starting values of its roll. */
import type { HullBody } from '../rig';
import type { Figure } from '../units';
import { figure, figureInput as input } from './figureParts';
import type { HullSection } from './hullSection';
import { flotation, HYDROSTATIC_FORMULAS, type Loading, rightingArms } from './hydrostatics';
import { codeRollPeriod, ROLL_FORMULAS, type RollStart, rollPeriodOf, usualRollStart } from './rollMotion';

/**
 * Usual starting values of added inertia and roll damping of a hull, rolling about its centre of mass.
 *
 * @param hull        section and fin
 * @param load        whole mass, its centre, water
 * @param dryInertia  kg*m^2 about the roll axis through the centre of mass
 * @param GM          m
 *
 * Source: common practice, from memory; a roll-decay test replaces them.
 */
export function usualHullRollStart(hull: HullBody, load: Loading, dryInertia: number, GM: number): RollStart {
  const { keel } = hull;
  const fin =
    keel.kind === 'fin'
      ? {
          length: keel.length,
          root: Math.abs(load.centreHeight),
          tip: Math.abs(load.centreHeight + keel.depth),
        }
      : undefined;
  const { mass, waterDensity } = load;
  return usualRollStart({ sectionKind: hull.section.kind, dryInertia, mass, GM, waterDensity, fin });
}

/**
 * Hydrostatic figures of a hull, from waterline to righting arms and roll period.
 *
 * @param section  from `hullSection`
 * @param load     whole mass, its centre, water
 * @param inertia  kg*m^2, roll inertia with the water's share
 * @returns        figures; empty when the hull sinks under the load
 */
export function hullFigures(section: HullSection, load: Loading, inertia: number): readonly Figure[] {
  const upright = flotation(section, load);
  const righting = rightingArms(section, load);
  if (upright.kind === 'sinks' || righting.kind === 'sinks') return [];
  const { flotation: at } = upright;
  const { arms } = righting;
  const note = HYDROSTATIC_FORMULAS;
  const mass = input('Mass', load.mass, 'mass');
  const centre = input('Centre of mass above the keel line, KG', load.centreHeight, 'length');
  const density = input('Density of the water', load.waterDensity, 'density');
  const hull = [mass, density, input('Length', section.length, 'length')];
  const beam = input('Breadth at the waterline', at.waterlineBeam, 'length');
  const curve = [mass, centre, density];
  const figures: Figure[] = [
    figure('waterline', 'Waterline above the keel line', at.waterline, 'length', note.waterline, hull),
    figure('freeboard', 'Freeboard', at.freeboard, 'length', note.waterline, hull),
    figure('buoyancy', 'Buoyancy', at.buoyancy, 'force', note.buoyancy, [mass]),
    figure('displacedVolume', 'Water displaced', at.volume, 'volume', note.buoyancy, hull),
    figure('KB', 'Centre of buoyancy, KB', at.KB, 'length', note.KB, hull),
    figure('BM', 'Metacentre above it, BM', at.BM, 'length', note.BM, [
      beam,
      input('Displaced section', at.volume / section.length, 'area'),
    ]),
    figure('GM', 'Metacentric height, GM', at.GM, 'length', note.GM, [
      input('KB', at.KB, 'length'),
      input('BM', at.BM, 'length'),
      centre,
    ]),
    figure('greatestArm', 'Greatest righting arm', arms.greatestArm, 'length', note.GZ, curve),
    figure('greatestArmAngle', 'at a heel of', arms.greatestArmAngle, 'angle', note.GZ, curve),
    figure('rightingWork', 'Work to heel to 60°, per weight', arms.area.at(-1)!, 'length', note.GZ, curve),
  ];
  const angles = [
    ['vanishingAngle', 'No righting arm past', arms.vanishingAngle],
    ['deckImmersionAngle', 'Deck edge goes under at', arms.deckImmersionAngle],
    ['lollAngle', 'Comes to rest heeled at', arms.lollAngle],
  ] as const;
  for (const [id, label, angle] of angles) {
    if (angle !== undefined) figures.push(figure(id, label, angle, 'angle', note.GZ, curve));
  }
  if (at.GM > 0) {
    const code = codeRollPeriod(at.waterlineBeam, at.draught, section.length, at.GM);
    const GM = input('GM', at.GM, 'length');
    figures.push(
      figure(
        'rollPeriod',
        'Roll period',
        rollPeriodOf(inertia, load.mass, at.GM),
        'time',
        ROLL_FORMULAS.period,
        [input('Inertia with added', inertia, 'inertia'), mass, GM],
      ),
      figure(
        'codeRollPeriod',
        'A ship of this shape would take',
        code.period,
        'time',
        ROLL_FORMULAS.codePeriod,
        [beam, input('Draught', at.draught, 'length'), GM],
      ),
    );
  }
  return figures;
}
