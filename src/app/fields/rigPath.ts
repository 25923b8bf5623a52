/** Reading and writing one place of the rig by its path, and what the schema says of that place. */
import type * as v from 'valibot';
import { type QuantityInfo, quantityInfo, type Rig, RigSchema, schemaAt } from '../../core/rig';

export type RigPath = readonly (string | number)[];

type Holder = Readonly<Record<string | number, unknown>>;

/** The value at a path; undefined where the path leaves the document. */
export function readAt(rig: Rig, path: RigPath): unknown {
  let value: unknown = rig;
  for (const key of path) {
    if (typeof value !== 'object' || value === null) return undefined;
    value = (value as Holder)[key];
  }
  return value;
}

/** The rig with another value at a path; everything beside the path is shared with the old one. */
export function writeAt(rig: Rig, path: RigPath, value: unknown): Rig {
  return writeInto(rig, path, 0, value) as Rig;
}

function writeInto(holder: unknown, path: RigPath, at: number, value: unknown): unknown {
  if (at === path.length) return value;
  const key = path[at] as string | number;
  const inner = writeInto((holder as Holder)[key], path, at + 1, value);
  if (Object.is(inner, (holder as Holder)[key])) return holder;
  if (Array.isArray(holder)) return holder.map((item, index) => (index === key ? inner : item));
  return { ...(holder as Holder), [key]: inner };
}

/** What a place of the rig is made of, as far as a screen must know it. */
export type Shape =
  | { readonly kind: 'quantity'; readonly info: QuantityInfo }
  | { readonly kind: 'choice'; readonly options: readonly (string | number)[] }
  | { readonly kind: 'text'; readonly longest: number }
  | { readonly kind: 'group'; readonly keys: readonly string[] }
  | { readonly kind: 'tuple'; readonly length: number }
  | { readonly kind: 'variant'; readonly options: readonly string[]; readonly keys: readonly string[] }
  | { readonly kind: 'other' };

interface SchemaNode {
  readonly type: string;
  readonly entries?: Readonly<Record<string, { readonly literal?: unknown }>>;
  readonly items?: readonly unknown[];
  readonly options?: readonly unknown[];
}

const LONGEST_NAME = 80;

/** What the schema says of a place, following the branch of each union that the rig itself has taken. */
export function shapeAt(rig: Rig, path: RigPath): Shape {
  const steps: { key: string | number; holder: unknown }[] = [];
  let holder: unknown = rig;
  for (const key of path) {
    steps.push({ key, holder });
    holder = (holder as Holder | undefined)?.[key];
  }
  const schema = schemaAt(RigSchema, steps);
  return schema ? shapeOf(schema, holder) : { kind: 'other' };
}

function shapeOf(schema: v.GenericSchema, value: unknown): Shape {
  const info = quantityInfo(schema);
  if (info) return { kind: 'quantity', info };
  const node = schema as unknown as SchemaNode;
  if (node.type === 'picklist')
    return { kind: 'choice', options: node.options as readonly (string | number)[] };
  if (node.type === 'string') return { kind: 'text', longest: LONGEST_NAME };
  if (node.type === 'strict_tuple') return { kind: 'tuple', length: node.items?.length ?? 0 };
  if (node.type === 'variant') {
    const branches = node.options as readonly SchemaNode[];
    const options = branches.map((branch) => String(branch.entries?.kind?.literal));
    const taken = branches[options.indexOf(String((value as Holder | undefined)?.kind))];
    return { kind: 'variant', options, keys: keysOf(taken) };
  }
  if (node.entries) return { kind: 'group', keys: keysOf(node) };
  return { kind: 'other' };
}

const keysOf = (node: SchemaNode | undefined): readonly string[] =>
  Object.keys(node?.entries ?? {}).filter((key) => key !== 'kind');
