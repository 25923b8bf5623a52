import { spanOf } from '../../core/planning';
import type { Jobs } from '../../core/rig';
import type { RibbonBlock } from '../../core/trial';

/** A block in its place along the ribbon: hundredths of its width. */
export interface PlacedBlock {
  readonly block: RibbonBlock;
  readonly key: string;
  readonly left: number;
  readonly width: number;
}

const MOST_BLOCKS = 400;

/**
 * Lays blocks along the ribbon, cut off at its end. Blocks of a gait are repeated with its cycle; events are not.
 *
 * @param cycle   s, length of the gait's cycle; 0 when nothing repeats
 * @param length  s, length of the ribbon
 */
export function placeBlocks(
  blocks: readonly RibbonBlock[],
  cycle: number,
  length: number,
): readonly PlacedBlock[] {
  if (!(length > 0)) return [];
  const placed: PlacedBlock[] = [];
  const put = (block: RibbonBlock, shift: number, turn: number, index: number): void => {
    const from = Math.max(0, block.from + shift);
    const to = Math.min(length, block.to + shift);
    if (to <= from || placed.length >= MOST_BLOCKS) return;
    placed.push({
      block,
      key: `${turn}-${index}`,
      left: (100 * from) / length,
      width: (100 * (to - from)) / length,
    });
  };
  blocks.forEach((block, index) => {
    const repeats = block.kind === 'phase' && cycle > 0 && cycle < length;
    // A block may reach past the end of the cycle, so the turn before the first is laid too.
    const turns = repeats ? Math.ceil(length / cycle) : 1;
    for (let turn = repeats ? -1 : 0; turn < turns; turn++) put(block, turn * cycle, turn, index);
  });
  return placed;
}

/** How many rows the blocks lie in. */
export const countRows = (blocks: readonly RibbonBlock[]): number =>
  blocks.reduce((most, block) => Math.max(most, block.row + 1), 0);

/** Share of the ribbon that a block takes at least, so that a finger finds it. */
const LEAST_SHARE = 0.05;

/** A row for each disturbance: the first in which it lies over no other. O(n^2). */
export function eventRows(sequence: Jobs['sequence'], length: number): readonly number[] {
  const taken: (readonly [from: number, to: number])[][] = [];
  return sequence.map((event) => {
    const [from, end] = spanOf(event);
    const to = Math.max(end, from + LEAST_SHARE * length);
    let row = taken.findIndex((spans) => spans.every(([start, stop]) => to <= start || from >= stop));
    if (row < 0) row = taken.push([]) - 1;
    taken[row]?.push([from, to]);
    return row;
  });
}
