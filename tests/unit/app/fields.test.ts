import { describe, expect, it } from 'vitest';
import {
  DISTURBANCE_KINDS,
  kindDefault,
  newDisturbance,
  newWheelPart,
} from '../../../src/app/fields/kindDefaults';
import { countLikeGyros, writeToLikeGyros } from '../../../src/app/fields/likeGyros';
import { type RigPath, readAt, shapeAt, writeAt } from '../../../src/app/fields/rigPath';
import { roundDown125, showNumber, stepFrom, stepsFor, unitThatFits } from '../../../src/app/fields/stepSize';
import { moveArray, placeOfArray, spreadArray } from '../../../src/app/stations/assemble/arrayPlace';
import { DEMONSTRATIONS, type Rig, readRig, SKIFF, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const isReadable = (rig: Rig): boolean => readRig(JSON.parse(JSON.stringify(rig))).kind === 'read';

describe('paths into the rig', () => {
  it('reads, and writes without touching what stands beside', () => {
    const path = ['array', 'gyros', 1, 'wheel', 'parts', 0, 'width'];
    const changed = writeAt(STRIDER, path, 0.02);
    expect(readAt(changed, path)).toBe(0.02);
    expect(readAt(STRIDER, path)).toBe(0.014);
    expect(changed.body).toBe(STRIDER.body);
    expect(changed.array.gyros[0]).toBe(STRIDER.array.gyros[0]);
  });

  it('gives the same rig back when the value is what it was', () => {
    expect(
      writeAt(
        STRIDER,
        ['body', 'torso', 'mass'],
        STRIDER.body.kind === 'legged' ? STRIDER.body.torso.mass : 0,
      ),
    ).toBe(STRIDER);
  });

  it('knows label, dimension and range of every number of the shipped rigs', () => {
    const unlabelled: string[] = [];
    const walk = (rig: Rig, path: RigPath, value: unknown): void => {
      if (typeof value === 'number') {
        const shape = shapeAt(rig, path);
        const isNamed = shape.kind === 'choice' || (shape.kind === 'quantity' && shape.info.label !== '');
        if (!isNamed && path.length > 1) unlabelled.push(path.join('.'));
      } else if (Array.isArray(value)) {
        for (const [index, inner] of value.entries()) walk(rig, [...path, index], inner);
      } else if (typeof value === 'object' && value !== null) {
        for (const [key, inner] of Object.entries(value)) walk(rig, [...path, key], inner);
      }
    };
    for (const { rig } of DEMONSTRATIONS) walk(rig, [], rig);
    expect(unlabelled).toEqual([]);
  });

  it('follows the branch of a union that the rig has taken', () => {
    const section = shapeAt(SKIFF, ['body', 'section']);
    expect(section).toMatchObject({ kind: 'variant', options: ['deadrise', 'bilge'] });
    expect(shapeAt(SKIFF, ['body', 'torso']).kind).toBe('other');
  });
});

describe('gyros that are alike', () => {
  it('change together where they were the same, and only there', () => {
    const one = writeAt(STRIDER, ['array', 'gyros', 1, 'speed'], 700);
    expect(countLikeGyros(one, 0, ['speed'])).toBe(1);
    const changed = writeToLikeGyros(one, 0, ['speed'], 900);
    expect(changed.array.gyros.map((gyro) => gyro.speed)).toEqual([900, 700]);
    const both = writeToLikeGyros(STRIDER, 0, ['wheel', 'parts', 0, 'width'], 0.02);
    expect(
      both.array.gyros.map((gyro) =>
        readAt(both, ['array', 'gyros', both.array.gyros.indexOf(gyro), 'wheel', 'parts', 0, 'width']),
      ),
    ).toEqual([0.02, 0.02]);
  });

  it('move and spread as one', () => {
    const moved = moveArray(STRIDER, 2, 0.7);
    expectClose(
      moved.array.gyros.map((gyro) => gyro.position[2]),
      [0.7, 0.7],
      { abs: 1e-12 },
    ); // measured 0
    const spread = spreadArray(moved, 0.2);
    expectClose(placeOfArray(spread.array.gyros)?.spacing ?? 0, 0.2, { rel: 1e-12 }); // measured 0
    expectClose([...(placeOfArray(spread.array.gyros)?.centre ?? [])], [0, 0, 0.7], { abs: 1e-12 }); // measured 0
  });
});

describe('values a choice starts with', () => {
  it('are readable wherever they are offered', () => {
    for (const { rig } of DEMONSTRATIONS) {
      for (const path of [
        ['footing'],
        ['body', 'section'],
        ['body', 'keel'],
        ['array', 'gyros', 1, 'drive'],
        ['array', 'gyros', 0, 'spin'],
        ['array', 'gyros', 0, 'housing'],
        ['jobs', 'gait'],
        ['sensing', 'estimator'],
      ]) {
        const shape = shapeAt(rig, path);
        if (shape.kind !== 'variant') continue;
        for (const kind of shape.options) {
          const value = kindDefault(rig, path, kind);
          if (value !== undefined)
            expect(isReadable(writeAt(rig, path, value)), `${path.join('.')} ${kind}`).toBe(true);
        }
      }
      const sequence = DISTURBANCE_KINDS.map((kind) => newDisturbance(kind, rig));
      expect(isReadable({ ...rig, jobs: { ...rig.jobs, sequence } })).toBe(true);
      const parts = (['disc', 'rim', 'hub', 'balls', 'bolts'] as const).map((kind) =>
        newWheelPart(kind, 0.05),
      );
      expect(isReadable(writeAt(rig, ['array', 'gyros', 0, 'wheel', 'parts'], parts))).toBe(true);
    }
  });
});

describe('steps of a number', () => {
  const length = { dimension: 'length', min: 0.002, max: 2, label: 'Foot width' } as const;

  it('are one, two or five times a power of ten', () => {
    expect([0.99, 1, 3, 7, 20].map(roundDown125)).toEqual([0.5, 1, 2, 5, 20]);
    expect(roundDown125(0)).toBe(0);
    expect(stepsFor(length, 56, 'mm')).toEqual({ button: 2, drag: 0.2 });
  });

  it('go to the next round number from a crooked one', () => {
    expect(stepFrom(57.3, 2, 1)).toBe(58);
    expect(stepFrom(57.3, 2, -1)).toBe(56);
    expect(stepFrom(58, 2, -1)).toBe(56);
    expect(stepFrom(0.3, 0.1, 1)).toBe(0.4);
  });

  it('count whole things by whole steps', () => {
    expect(stepsFor({ dimension: 'count', min: 2, max: 400, label: 'Balls' }, 12, undefined)).toEqual({
      button: 1,
      drag: 1,
    });
  });

  it('show four digits without trailing zeros', () => {
    expect([120, 2.45, -45, 0.0006].map(showNumber)).toEqual(['120', '2.45', '−45', '0.0006']);
  });

  it('take a unit in which the number fits, unless one was chosen', () => {
    expect(unitThatFits('inertia', 0.00016, undefined).symbol).toBe('g·m²');
    expect(unitThatFits('inertia', 0.00016, 'kg·m²').symbol).toBe('kg·m²');
    expect(unitThatFits('length', 0.13, undefined).symbol).toBe('mm');
  });
});
