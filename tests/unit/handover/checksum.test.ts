import { createHash } from 'node:crypto';
import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { canonicalRigText, hashRig } from '../../../src/core/handover/canonicalRig';
import { crc32, sha256 } from '../../../src/core/handover/checksum';
import { encodeUtf8 } from '../../../src/core/handover/text';
import { SKIFF, STRIDER } from '../../../src/core/rig';

const samples = ['', 'a', 'abc', 'é–𝄞', 'x'.repeat(55), 'x'.repeat(56), 'x'.repeat(64), 'Tilt '.repeat(5000)];

describe('checksums', () => {
  it('take CRC-32 as published and as gzip does', () => {
    // Check value of CRC-32/ISO-HDLC for "123456789", from memory.
    expect(crc32(encodeUtf8('123456789'))).toBe(0xcbf43926);
    for (const text of samples) {
      const packed = gzipSync(text);
      expect(crc32(encodeUtf8(text))).toBe(packed.readUInt32LE(packed.length - 8));
    }
  });

  it('take SHA-256 as another implementation does', () => {
    // FIPS 180-2, appendix B.1.
    expect(sha256(encodeUtf8('abc'))).toBe(
      'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad',
    );
    for (const text of samples)
      expect(sha256(encodeUtf8(text))).toBe(createHash('sha256').update(text).digest('hex'));
  });

  it('encode text as another implementation does, a lone surrogate included', () => {
    for (const text of [...samples, 'a\ud800b'])
      expect([...encodeUtf8(text)]).toEqual([...new TextEncoder().encode(text)]);
  });
});

describe('the rig’s hash', () => {
  it('does not hang on the order of keys, and changes with any number', () => {
    const turned = Object.fromEntries(Object.entries(STRIDER).reverse()) as typeof STRIDER;
    expect(hashRig(turned)).toBe(hashRig(STRIDER));
    expect(
      hashRig({ ...STRIDER, sensing: { ...STRIDER.sensing, loopRate: STRIDER.sensing.loopRate + 1 } }),
    ).not.toBe(hashRig(STRIDER));
    expect(hashRig(SKIFF)).toBe(createHash('sha256').update(canonicalRigText(SKIFF)).digest('hex'));
  });

  it('is of a text that holds the whole rig', () => {
    expect(JSON.parse(canonicalRigText(SKIFF))).toEqual(SKIFF);
  });
});
