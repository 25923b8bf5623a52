import * as v from 'valibot';
import { formatQuantity } from '../units';
import { describeRange, quantityInfo } from './fields';
import { migrate } from './migrations';
import { RIG_FORMAT, RIG_VERSION, type Rig, RigSchema } from './schema';

/** One thing a document was refused for: where it stands, and a sentence for the person who wrote it. */
export interface Refusal {
  /** Path of the field, such as `array.gyros[0].speed`; empty for the document as a whole. */
  readonly field: string;
  readonly sentence: string;
}

export type ReadRig =
  | { readonly kind: 'read'; readonly rig: Rig; readonly migratedFrom?: number }
  | { readonly kind: 'newer'; readonly version: number; readonly sentence: string }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/** A rig file larger than this is not a rig file. */
export const LARGEST_RIG_FILE = 8 * 1024 * 1024;

const FORBIDDEN_KEYS = ['__proto__', 'constructor', 'prototype'];

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
  return { kind: 'refused', refusals: parsed.issues.slice(0, 20).map(explainIssue) };
}

/** Finds a key that must not occur, at any depth; returns its path. */
function findForbiddenKey(value: unknown, path: string, depth: number): string | undefined {
  if (typeof value !== 'object' || value === null) return undefined;
  if (depth > 40) return path;
  for (const key of Object.keys(value)) {
    const here = Array.isArray(value) ? `${path}[${key}]` : path === '' ? key : `${path}.${key}`;
    if (FORBIDDEN_KEYS.includes(key)) return here;
    const inner = findForbiddenKey((value as Record<string, unknown>)[key], here, depth + 1);
    if (inner !== undefined) return inner;
  }
  return undefined;
}

function explainIssue(issue: v.BaseIssue<unknown>): Refusal {
  const field = fieldPath(issue);
  const info = schemaInfoAt(issue);
  if (info) {
    const shown =
      typeof issue.input === 'number' ? formatQuantity(issue.input, info.dimension) : inWords(issue.input);
    const kind = info.dimension === 'count' ? 'a whole number' : 'a number';
    return {
      field,
      sentence: `${field}: ${info.label} is ${shown}; it must be ${kind} ${describeRange(info)}.`,
    };
  }
  if (issue.type === 'strict_object' && issue.expected === 'never') {
    return { field, sentence: `${field}: there is no such field in a rig.` };
  }
  if (issue.input === undefined) {
    return { field, sentence: `${field}: missing; ${expectation(issue)} is expected.` };
  }
  return { field, sentence: `${field}: ${inWords(issue.input)} where ${expectation(issue)} is expected.` };
}

const expectation = (issue: v.BaseIssue<unknown>): string =>
  (issue.expected ?? issue.message)
    .replaceAll('"', '')
    .replace(/^Object$/, 'a group of fields')
    .replaceAll(' | ', ' or ');

function fieldPath(issue: v.BaseIssue<unknown>): string {
  let path = '';
  for (const item of issue.path ?? []) {
    path +=
      typeof item.key === 'number'
        ? `[${item.key}]`
        : path === ''
          ? String(item.key)
          : `.${String(item.key)}`;
  }
  return path;
}

/** Walks the schema along the issue's path to the quantity that was refused, if it was one. */
function schemaInfoAt(issue: v.BaseIssue<unknown>) {
  const steps = (issue.path ?? []).map((item) => ({ key: item.key, holder: item.input }));
  const schema = schemaAt(RigSchema, steps);
  return schema ? quantityInfo(schema) : undefined;
}

interface Step {
  readonly key: unknown;
  /** The value that holds the key: names the branch of a union. */
  readonly holder: unknown;
}

/** The schema found by following keys down; undefined where the path leaves the document. */
export function schemaAt(root: v.GenericSchema, steps: readonly Step[]): v.GenericSchema | undefined {
  let schema: v.GenericSchema | undefined = root;
  for (const { key, holder } of steps) {
    schema = childSchema(schema, key, holder);
    if (!schema) return undefined;
  }
  return schema;
}

interface AnySchema {
  readonly entries?: Readonly<Record<string, v.GenericSchema>>;
  readonly items?: readonly v.GenericSchema[];
  readonly item?: v.GenericSchema;
  readonly key?: string;
  readonly options?: readonly AnySchema[];
}

function childSchema(schema: v.GenericSchema, key: unknown, holder: unknown): v.GenericSchema | undefined {
  let node = schema as unknown as AnySchema;
  if (node.options && node.key !== undefined) {
    const tag = node.key;
    const wanted = (holder as Record<string, unknown> | null)?.[tag];
    const branch = node.options.find((option) => {
      const literal = option.entries?.[tag] as unknown as { literal?: unknown } | undefined;
      return literal?.literal === wanted;
    });
    if (!branch) return undefined;
    node = branch;
  }
  if (node.entries && typeof key === 'string')
    return Object.hasOwn(node.entries, key) ? node.entries[key] : undefined;
  if (node.items && typeof key === 'number') return node.items[key];
  return typeof key === 'number' ? node.item : undefined;
}

function inWords(value: unknown): string {
  if (value === undefined) return 'nothing';
  if (value === null) return 'null';
  if (typeof value === 'string') return `"${value.length > 40 ? `${value.slice(0, 40)}…` : value}"`;
  if (typeof value === 'number') return Number.isNaN(value) ? 'not a number (NaN)' : String(value);
  if (Array.isArray(value)) return `a list of ${value.length}`;
  return typeof value === 'object' ? 'a group of fields' : String(value);
}

const formatSize = (bytes: number): string => `${(bytes / 1024 / 1024).toFixed(1)} MB`;
