/** Checksums that anyone can repeat: CRC-32 for firmware, SHA-256 for files. */

const CRC_TABLE = Uint32Array.from({ length: 256 }, (_, byte) => {
  let value = byte;
  for (let bit = 0; bit < 8; bit++) value = value & 1 ? 0xedb88320 ^ (value >>> 1) : value >>> 1;
  return value >>> 0;
});

/**
 * CRC-32 of bytes: polynomial 0x04C11DB7 reflected, starting from all ones, result inverted.
 *
 * O(bytes). Source: ISO 3309; RFC 1952 section 8.
 */
export function crc32(bytes: Uint8Array): number {
  let crc = 0xffffffff;
  for (const byte of bytes) crc = (CRC_TABLE[(crc ^ byte) & 0xff] as number) ^ (crc >>> 8);
  return (crc ^ 0xffffffff) >>> 0;
}

const isPrime = (n: number): boolean => {
  for (let k = 2; k * k <= n; k++) if (n % k === 0) return false;
  return true;
};

const firstPrimes = (count: number): readonly number[] => {
  const primes: number[] = [];
  for (let n = 2; primes.length < count; n++) if (isPrime(n)) primes.push(n);
  return primes;
};

/** First 32 bits of the fraction of a number. */
const fractionBits = (value: number): number => ((value - Math.floor(value)) * 2 ** 32) >>> 0;

const ROUND_CONSTANTS = Uint32Array.from(firstPrimes(64), (p) => fractionBits(Math.cbrt(p)));
const FIRST_HASH = Uint32Array.from(firstPrimes(8), (p) => fractionBits(Math.sqrt(p)));

const turn = (word: number, by: number): number => (word >>> by) | (word << (32 - by));

/** Message, a 1 bit, zeros, and the length in bits, to a whole number of 64-byte blocks. */
function padMessage(bytes: Uint8Array): DataView {
  const padded = new Uint8Array(64 * Math.ceil((bytes.length + 9) / 64));
  padded.set(bytes);
  padded[bytes.length] = 0x80;
  const view = new DataView(padded.buffer);
  view.setUint32(padded.length - 8, Math.floor(bytes.length / 2 ** 29));
  view.setUint32(padded.length - 4, (bytes.length * 8) >>> 0);
  return view;
}

/**
 * SHA-256 of bytes as 64 lower-case hexadecimal digits.
 *
 * O(bytes). Source: FIPS 180-4, section 6.2.
 */
export function sha256(bytes: Uint8Array): string {
  const message = padMessage(bytes);
  const hash = Uint32Array.from(FIRST_HASH);
  const w = new Uint32Array(64);
  const v = new Uint32Array(8);
  for (let block = 0; block < message.byteLength; block += 64) {
    for (let t = 0; t < 16; t++) w[t] = message.getUint32(block + 4 * t);
    for (let t = 16; t < 64; t++) {
      const a = w[t - 15] as number;
      const b = w[t - 2] as number;
      const s0 = turn(a, 7) ^ turn(a, 18) ^ (a >>> 3);
      const s1 = turn(b, 17) ^ turn(b, 19) ^ (b >>> 10);
      w[t] = (w[t - 16] as number) + s0 + (w[t - 7] as number) + s1;
    }
    v.set(hash);
    for (let t = 0; t < 64; t++) {
      const [a, b, c, d, e, f, g, h] = v as unknown as readonly number[];
      const s1 = turn(e!, 6) ^ turn(e!, 11) ^ turn(e!, 25);
      const choice = (e! & f!) ^ (~e! & g!);
      const one = h! + s1 + choice + ROUND_CONSTANTS[t]! + w[t]!;
      const s0 = turn(a!, 2) ^ turn(a!, 13) ^ turn(a!, 22);
      const majority = (a! & b!) ^ (a! & c!) ^ (b! & c!);
      v.copyWithin(1, 0, 7);
      v[0] = one + s0 + majority;
      v[4] = d! + one;
    }
    for (let k = 0; k < 8; k++) hash[k] = hash[k]! + v[k]!;
  }
  return Array.from(hash, (word) => word.toString(16).padStart(8, '0')).join('');
}
