/**
 * A long log made as it is read, so that neither disk nor memory holds it: "time,roll" at 10 kHz, each row different.
 * Yields pieces of about 64 KiB; the total is the first multiple of a piece at or above `bytes`.
 */
export function* makeLongLog(bytes: number): Generator<Uint8Array> {
  const header = Uint8Array.from('time [s],roll [deg]\n', (c) => c.charCodeAt(0));
  yield header;
  const piece = new Uint8Array(65_536 + 32);
  let made = header.length;
  let row = 0;
  while (made < bytes) {
    let n = 0;
    while (n < 65_536) {
      n = writeFixed(piece, n, row, 4);
      piece[n++] = 44;
      n = writeFixed(piece, n, rollOf(row), 5);
      piece[n++] = 10;
      row++;
    }
    made += n;
    yield piece.slice(0, n);
  }
}

/** Roll in units of 1e-5 deg in row i: a sawtooth with every digit in use. */
export const rollOf = (i: number): number => ((i * 7919) % 9_999_991) - 4_999_995;

/** Writes value / 10^digits in decimal from place n on; returns the next place. */
function writeFixed(out: Uint8Array, n: number, value: number, digits: number): number {
  let v = value;
  if (v < 0) {
    out[n++] = 45;
    v = -v;
  }
  const length = Math.max(digits + 1, v > 0 ? Math.floor(Math.log10(v) + 1e-9) + 1 : 1);
  for (let k = length - 1; k >= 0; k--) {
    const place = n + k + (k >= length - digits ? 1 : 0);
    out[place] = 48 + (v % 10);
    v = Math.floor(v / 10);
  }
  out[n + length - digits] = 46;
  return n + length + 1;
}
