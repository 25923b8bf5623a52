/** When each disturbance happens and what it is called: its block along the ribbon. */
import type { Disturbance } from '../rig';

/** A block along the ribbon: one disturbance. */
export interface EventBlock {
  readonly kind: 'event';
  readonly label: string;
  readonly from: number;
  readonly to: number;
  readonly row: number;
  readonly index: number;
}

/** When a disturbance begins and ends, s. */
export function spanOf(d: Disturbance): readonly [number, number] {
  switch (d.kind) {
    case 'shove':
      return [d.time, d.time];
    case 'shake':
      return [d.time, d.time + (d.acceleration.length - 1) * d.interval];
    case 'recorded':
      return [d.time, d.time + (d.moment.length - 1) * d.interval];
    default:
      return [d.time, d.time + d.duration];
  }
}

const NAMES: Readonly<Record<Disturbance['kind'], string>> = {
  shove: 'Shove',
  sideLoad: 'Side load',
  payload: 'Payload',
  slope: 'Slope',
  turn: 'Turn',
  shake: 'Floor shake',
  waves: 'Waves',
  sea: 'Sea',
  recorded: 'Recorded moment',
};

export const labelOf = (d: Disturbance): string =>
  d.kind === 'payload' ? (d.mass < 0 ? 'Payload put down' : 'Payload picked up') : NAMES[d.kind];

/** Blocks of a sequence for the ribbon, in its row. */
export const eventBlocks = (sequence: readonly Disturbance[], row: number): readonly EventBlock[] =>
  sequence.map((d, index) => {
    const [from, to] = spanOf(d);
    return { kind: 'event', label: labelOf(d), from, to, row, index };
  });
