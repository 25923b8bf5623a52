import { crc32 } from './checksum';
import { encodeUtf8 } from './text';

/** Names in the archive are UTF-8. */
const UTF8_NAMES = 0x0800;

interface Entry {
  readonly name: string;
  readonly bytes: Uint8Array;
}

/** 1 January 1980, the first day the format has: the core has no clock. */
const DAY = 0x0021;

/** The fields that a file's own head and its line in the directory share, from "version needed" on. */
function writeCommon(view: DataView, at: number, entry: Entry, nameLength: number): void {
  view.setUint16(at, 20, true);
  view.setUint16(at + 2, UTF8_NAMES, true);
  view.setUint16(at + 8, DAY, true);
  view.setUint32(at + 10, crc32(entry.bytes), true);
  view.setUint32(at + 14, entry.bytes.length, true);
  view.setUint32(at + 18, entry.bytes.length, true);
  view.setUint16(at + 22, nameLength, true);
}

/**
 * Files as one ZIP archive, stored and not compressed.
 *
 * O(bytes). Source: PKWARE APPNOTE.TXT 6.3, sections 4.3.7, 4.3.12 and 4.3.16.
 */
export function writeZip(files: readonly Entry[]): Uint8Array {
  const names = files.map(({ name }) => encodeUtf8(name));
  const nameBytes = names.reduce((sum, name) => sum + name.length, 0);
  const dataBytes = files.reduce((sum, { bytes }) => sum + bytes.length, 0);
  const out = new Uint8Array(files.length * (30 + 46) + 2 * nameBytes + dataBytes + 22);
  const view = new DataView(out.buffer);
  const places: number[] = [];
  let at = 0;
  files.forEach((file, i) => {
    const name = names[i]!;
    places.push(at);
    view.setUint32(at, 0x04034b50, true);
    writeCommon(view, at + 4, file, name.length);
    out.set(name, at + 30);
    out.set(file.bytes, at + 30 + name.length);
    at += 30 + name.length + file.bytes.length;
  });
  const directory = at;
  files.forEach((file, i) => {
    const name = names[i]!;
    view.setUint32(at, 0x02014b50, true);
    view.setUint16(at + 4, 20, true);
    writeCommon(view, at + 6, file, name.length);
    view.setUint32(at + 42, places[i]!, true);
    out.set(name, at + 46);
    at += 46 + name.length;
  });
  view.setUint32(at, 0x06054b50, true);
  view.setUint16(at + 8, files.length, true);
  view.setUint16(at + 10, files.length, true);
  view.setUint32(at + 12, at - directory, true);
  view.setUint32(at + 16, directory, true);
  return out;
}
