/** How a rig falls or swings by itself, from the modes of its linearised motion: numbers that open. */
import type { Figure, FigureInput } from '../units';
import type { CompiledRig } from './compile';
import { figure, figureInput as input } from './figureParts';
import type { FormulaNotes } from './formula';
import { inertiaAbout } from './massProperties';
import { type FallFacts, fallFacts, type Mode, starModes } from './stability';
import { restState } from './starModel';
import { createStarWork } from './starWork';
import { fallOf } from './weigh';

const MODES = 'eigenvalues of the linearised motion about its balance, gimbals locked';

const NOTES: FormulaNotes<
  'doubling' | 'rate' | 'period' | 'ratio' | 'halving' | 'balance' | 'edge' | 'mode'
> = {
  rate: { formula: 'a = largest real part of det(A − λ 1) = 0', source: MODES },
  doubling: { formula: 'ln 2 / a', source: MODES },
  period: { formula: 'T = 2π / Im λ', source: MODES },
  ratio: { formula: 'ζ = −Re λ / |λ|', source: MODES },
  halving: { formula: 'ln 2 / −Re λ', source: MODES },
  balance: { formula: 'roll at which the moment about the footing is none', source: 'statics' },
  edge: { formula: 'I = I_c + m d²', source: 'parallel-axis theorem' },
  mode: { formula: 'ln 2 / |Re λ|', source: 'eigenvalues of the linearised motion, gimbals as they are' },
};

function factFigures(facts: FallFacts, inputs: readonly FigureInput[]): readonly Figure[] {
  switch (facts.kind) {
    case 'topples': {
      const rate = input('Growth of a lean, a', facts.rate, 'angularRate');
      return [
        figure('fallRate', 'Toppling rate', facts.rate, 'angularRate', NOTES.rate, inputs),
        figure('fallDoubling', 'A lean doubles in', facts.doubling, 'time', NOTES.doubling, [rate]),
      ];
    }
    case 'swings': {
      // Re λ = −ζ |λ| and Im λ = |λ| √(1 − ζ²).
      const size = (2 * Math.PI) / facts.period / Math.sqrt(1 - facts.dampingRatio ** 2);
      const decay = facts.dampingRatio * size;
      const figures = [
        figure('swingPeriod', 'Swings with a period of', facts.period, 'time', NOTES.period, inputs),
        figure('swingDamping', 'Damping ratio', facts.dampingRatio, 'ratio', NOTES.ratio, inputs),
      ];
      if (decay > 0)
        figures.push(
          figure('swingHalving', 'A swing halves in', Math.LN2 / decay, 'time', NOTES.halving, [
            input('Decay, −Re λ', decay, 'angularRate'),
          ]),
        );
      return figures;
    }
    case 'creeps':
      return [figure('creepHalving', 'A lean halves in', facts.halving, 'time', NOTES.halving, inputs)];
    case 'neutral':
      return [];
  }
}

const modeWord = (mode: Mode): string => {
  const way = Number.isFinite(mode.period) ? 'swing' : 'lean';
  return mode.kind === 'grows' ? `a ${way} that doubles in` : `a ${way} that halves in`;
};

/** Modes with free gimbals at work; none when every gimbal is held, where they tell nothing more. */
function freeFigures({ rig, model }: CompiledRig): readonly Figure[] {
  if (!rig.array.gyros.some(({ drive }) => drive.kind === 'free')) return [];
  if (rig.footing.kind === 'firm') return [];
  const state = restState(model);
  const modes = starModes(model, createStarWork(model), state, new Float64Array(model.effortSize));
  return modes
    .filter(({ time }) => Number.isFinite(time))
    .map((mode, k) =>
      figure(`freeMode${k}`, `Gimbals free: ${modeWord(mode)}`, mode.time, 'time', NOTES.mode, [
        input('Re λ', mode.real, 'angularRate'),
        input('Im λ', mode.imaginary, 'angularRate'),
        input('Damping ratio', mode.dampingRatio, 'ratio'),
      ]),
    );
}

/** Inertia of the whole rig about the edge of its feet it tips over first; none when it has no such edge. */
function edgeFigures(compiled: CompiledRig): readonly Figure[] {
  const fall = fallOf(compiled);
  if (fall.kind !== 'stands') return [];
  const { whole } = compiled;
  const distance = Math.hypot(fall.edge, whole.com[2]);
  return [
    figure('edgeInertia', 'Roll inertia about the foot edge', fall.inertia, 'inertia', NOTES.edge, [
      input('Inertia about the centre', inertiaAbout(whole, whole.com)[0], 'inertia'),
      input('Mass', whole.mass, 'mass'),
      input('Centre to edge', distance, 'length'),
    ]),
  ];
}

/**
 * Toppling rate or natural period, damping ratio and times to double or halve; with free gimbals also every mode of
 * theirs; on feet the inertia about the edge it tips over.
 *
 * Failure: a mode that is not there has no figure. Cost: eigenvalues of a matrix of twice the freedoms, once or twice.
 * Source: eigenvalues of the exact linearisation.
 */
export function fallModeFigures(compiled: CompiledRig): readonly Figure[] {
  const fall = fallOf(compiled);
  const facts = fallFacts(compiled.star);
  const inputs = [
    input('Roll stiffness', fall.stiffness, 'stiffness'),
    input('Roll inertia about the pivot', fall.inertia, 'inertia'),
  ];
  const balance = Number.isFinite(facts.balanceAngle)
    ? [
        figure('balanceAngle', 'Balances at a roll of', facts.balanceAngle, 'angle', NOTES.balance, [
          input('Centre of mass to the left', compiled.whole.com[1], 'length'),
          input('Centre of mass height', compiled.whole.com[2], 'length'),
        ]),
      ]
    : [];
  return [...factFigures(facts, inputs), ...balance, ...edgeFigures(compiled), ...freeFigures(compiled)];
}
