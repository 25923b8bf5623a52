import { sizeRig, usualSizeAsk } from '../../core/planning';
import { MATERIAL_NAMES } from '../../core/rig';
import type { Command } from '../command';

export const sizeCommand: Command = {
  name: 'size',
  purpose: 'the smallest wheels that do the rig’s jobs, and the lightest rims that store it',
  example: 'size public/rigs/strider.json --spare 20',
  options: [
    { name: 'spare', meaning: 'per cent of momentum kept unused', fallback: '20' },
    {
      name: 'lean',
      meaning: 'most lean in degrees of a body that leans; auto: 5 afloat, else 20',
      fallback: 'auto',
    },
    { name: 'radius', meaning: 'outer radius in mm; auto: that of the first wheel', fallback: 'auto' },
    { name: 'width', meaning: 'rim width in mm; auto: that of the first wheel', fallback: 'auto' },
    { name: 'material', meaning: 'rim material; auto: that of the first wheel', fallback: 'auto' },
    {
      name: 'rimSpeed',
      meaning: 'm/s at the rim; auto: as fast as stress and motor allow',
      fallback: 'auto',
    },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const usual = usualSizeAsk(rig);
    if (!usual) return { kind: 'refused', sentences: ['The rig has no wheels yet to size.'] };
    const isAuto = (name: string): boolean => options.text(name) === 'auto';
    const spare = options.number('spare', 0, 95, '%') / 100;
    const lean = isAuto('lean') ? usual.lean : (options.number('lean', 0.1, 20, '°') * Math.PI) / 180;
    const radius = isAuto('radius') ? usual.radius : options.number('radius', 3, 1000, 'mm') / 1000;
    const width = isAuto('width') ? usual.width : options.number('width', 0.5, 500, 'mm') / 1000;
    const material = isAuto('material') ? usual.material : options.choice('material', MATERIAL_NAMES);
    const rimSpeed = isAuto('rimSpeed') ? undefined : options.number('rimSpeed', 1, 1000, 'm/s');
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    const outcome = sizeRig(rig, { spare, lean, radius, width, material, rimSpeed });
    if (outcome.kind === 'none') {
      return { kind: 'failing', output: { rig: rig.name, sentence: outcome.sentence } };
    }
    const { share, axes, wheels, refused, rig: sized } = outcome;
    const output = {
      rig: rig.name,
      spare,
      share,
      axes,
      wheels,
      refused: refused ?? null,
      sized: sized ?? null,
    };
    return { kind: sized ? 'done' : 'failing', output };
  },
};
