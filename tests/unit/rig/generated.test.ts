import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Ajv from 'ajv';
import { describe, expect, it } from 'vitest';
import { DEMONSTRATIONS } from '../../../src/core/rig';
import { generatedFiles, rigJsonSchema } from '../../../tools/writeSchemas';

describe('files generated into public/', () => {
  it.each(generatedFiles())('%s is what the source says now', (path, text) => {
    expect(readFileSync(join(import.meta.dirname, '../../../public', path), 'utf8')).toBe(text);
  });
});

describe('the JSON Schema', () => {
  const validate = new Ajv({ strict: false }).compile(rigJsonSchema());
  it('accepts the demonstration rigs by a general validator', () => {
    for (const { rig } of DEMONSTRATIONS) expect(validate(rig), JSON.stringify(validate.errors)).toBe(true);
  });
  it('refuses what the program refuses', () => {
    const rig = structuredClone(DEMONSTRATIONS[0]!.rig) as unknown as {
      body: { torso: { mass: number } };
      extra?: number;
    };
    rig.body.torso.mass = -1;
    expect(validate(rig)).toBe(false);
    rig.body.torso.mass = 1;
    rig.extra = 1;
    expect(validate(rig)).toBe(false);
  });
});
