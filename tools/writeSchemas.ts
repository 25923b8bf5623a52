/** Writes what is generated from the source into public/: the rig's JSON Schema and the demonstration rigs. */
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { toJsonSchema } from '@valibot/to-json-schema';
import { HANDOVER_FORMAT, HANDOVER_VERSION, HandoverSchema } from '../src/core/handover';
import {
  DEMONSTRATIONS,
  PARTS_FORMAT,
  PARTS_VERSION,
  PartsSchema,
  RIG_FORMAT,
  RIG_VERSION,
  RigSchema,
} from '../src/core/rig';

const folder = join(import.meta.dirname, '../public');

/** The rig's JSON Schema, from the definition that validates it. */
export const rigJsonSchema = (): object => ({
  $id: `${RIG_FORMAT}.schema.json`,
  title: 'A Tiltwright rig',
  description: `Format "${RIG_FORMAT}", version ${RIG_VERSION}. All numbers in SI: m, kg, s, rad, N, Pa, V, A, Ω, C.`,
  ...toJsonSchema(RigSchema, { target: 'draft-07' }),
});

/** The JSON Schema of a file of parts. */
export const partsJsonSchema = (): object => ({
  $id: `${PARTS_FORMAT}.schema.json`,
  title: 'Parts for Tiltwright rigs',
  description: `Format "${PARTS_FORMAT}", version ${PARTS_VERSION}. All numbers in SI: m, kg, s, rad, N, V, A, Ω.`,
  ...toJsonSchema(PartsSchema, { target: 'draft-07' }),
});

/** The JSON Schema of a handed-over schedule with gains. */
export const handoverJsonSchema = (): object => ({
  $id: `${HANDOVER_FORMAT}.schema.json`,
  title: 'A tilt schedule and gains',
  description: `Format "${HANDOVER_FORMAT}", version ${HANDOVER_VERSION}. All numbers in SI: s, rad, rad/s, N·m·s, Hz.`,
  ...toJsonSchema(HandoverSchema, { target: 'draft-07' }),
});

export const schemaText = (): string => `${JSON.stringify(rigJsonSchema(), null, 1)}\n`;
export const rigText = (rig: object): string => `${JSON.stringify(rig, null, 2)}\n`;

/** Every generated file, by its path under public/. */
export const generatedFiles = (): readonly (readonly [path: string, text: string])[] => [
  [`${RIG_FORMAT}.schema.json`, schemaText()],
  [`${PARTS_FORMAT}.schema.json`, `${JSON.stringify(partsJsonSchema(), null, 1)}\n`],
  [`${HANDOVER_FORMAT}.schema.json`, `${JSON.stringify(handoverJsonSchema(), null, 1)}\n`],
  ...DEMONSTRATIONS.map(({ file, rig }) => [`rigs/${file}`, rigText(rig)] as const),
];

if (process.argv[1]?.endsWith('writeSchemas.ts')) {
  mkdirSync(join(folder, 'rigs'), { recursive: true });
  for (const [path, text] of generatedFiles()) {
    const file = join(folder, path);
    let before = '';
    try {
      before = readFileSync(file, 'utf8');
    } catch {
      // Not there yet.
    }
    if (before !== text) writeFileSync(file, text);
  }
}
