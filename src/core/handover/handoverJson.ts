import type { CompiledRig } from '../physics';
import { hashRig } from './canonicalRig';
import { type GainList, LAW_SENTENCES, type ScheduleList } from './controlNumbers';
import { HANDOVER_FORMAT, HANDOVER_VERSION, type HandoverDocument } from './handoverSchema';

/** Who writes, and when: both stand in every file, and neither is known to the core itself. */
export interface Imprint {
  /** Such as `Tiltwright 0.1.0`. */
  readonly program: string;
  /** Such as `2026-03-01`. */
  readonly date: string;
}

/** The schedule and gains as one document with everything firmware must know about them. Numbers are not rounded. */
export function describeHandover(
  compiled: CompiledRig,
  schedule: ScheduleList,
  gains: GainList,
  imprint: Imprint,
): HandoverDocument {
  const { rig, wheels, speeds } = compiled;
  return {
    format: HANDOVER_FORMAT,
    version: HANDOVER_VERSION,
    program: imprint.program,
    date: imprint.date,
    rig: { name: rig.name, sha256: hashRig(rig) },
    gyros: rig.array.gyros.map((gyro, i) => ({
      name: gyro.name,
      speed: speeds[i]!,
      momentum: wheels[i]!.spinInertia * speeds[i]!,
      tiltMin: gyro.tilt.min,
      tiltMax: gyro.tilt.max,
    })),
    schedule:
      schedule.kind === 'none'
        ? { kind: 'none', sentence: schedule.sentence }
        : {
            kind: 'schedule',
            isCyclic: schedule.isCyclic,
            time: Array.from(schedule.time),
            gimbals: schedule.gimbals.map(({ name, tilt, tiltRate }) => ({
              name,
              tilt: Array.from(tilt),
              tiltRate: Array.from(tiltRate),
            })),
          },
    gains:
      gains.kind === 'none'
        ? { kind: 'none', sentence: gains.sentence }
        : {
            kind: 'gains',
            law: gains.law,
            meaning: LAW_SENTENCES[gains.law],
            loopRate: rig.sensing.loopRate,
            gains: gains.gains.map((gain) => ({ ...gain })),
          },
  };
}

export const writeHandoverJson = (document: HandoverDocument): string =>
  `${JSON.stringify(document, null, 1)}\n`;
