import type { Rig } from '../rig';
import { sha256 } from './checksum';
import { encodeUtf8 } from './text';

/** JSON with the keys of every object in order of their code units, and no spaces. */
function canonicalJson(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(canonicalJson).join(',')}]`;
  if (typeof value !== 'object' || value === null) return JSON.stringify(value);
  const entries = Object.entries(value)
    .filter(([, item]) => item !== undefined)
    .sort(([a], [b]) => (a < b ? -1 : 1));
  return `{${entries.map(([key, item]) => `${JSON.stringify(key)}:${canonicalJson(item)}`).join(',')}}`;
}

/**
 * The rig as the one text its hash is taken of: the same rig gives the same bytes whatever file it came from.
 *
 * Source: the form of RFC 8785 (JSON canonicalization), which sorts keys and prints numbers as JavaScript does.
 */
export const canonicalRigText = (rig: Rig): string => canonicalJson(rig);

/** SHA-256 of the canonical text in UTF-8: what a sheet names as the rig it is of. */
export const hashRig = (rig: Rig): string => sha256(encodeUtf8(canonicalRigText(rig)));
