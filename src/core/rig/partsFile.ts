/** Parts of the user's own, shared as a file: motors, servos, wheels and bearings, without the rig they were made for. */
import * as v from 'valibot';
import type { DeepReadonly } from './fields';
import { BearingSchema, MotorSchema, ServoSchema, WheelSchema } from './parts';
import { explainIssue, findForbiddenKey, formatSize, inWords, type Refusal } from './refusals';

export const PARTS_FORMAT = 'tiltwright-parts';
export const PARTS_VERSION = 1;

/** A parts file larger than this is not a parts file. */
export const LARGEST_PARTS_FILE = 4 * 1024 * 1024;

const MOST_OF_A_KIND = 500;

const list = <S extends v.GenericSchema>(schema: S) => v.pipe(v.array(schema), v.maxLength(MOST_OF_A_KIND));

export const PartsSchema = v.strictObject({
  format: v.literal(PARTS_FORMAT),
  version: v.literal(PARTS_VERSION),
  motors: list(MotorSchema),
  servos: list(ServoSchema),
  wheels: list(WheelSchema),
  bearings: list(BearingSchema),
});

export const PART_LISTS = ['motors', 'servos', 'wheels', 'bearings'] as const;
export type PartList = (typeof PART_LISTS)[number];

export type PartsFile = DeepReadonly<v.InferOutput<typeof PartsSchema>>;
export type PartOf<L extends PartList> = PartsFile[L][number];

export const NO_PARTS: PartsFile = {
  format: PARTS_FORMAT,
  version: PARTS_VERSION,
  motors: [],
  servos: [],
  wheels: [],
  bearings: [],
};

export type ReadParts =
  | { readonly kind: 'read'; readonly parts: PartsFile }
  | { readonly kind: 'newer'; readonly version: number; readonly sentence: string }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

const refuse = (field: string, sentence: string): ReadParts => ({
  kind: 'refused',
  refusals: [{ field, sentence }],
});

/** Two parts of one kind and name in one file: only one of them could be kept. */
function findNamesakes(parts: PartsFile): readonly Refusal[] {
  return PART_LISTS.flatMap((kind) => {
    const seen = new Set<string>();
    return parts[kind].flatMap(({ name }, index): readonly Refusal[] => {
      if (!seen.has(name)) {
        seen.add(name);
        return [];
      }
      const field = `${kind}[${index}].name`;
      const sentence = `${field}: "${name}" names another of the ${kind} too; each needs a name of its own.`;
      return [{ field, sentence }];
    });
  });
}

/**
 * Reads parts from the text of a file. Never throws; nothing is half-read.
 *
 * @returns the parts, or every reason why not, each naming the field, the value, the allowed range and the unit
 */
export function readPartsText(text: string): ReadParts {
  if (text.length > LARGEST_PARTS_FILE) {
    const [is, most] = [formatSize(text.length), formatSize(LARGEST_PARTS_FILE)];
    return refuse('', `The file is ${is}; a parts file is at most ${most}.`);
  }
  let value: unknown;
  try {
    value = JSON.parse(text.startsWith('\uFEFF') ? text.slice(1) : text);
  } catch (error) {
    const reason = error instanceof Error ? error.message : 'it cannot be read';
    return refuse('', `The file is not JSON: ${reason}.`);
  }
  return readParts(value);
}

/** Reads parts from a parsed JSON value; see `readPartsText`. */
export function readParts(value: unknown): ReadParts {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) {
    return refuse('', `The file holds ${inWords(value)} where parts (a JSON object) are expected.`);
  }
  const forbidden = findForbiddenKey(value, '', 0);
  if (forbidden !== undefined) {
    return refuse(forbidden, `${forbidden}: this name is not allowed in a parts file.`);
  }
  const { format, version } = value as { format?: unknown; version?: unknown };
  if (format !== PARTS_FORMAT) {
    return refuse(
      'format',
      `format: ${inWords(format)} where "${PARTS_FORMAT}" is expected; this is not a parts file.`,
    );
  }
  if (typeof version !== 'number' || !Number.isInteger(version) || version < 1) {
    return refuse(
      'version',
      `version: ${inWords(version)} where a whole number from 1 to ${PARTS_VERSION} is expected.`,
    );
  }
  if (version > PARTS_VERSION) {
    const sentence = `version: these parts were saved as version ${version} by a newer Tiltwright; this one reads versions 1 to ${PARTS_VERSION}. Update the app to open them.`;
    return { kind: 'newer', version, sentence };
  }
  const parsed = v.safeParse(PartsSchema, value);
  if (!parsed.success) {
    const refusals = parsed.issues
      .slice(0, 20)
      .map((issue) => explainIssue(PartsSchema, 'a parts file', issue));
    return { kind: 'refused', refusals };
  }
  const parts = parsed.output as PartsFile;
  const namesakes = findNamesakes(parts);
  return namesakes.length > 0 ? { kind: 'refused', refusals: namesakes } : { kind: 'read', parts };
}

export const partsToText = (parts: PartsFile): string => `${JSON.stringify(parts, undefined, 2)}\n`;

/** A part kept under its name; one of that name gives way, all others stay. */
export function keepPart<L extends PartList>(parts: PartsFile, kind: L, part: PartOf<L>): PartsFile {
  const others = (parts[kind] as readonly PartOf<L>[]).filter(({ name }) => name !== part.name);
  return { ...parts, [kind]: [...others, part] };
}

export const dropPart = (parts: PartsFile, kind: PartList, name: string): PartsFile => ({
  ...parts,
  [kind]: parts[kind].filter((part) => part.name !== name),
});

const LONGEST_NAME = 80;

/** The same name, or that name with a number behind it. */
const isNumbered = (name: string, plain: string): boolean =>
  name === plain || (/ \(\d+\)$/.test(name) && plain.startsWith(name.replace(/ \(\d+\)$/, '')));

/** The name with the first number that makes it free. */
function freeName(name: string, isTaken: (name: string) => boolean): string {
  for (let n = 2; ; n++) {
    const ending = ` (${n})`;
    const candidate = `${name.slice(0, LONGEST_NAME - ending.length)}${ending}`;
    if (!isTaken(candidate)) return candidate;
  }
}

/**
 * Takes another's parts in beside one's own. Nothing of either is lost: a part that is here already comes once, and one
 * that shares only its name is taken in under that name with a number.
 *
 * @returns all parts, and how many are new
 */
export function mergeParts(
  own: PartsFile,
  others: PartsFile,
): { readonly parts: PartsFile; readonly added: number } {
  let parts = own;
  let added = 0;
  for (const kind of PART_LISTS) {
    for (const part of others[kind]) {
      const isTaken = (name: string): boolean => parts[kind].some((other) => other.name === name);
      // The same file taken in twice must not give its numbered parts a second number.
      const isHere = parts[kind].some(
        (other) => isNumbered(other.name, part.name) && isSamePart({ ...other, name: part.name }, part),
      );
      if (isHere) continue;
      const name = isTaken(part.name) ? freeName(part.name, isTaken) : part.name;
      parts = { ...parts, [kind]: [...parts[kind], { ...part, name }] };
      added += 1;
    }
  }
  return { parts, added };
}

/** Alike in all they hold, whatever the order of their fields. */
function isSamePart(a: unknown, b: unknown): boolean {
  if (typeof a !== 'object' || a === null || typeof b !== 'object' || b === null) return Object.is(a, b);
  const keys = Object.keys(a);
  return (
    keys.length === Object.keys(b).length &&
    keys.every((key) => isSamePart((a as Record<string, unknown>)[key], (b as Record<string, unknown>)[key]))
  );
}
