/** The schedule and gains as one JSON document: from this come its type, its check and the published JSON Schema. */
import * as v from 'valibot';

export const HANDOVER_FORMAT = 'tiltwright-handover';
export const HANDOVER_VERSION = 1;

const sentence = v.pipe(v.string(), v.minLength(1));
const hash = v.pipe(v.string(), v.regex(/^[0-9a-f]{64}$/));
const numbers = v.array(v.number());

export const HandoverSchema = v.strictObject({
  format: v.literal(HANDOVER_FORMAT),
  version: v.literal(HANDOVER_VERSION),
  program: v.pipe(v.string(), v.title('Program and version that wrote it')),
  date: v.pipe(v.string(), v.title('When it was written')),
  rig: v.strictObject({
    name: sentence,
    sha256: v.pipe(hash, v.title('SHA-256 of the canonical rig file')),
  }),
  gyros: v.array(
    v.strictObject({
      name: sentence,
      speed: v.pipe(v.number(), v.title('Wheel speed, rad/s, signed by its sense')),
      momentum: v.pipe(v.number(), v.title('Wheel momentum, N m s, signed by its sense')),
      tiltMin: v.pipe(v.number(), v.title('Tilt limit below, rad')),
      tiltMax: v.pipe(v.number(), v.title('Tilt limit above, rad')),
    }),
  ),
  schedule: v.variant('kind', [
    v.strictObject({
      kind: v.literal('schedule'),
      isCyclic: v.boolean(),
      time: v.pipe(numbers, v.title('Instants, s')),
      gimbals: v.array(
        v.strictObject({
          name: sentence,
          tilt: v.pipe(numbers, v.title('Tilt at each instant, rad')),
          tiltRate: v.pipe(numbers, v.title('Tilt rate at each instant, rad/s')),
        }),
      ),
    }),
    v.strictObject({ kind: v.literal('none'), sentence }),
  ]),
  gains: v.variant('kind', [
    v.strictObject({
      kind: v.literal('gains'),
      law: sentence,
      meaning: v.pipe(v.string(), v.title('What the law does with its gains')),
      loopRate: v.pipe(v.number(), v.title('Loop rate they are for, Hz')),
      gains: v.array(v.strictObject({ name: sentence, unit: sentence, value: v.number() })),
    }),
    v.strictObject({ kind: v.literal('none'), sentence }),
  ]),
});

export type HandoverDocument = v.InferOutput<typeof HandoverSchema>;
