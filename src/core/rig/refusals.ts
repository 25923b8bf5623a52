/** What a reader says of a document that will not do: each fault with its field, value, range and unit. */
import type * as v from 'valibot';
import { formatQuantity } from '../units';
import { describeRange, quantityInfo } from './fields';

/** One thing a document was refused for: where it stands, and a sentence for the person who wrote it. */
export interface Refusal {
  /** Path of the field, such as `array.gyros[0].speed`; empty for the document as a whole. */
  readonly field: string;
  readonly sentence: string;
}

const FORBIDDEN_KEYS = ['__proto__', 'constructor', 'prototype'];

/** Finds a key that must not occur, at any depth; returns its path. */
export function findForbiddenKey(value: unknown, path: string, depth: number): string | undefined {
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

/**
 * The sentence for one thing a schema refused.
 *
 * @param root  the schema that refused it
 * @param of    what the document is called, such as `a rig`
 */
export function explainIssue(root: v.GenericSchema, of: string, issue: v.BaseIssue<unknown>): Refusal {
  const field = fieldPath(issue);
  const info = schemaInfoAt(root, issue);
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
    return { field, sentence: `${field}: there is no such field in ${of}.` };
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
function schemaInfoAt(root: v.GenericSchema, issue: v.BaseIssue<unknown>) {
  const steps = (issue.path ?? []).map((item) => ({ key: item.key, holder: item.input }));
  const schema = schemaAt(root, steps);
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

export function inWords(value: unknown): string {
  if (value === undefined) return 'nothing';
  if (value === null) return 'null';
  if (typeof value === 'string') return `"${value.length > 40 ? `${value.slice(0, 40)}…` : value}"`;
  if (typeof value === 'number') return Number.isNaN(value) ? 'not a number (NaN)' : String(value);
  if (Array.isArray(value)) return `a list of ${value.length}`;
  return typeof value === 'object' ? 'a group of fields' : String(value);
}

export const formatSize = (bytes: number): string => `${(bytes / 1024 / 1024).toFixed(1)} MB`;
