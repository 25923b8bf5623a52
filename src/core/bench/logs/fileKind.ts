/** Tells, from its first bytes, a file that is no text log at all. Undefined when it may be one. */
export function findForeignFile(bytes: Uint8Array, length: number): string | undefined {
  const starts = (...magic: number[]): boolean =>
    length >= magic.length && magic.every((b, i) => bytes[i] === b);
  if (starts(0xff, 0xfe) || starts(0xfe, 0xff)) {
    return 'The log is written in UTF-16 (its first two bytes say so): save it as UTF-8 and open it again.';
  }
  if (starts(0x50, 0x4b, 0x03, 0x04)) {
    return 'This is a zip file or a spreadsheet, not text (line 1 starts with "PK"): export the sheet as CSV.';
  }
  if (starts(0x1f, 0x8b)) return 'This is a gzip file, not text (bytes 1F 8B at line 1): unpack it first.';
  if (starts(0x25, 0x50, 0x44, 0x46)) return 'This is a PDF file, not text (line 1 starts with "%PDF").';
  if (starts(0xd0, 0xcf, 0x11, 0xe0))
    return 'This is an old spreadsheet file, not text (bytes D0 CF 11 E0 at line 1): export the sheet as CSV.';
  let zeros = 0;
  let controls = 0;
  let evenZeros = 0;
  let line = 1;
  let first = -1;
  let firstLine = 1;
  // A logger that lost power leaves zero bytes after good lines: those at the end are not held against it.
  let seen = Math.min(length, 65_536);
  while (seen > 0 && bytes[seen - 1] === 0) seen--;
  if (seen === 0 && length > 0)
    return 'This is a binary file, not text: line 1 has the byte 00 at position 1, and so on to the end.';
  for (let i = 0; i < seen; i++) {
    const b = bytes[i];
    if (b === 10) line++;
    if (b === 0) {
      zeros++;
      if (i % 2 === 0) evenZeros++;
    } else if (b < 32 && b !== 9 && b !== 10 && b !== 13 && b !== 12) controls++;
    else continue;
    if (first < 0) {
      first = i;
      firstLine = line;
    }
  }
  if (zeros > 0.3 * seen && (evenZeros > 0.95 * zeros || evenZeros < 0.05 * zeros)) {
    return 'The log looks like UTF-16 with no byte-order mark (every other byte is zero): save it as UTF-8 and open it again.';
  }
  const strange = zeros + controls;
  if (first >= 0 && (first < 8 || (strange >= 8 && strange > 0.05 * seen))) {
    const hex = bytes[first].toString(16).toUpperCase().padStart(2, '0');
    return `This is a binary file, not text: line ${firstLine} has the byte ${hex} at position ${first + 1} of the file.`;
  }
  return undefined;
}
