import Ajv from 'ajv';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { BENCH_BEARING, BENCH_MOTOR, BENCH_SERVO, BENCH_WHEEL } from '../../../src/core/rig';
import {
  dropPart,
  keepPart,
  mergeParts,
  NO_PARTS,
  PART_LISTS,
  type PartsFile,
  partsToText,
  readParts,
  readPartsText,
} from '../../../src/core/rig/partsFile';
import { partsJsonSchema } from '../../../tools/writeSchemas';

const FULL: PartsFile = {
  ...NO_PARTS,
  motors: [BENCH_MOTOR],
  servos: [BENCH_SERVO],
  wheels: [BENCH_WHEEL],
  bearings: [BENCH_BEARING],
};

const names = fc.string({ minLength: 1, maxLength: 80 }).filter((name) => name.trim().length > 0);
const someParts: fc.Arbitrary<PartsFile> = fc
  .record({
    motors: fc.uniqueArray(names, { maxLength: 4 }),
    servos: fc.uniqueArray(names, { maxLength: 4 }),
    wheels: fc.uniqueArray(names, { maxLength: 4 }),
    bearings: fc.uniqueArray(names, { maxLength: 4 }),
    resistance: fc.double({ min: 0.0005, max: 50, noNaN: true }),
    bore: fc.double({ min: 0.001, max: 0.3, noNaN: true }),
  })
  .map(({ motors, servos, wheels, bearings, resistance, bore }) => ({
    ...NO_PARTS,
    motors: motors.map((name) => ({ ...BENCH_MOTOR, name, resistance })),
    servos: servos.map((name) => ({ ...BENCH_SERVO, name })),
    wheels: wheels.map((name) => ({ ...BENCH_WHEEL, name })),
    bearings: bearings.map((name) => ({ ...BENCH_BEARING, name, bore })),
  }));

describe('a file of parts', () => {
  it('comes back as it went out', () => {
    fc.assert(
      fc.property(someParts, (parts) => {
        const read = readPartsText(partsToText(parts));
        expect(read).toEqual({ kind: 'read', parts });
      }),
      { seed: 20260101, numRuns: 60 },
    );
  });

  it('is taken by a general validator of the published schema just when it is read here', () => {
    const validate = new Ajv({ strict: false }).compile(partsJsonSchema());
    expect(validate(FULL)).toBe(true);
    const bad = structuredClone(FULL) as unknown as { motors: { resistance: number }[] };
    bad.motors[0]!.resistance = 0;
    expect(validate(bad)).toBe(false);
    expect(readParts(bad).kind).toBe('refused');
  });

  it('of which anything is spoilt is answered with sentences, and never with an error or half a list', () => {
    const paths: (readonly (string | number)[])[] = [];
    const walk = (value: unknown, path: readonly (string | number)[]): void => {
      if (path.length > 0) paths.push(path);
      if (typeof value !== 'object' || value === null) return;
      for (const [key, inner] of Object.entries(value)) {
        walk(inner, [...path, Array.isArray(value) ? Number(key) : key]);
      }
    };
    walk(FULL, []);
    // Nothing among these is allowed anywhere in a parts file.
    const wrong = fc.constantFrom<unknown>(
      null,
      true,
      -1e9,
      'fast'.repeat(40),
      Number.NaN,
      {},
      [[]],
      undefined,
    );
    fc.assert(
      fc.property(fc.constantFrom(...paths), wrong, (path, value) => {
        const spoilt = structuredClone(FULL) as unknown;
        let holder = spoilt as Record<string | number, unknown>;
        for (const key of path.slice(0, -1)) holder = holder[key] as Record<string | number, unknown>;
        const last = path.at(-1)!;
        holder[last] = value;
        const read = readParts(spoilt);
        expect(read.kind).toBe('refused');
        if (read.kind !== 'refused') return;
        expect(read.refusals.length).toBeGreaterThan(0);
        for (const { sentence } of read.refusals) expect(sentence).toMatch(/^.+: .+\.$/);
        expect(read.refusals.some(({ field }) => field.startsWith(String(path[0])))).toBe(true);
      }),
      { seed: 20260102, numRuns: 400 },
    );
  });

  it.each([
    ['no JSON', 'motor', /^The file is not JSON: /],
    ['a list', '[]', /holds a list of 0 where parts/],
    ['a rig', '{"format":"tiltwright-rig","version":1}', /"tiltwright-rig" where "tiltwright-parts"/],
    ['no version', '{"format":"tiltwright-parts"}', /^version: nothing where a whole number from 1 to 1/],
    [
      'a field it has not',
      JSON.stringify({ ...FULL, belts: [] }),
      /^belts: there is no such field in a parts file/,
    ],
    [
      'a value out of range',
      JSON.stringify({ ...FULL, bearings: [{ ...BENCH_BEARING, bore: 0.4 }] }),
      /^bearings\[0\]\.bore: Bearing bore is 400 mm; it must be a number from 1\.00 mm to 300 mm\.$/,
    ],
    [
      'two of one name',
      JSON.stringify({ ...FULL, motors: [BENCH_MOTOR, BENCH_MOTOR] }),
      /^motors\[1\]\.name: "Outrunner, 900 rpm\/V" names another of the motors too/,
    ],
    ['a poisoned name', '{"format":"tiltwright-parts","version":1,"__proto__":{}}', /^__proto__: this name/],
  ])('%s is refused in words', (_, text, expected) => {
    const read = readPartsText(text);
    expect(read.kind).toBe('refused');
    if (read.kind === 'refused') expect(read.refusals[0]!.sentence).toMatch(expected);
  });

  it('of a newer program is told apart from a bad one', () => {
    expect(readParts({ ...FULL, version: 2 })).toMatchObject({ kind: 'newer', version: 2 });
  });
});

describe('taking in parts of another', () => {
  it('loses nothing of either, gives each its own name, and does nothing the second time', () => {
    fc.assert(
      fc.property(someParts, someParts, (own, others) => {
        const { parts, added } = mergeParts(own, others);
        expect(readParts(parts).kind).toBe('read');
        let count = 0;
        for (const kind of PART_LISTS) {
          expect(parts[kind].slice(0, own[kind].length)).toEqual(own[kind]);
          for (const part of others[kind]) {
            const bare = { ...part, name: '' };
            expect(parts[kind].map((other) => ({ ...other, name: '' }))).toContainEqual(bare);
          }
          count += parts[kind].length - own[kind].length;
        }
        expect(added).toBe(count);
        expect(mergeParts(parts, others)).toEqual({ parts, added: 0 });
      }),
      { seed: 20260103, numRuns: 100 },
    );
  });

  it('keeps two parts of one name apart by a number', () => {
    const other = { ...NO_PARTS, motors: [{ ...BENCH_MOTOR, resistance: 0.2 }] };
    const { parts } = mergeParts(FULL, other);
    expect(parts.motors.map(({ name }) => name)).toEqual([BENCH_MOTOR.name, `${BENCH_MOTOR.name} (2)`]);
  });

  it('a kept part takes the place of its namesake, and a dropped one leaves the others', () => {
    const kept = keepPart(FULL, 'motors', { ...BENCH_MOTOR, resistance: 0.3 });
    expect(kept.motors).toEqual([{ ...BENCH_MOTOR, resistance: 0.3 }]);
    expect(dropPart(kept, 'motors', BENCH_MOTOR.name)).toEqual({ ...FULL, motors: [] });
  });
});
