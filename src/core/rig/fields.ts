import * as v from 'valibot';
import { type Dimension, formatQuantity } from '../units';

/** What a screen must know to offer a number: what it measures, its range, and the step of its buttons (SI). */
export interface QuantityInfo {
  readonly dimension: Dimension;
  readonly min: number;
  readonly max: number;
  readonly label: string;
}

const isQuantityInfo = (value: unknown): value is QuantityInfo =>
  typeof value === 'object' && value !== null && 'dimension' in value && 'min' in value && 'label' in value;

/** A finite number in SI with a range; carries its own label and dimension so that a field can be drawn from it. */
export const quantity = (label: string, dimension: Dimension, min: number, max: number) =>
  v.pipe(
    v.number(),
    v.minValue(min),
    v.maxValue(max),
    v.title(label),
    v.metadata({ dimension, min, max, label } satisfies QuantityInfo),
  );

export const whole = (label: string, min: number, max: number) =>
  v.pipe(
    v.number(),
    v.integer(),
    v.minValue(min),
    v.maxValue(max),
    v.title(label),
    v.metadata({ dimension: 'count', min, max, label } satisfies QuantityInfo),
  );

export const position = (label: string) => {
  const along = (axis: string) => quantity(`${label} ${axis}`, 'length', -50, 50);
  return v.strictTuple([along('x, forward'), along('y, left'), along('z, up')]);
};

/** A direction: any length, made a unit vector when compiled. */
export const direction = (label: string) => {
  const along = (axis: string) => quantity(`${label} ${axis}`, 'ratio', -1, 1);
  return v.strictTuple([along('x'), along('y'), along('z')]);
};

export const name = v.pipe(v.string(), v.minLength(1), v.maxLength(80));

/** The label, dimension and range of a schema made by `quantity` or `whole`; undefined for any other. */
export function quantityInfo(schema: v.GenericSchema): QuantityInfo | undefined {
  const metadata = v.getMetadata(schema as never) as unknown;
  return isQuantityInfo(metadata) ? metadata : undefined;
}

/** Allowed range of a quantity as words, in the usual unit. */
export const describeRange = (info: QuantityInfo): string =>
  `from ${formatQuantity(info.min, info.dimension)} to ${formatQuantity(info.max, info.dimension)}`;

/** Documents are never changed in place: every exported document type is read-only all the way down. */
export type DeepReadonly<T> = T extends string | number | boolean
  ? T
  : { readonly [K in keyof T]: DeepReadonly<T[K]> };

/** The document type a schema accepts. */
export type Document<S extends v.GenericSchema> = DeepReadonly<v.InferOutput<S>>;
