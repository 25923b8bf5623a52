import { compileRig, fallOf, weigh } from '../../core/physics';
import type { Command } from '../command';

export const weighCommand: Command = {
  name: 'weigh',
  purpose: 'mass, centre, inertia, momentum, and how the rig falls or rolls',
  example: 'weigh public/rigs/strider.json',
  options: [],
  reads: 'rig',
  run: ({ rig }) => {
    const outcome = compileRig(rig);
    if (outcome.kind === 'refused')
      return { kind: 'refused', sentences: outcome.refusals.map((r) => r.sentence) };
    const { whole } = outcome.compiled;
    return {
      kind: 'done',
      output: {
        rig: rig.name,
        mass: whole.mass,
        centreOfMass: whole.com,
        inertiaAboutCentre: whole.inertia,
        fall: fallOf(outcome.compiled),
        figures: weigh(outcome.compiled),
      },
    };
  },
};
