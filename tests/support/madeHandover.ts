import { type Handover, type HandoverFile, makeHandover } from '../../src/core/handover';
import type { Rig } from '../../src/core/rig';

export const IMPRINT = { program: 'Tiltwright test', date: '2026-03-01' } as const;

/** Everything handed over of a rig; throws when it is refused. */
export function handOver(rig: Rig): Handover {
  const outcome = makeHandover(rig, IMPRINT, () => 0);
  if (outcome.kind === 'refused')
    throw new Error(outcome.refusals.map(({ sentence }) => sentence).join('\n'));
  return outcome.handover;
}

/** The file whose name ends so; throws when there is none or more than one. */
export function fileEnding({ files }: Handover, ending: string): HandoverFile {
  const found = files.filter(({ name }) => name.endsWith(ending));
  if (found.length !== 1) throw new Error(`${found.length} files end with ${ending}`);
  return found[0]!;
}

export const textOf = (file: HandoverFile): string => new TextDecoder().decode(file.bytes);
