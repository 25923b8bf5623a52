/** Grounds by name, sized to the rig that is to stand on them, and what the hand does to it. */
import { compileRig, STANDARD_GRAVITY } from '../../core/physics';
import type { Rig } from '../../core/rig';
import type { GroundChoice, YardBox } from '../../yard';

export const GROUND_NAMES = ['flat', 'uphill', 'across', 'step', 'plank', 'blocks'] as const;
export type GroundName = (typeof GROUND_NAMES)[number];

const SLOPE = (3 * Math.PI) / 180;

export const GROUND_WORDS: Readonly<Record<GroundName, string>> = {
  flat: 'Level ground',
  uphill: 'Slope ahead, 3°',
  across: 'Slope across, 3°',
  step: 'A step up',
  plank: 'A loose board',
  blocks: 'Loose blocks',
};

export function groundFor(name: GroundName, rig: Rig): GroundChoice {
  switch (name) {
    case 'flat':
    case 'plank':
    case 'blocks':
      return { kind: name };
    case 'uphill':
      return { kind: 'slope', angle: SLOPE, direction: 0 };
    case 'across':
      return { kind: 'slope', angle: SLOPE, direction: Math.PI / 2 };
    case 'step': {
      const { gait } = rig.jobs;
      const lift = gait.kind === 'pattern' ? gait.stepHeight : 0.02;
      return {
        kind: 'step',
        height: 0.4 * lift,
        ahead: 0.1 + (gait.kind === 'pattern' ? gait.stepLength : 0),
      };
    }
  }
}

/** What one kick and one block are for a rig: sizes that it feels, worked out from its weight. */
export interface Blows {
  /** N*s. */
  readonly kick: number;
  /** m, body frame: where it lands. */
  readonly point: readonly [number, number, number];
  /** A block above it, its place from the body's origin. */
  readonly block: YardBox;
}

/** Share of the impulse that would tip the body about a line right under its centre that one kick has. */
const KICK_SHARE = 0.08;
/** Mass of the block over that of the rig. */
const BLOCK_SHARE = 0.06;
/** kg/m^3, of the block: steel, so that it is small. */
const BLOCK_DENSITY = 7850;

export function blowsFor(rig: Rig): Blows | undefined {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') return undefined;
  const { mass, com } = outcome.compiled.whole;
  const height = Math.max(0.02, com[2]);
  const side = Math.cbrt((BLOCK_SHARE * mass) / BLOCK_DENSITY);
  const top = Math.max(2 * height, ...rig.array.gyros.map(({ position }) => 1.2 * position[2]));
  return {
    kick: roundTo(KICK_SHARE * mass * Math.sqrt(STANDARD_GRAVITY * height)),
    point: [0, 0, height],
    block: {
      size: [side, side, side],
      place: [0, 0.25 * side, top + 0.4 * height],
      attitude: [0.966, 0.2, 0.16, 0],
      mass: BLOCK_SHARE * mass,
    },
  };
}

/** To one leading digit and a half: 1, 1.5, 2, 3, 5, 7. */
function roundTo(value: number): number {
  const power = 10 ** Math.floor(Math.log10(value));
  const lead = value / power;
  const nearest = [1, 1.5, 2, 3, 5, 7, 10].reduce((a, b) =>
    Math.abs(b - lead) < Math.abs(a - lead) ? b : a,
  );
  return nearest * power;
}
