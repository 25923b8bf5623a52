import * as v from 'valibot';
import { migrate } from './migrations';
import { explainIssue, findForbiddenKey, formatSize, inWords, type Refusal } from './refusals';
import { RIG_FORMAT, RIG_VERSION, type Rig, RigSchema } from './schema';

export type ReadRig =
  | { readonly kind: 'read'; readonly rig: Rig; readonly migratedFrom?: number }
  | { readonly kind: 'newer'; readonly version: number; readonly sentence: string }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/** A rig file larger than this is not a rig file. */
export const LARGEST_RIG_FILE = 8 * 1024 * 1024;

const refuse = (field: string, sentence: string): ReadRig => ({
  kind: 'refused',
  refusals: [{ field, sentence }],
});

/**
 * Reads a rig from the text of a file. Never throws; nothing is half-read.
 *
 * @param text  the file's whole text
 * @returns the rig, or every reason why not, each naming the field, the value, the allowed range and the unit
 */
export function readRigText(text: string): ReadRig {
  if (text.length > LARGEST_RIG_FILE) {
    return refuse(
      '',
      `The file is ${formatSize(text.length)}; a rig file is at most ${formatSize(LARGEST_RIG_FILE)}.`,
    );
  }
  let value: unknown;
  try {
    value = JSON.parse(text.startsWith('﻿') ? text.slice(1) : text);
  } catch (error) {
    return refuse(
      '',
      `The file is not JSON: ${error instanceof Error ? error.message : 'it cannot be read'}.`,
    );
  }
  return readRig(value);
}

/** Reads a rig from a parsed JSON value; see `readRigText`. */
export function readRig(value: unknown): ReadRig {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) {
    return refuse('', `The file holds ${inWords(value)} where a rig (a JSON object) is expected.`);
  }
  const forbidden = findForbiddenKey(value, '', 0);
  if (forbidden !== undefined) return refuse(forbidden, `${forbidden}: this name is not allowed in a rig.`);
  const header = value as { format?: unknown; version?: unknown };
  if (header.format !== RIG_FORMAT) {
    return refuse(
      'format',
      `format: ${inWords(header.format)} where "${RIG_FORMAT}" is expected; this is not a rig file.`,
    );
  }
  const version = header.version;
  if (typeof version !== 'number' || !Number.isInteger(version) || version < 1) {
    return refuse(
      'version',
      `version: ${inWords(version)} where a whole number from 1 to ${RIG_VERSION} is expected.`,
    );
  }
  if (version > RIG_VERSION) {
    return {
      kind: 'newer',
      version,
      sentence: `version: this rig was saved as version ${version} by a newer Tiltwright; this one reads versions 1 to ${RIG_VERSION}. Update the app to open it.`,
    };
  }
  const parsed = v.safeParse(RigSchema, migrate(value as Record<string, unknown>, version));
  if (parsed.success) {
    const rig = parsed.output as Rig;
    return version === RIG_VERSION ? { kind: 'read', rig } : { kind: 'read', rig, migratedFrom: version };
  }
  return {
    kind: 'refused',
    refusals: parsed.issues.slice(0, 20).map((issue) => explainIssue(RigSchema, 'a rig', issue)),
  };
}
