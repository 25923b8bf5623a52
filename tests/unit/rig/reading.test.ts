import { describe, expect, it } from 'vitest';
import { DEMONSTRATIONS, type ReadRig, readRig, readRigText, STRIDER } from '../../../src/core/rig';

const changed = (change: (draft: never) => void): unknown => {
  const draft = structuredClone(STRIDER) as never;
  change(draft);
  return draft;
};
const sentenceOf = (outcome: ReadRig): string =>
  outcome.kind === 'refused'
    ? (outcome.refusals[0]?.sentence ?? '')
    : outcome.kind === 'newer'
      ? outcome.sentence
      : '';

describe('reading a rig', () => {
  it('takes every demonstration rig, and gives back what was written', () => {
    for (const { rig } of DEMONSTRATIONS) {
      const outcome = readRigText(JSON.stringify(rig));
      expect(outcome.kind, sentenceOf(outcome)).toBe('read');
      if (outcome.kind === 'read') expect(outcome.rig).toEqual(rig);
    }
  });

  // biome-ignore lint/suspicious/noExplicitAny: deliberately wrong documents
  const cases: readonly [string, (r: any) => void, RegExp][] = [
    [
      'a negative mass',
      (r) => {
        r.body.torso.mass = -1;
      },
      /body\.torso\.mass: Torso mass is −1\.00 kg; it must be a number from 0\.0100 kg to 5000 kg\./,
    ],
    [
      'text for a number',
      (r) => {
        r.array.gyros[0].speed = 'fast';
      },
      /array\.gyros\[0\]\.speed: Wheel speed is "fast"; it must be a number from 0 rpm to/,
    ],
    [
      'NaN',
      (r) => {
        r.body.foot.width = Number.NaN;
      },
      /body\.foot\.width: Foot width is .*NaN|body\.foot\.width: Foot width is –/,
    ],
    [
      'infinity',
      (r) => {
        r.payloads[0].mass = Number.POSITIVE_INFINITY;
      },
      /payloads\[0\]\.mass: Payload mass is ∞ kg/,
    ],
    [
      'a missing field',
      (r) => {
        delete r.footing.friction;
      },
      /footing\.friction.*(missing|nothing)/,
    ],
    [
      'a missing group',
      (r) => {
        delete r.sensing;
      },
      /sensing: missing/,
    ],
    [
      'an unknown kind',
      (r) => {
        r.body.kind = 'blimp';
      },
      /body\.kind: "blimp" where .*legged.* is expected/,
    ],
    [
      'an unknown material',
      (r) => {
        r.array.gyros[1].wheel.parts[0].material = 'cheese';
      },
      /material: "cheese" where/,
    ],
    [
      'an unknown field',
      (r) => {
        r.turbo = 1;
      },
      /turbo: there is no such field in a rig/,
    ],
    [
      'a fraction of a ball',
      (r) => {
        r.array.gyros[0].wheel.parts[0] = {
          kind: 'balls',
          count: 2.5,
          diameter: 0.01,
          pitchRadius: 0.04,
          material: 'steel 52100',
          offset: 0,
        };
      },
      /count: Number of balls is 2\.50; it must be a whole number/,
    ],
    [
      'a list that is too short',
      (r) => {
        r.array.gyros[0].position = [0, 0];
      },
      /array\.gyros\[0\]\.position/,
    ],
    [
      'another format',
      (r) => {
        r.format = 'something-else';
      },
      /this is not a rig file/,
    ],
    [
      'a version of text',
      (r) => {
        r.version = 'two';
      },
      /version: "two" where a whole number/,
    ],
    [
      'a newer version',
      (r) => {
        r.version = 99;
      },
      /version 99 by a newer Tiltwright/,
    ],
  ];
  it.each(cases)('refuses %s with a sentence that names the field', (_name, change, expected) => {
    expect(sentenceOf(readRig(changed(change)))).toMatch(expected);
  });

  it('refuses prototype keys at any depth', () => {
    for (const key of ['__proto__', 'constructor', 'prototype']) {
      const text = JSON.stringify(STRIDER).replace('"torso":{', `"torso":{"${key}":{"polluted":true},`);
      expect(sentenceOf(readRigText(text))).toMatch(
        /body\.torso\.(__proto__|constructor|prototype): this name is not allowed/,
      );
      expect(({} as { polluted?: boolean }).polluted).toBeUndefined();
    }
  });

  it('refuses what is not a rig at all', () => {
    expect(sentenceOf(readRigText(''))).toMatch(/not JSON/);
    expect(sentenceOf(readRigText('0'.repeat(50 * 1024 * 1024)))).toMatch(
      /50\.0 MB; a rig file is at most 8\.0 MB/,
    );
    expect(sentenceOf(readRigText('[1,2]'))).toMatch(/a list of 2 where a rig/);
    expect(sentenceOf(readRigText('null'))).toMatch(/null where a rig/);
    expect(sentenceOf(readRigText(`${'['.repeat(100000)}`))).toMatch(/not JSON/);
  });
});
