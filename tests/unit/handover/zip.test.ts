import { readFileSync } from 'node:fs';
import { unzipSync } from 'three/addons/libs/fflate.module.js';
import { describe, expect, it } from 'vitest';
import { PROGRAM_VERSION } from '../../../src/core/handover/program';
import { encodeUtf8 } from '../../../src/core/handover/text';
import { writeZip } from '../../../src/core/handover/zip';

describe('all files in one', () => {
  it('are unpacked by another implementation, name by name and byte by byte', () => {
    const files = [
      { name: 'a.txt', bytes: encodeUtf8('one') },
      { name: 'empty', bytes: new Uint8Array(0) },
      { name: 'ünder.bin', bytes: Uint8Array.from({ length: 70_000 }, (_, i) => (i * 31) & 255) },
    ];
    const unpacked = unzipSync(writeZip(files)) as Record<string, Uint8Array>;
    expect(Object.keys(unpacked)).toEqual(files.map(({ name }) => name));
    for (const { name, bytes } of files)
      expect(Buffer.from(unpacked[name]!).equals(Buffer.from(bytes))).toBe(true);
  });

  it('can be none', () => {
    expect(unzipSync(writeZip([]))).toEqual({});
  });
});

describe('the program', () => {
  it('names the version of its package', () => {
    const { version } = JSON.parse(readFileSync('package.json', 'utf8')) as { version: string };
    expect(PROGRAM_VERSION).toBe(version);
  });
});
