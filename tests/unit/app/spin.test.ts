import 'fake-indexeddb/auto';
import { IDBFactory } from 'fake-indexeddb';
import { openDB } from 'idb';
import { beforeEach, describe, expect, it } from 'vitest';
import { openPartsStore } from '../../../src/app/parts/partsStore';
import { useDocument } from '../../../src/app/state/document';
import { startSpinning, useSpinAnswer } from '../../../src/app/stations/spin/spinAnswer';
import { chosenSpin, useSpinChoices } from '../../../src/app/stations/spin/spinChoices';
import { spinMark } from '../../../src/app/stations/spin/spinMark';
import { dropAt, movePart } from '../../../src/app/stations/spin/stackOrder';
import { outlineWheel, STRESS_BANDS, stressBand } from '../../../src/app/stations/spin/wheelOutline';
import { type SpinSheetOutcome, spinSheet } from '../../../src/core/physics';
import {
  BENCH_MOTOR,
  BENCH_WHEEL,
  DEMONSTRATIONS,
  type Gyro,
  keepPart,
  NO_PARTS,
  partsToText,
  type Rig,
  STRIDER,
} from '../../../src/core/rig';

const withGyros = (change: (gyro: Gyro) => Partial<Gyro>): Rig => ({
  ...STRIDER,
  array: { gyros: STRIDER.array.gyros.map((gyro) => ({ ...gyro, ...change(gyro) })) },
});

beforeEach(() => {
  globalThis.indexedDB = new IDBFactory();
  useSpinChoices.setState({ factor: 2, preload: 0, brakeCurrent: undefined });
});

describe('the order of a stack', () => {
  it('moves one part and keeps the rest as they stood', () => {
    expect(movePart(['a', 'b', 'c', 'd'], 0, 2)).toEqual(['b', 'c', 'a', 'd']);
    expect(movePart(['a', 'b', 'c', 'd'], 3, 0)).toEqual(['d', 'a', 'b', 'c']);
    expect(dropAt(['a', 'b', 'c'], 1)).toEqual(['a', 'c']);
  });
  it('stays where the place is not in it', () => {
    const list = ['a', 'b'];
    for (const [from, to] of [
      [0, 2],
      [-1, 0],
      [1, 1],
    ] as const)
      expect(movePart(list, from, to)).toBe(list);
  });
});

describe('the section of a wheel', () => {
  it('reaches as far as its parts do, balls and all', () => {
    const outline = outlineWheel([
      ...BENCH_WHEEL.parts,
      {
        kind: 'balls',
        count: 12,
        diameter: 0.02,
        pitchRadius: 0.038,
        material: 'steel 52100',
        offset: 0.004,
      },
      { kind: 'bolts', count: 6, mass: 0.002, pitchRadius: 0.02, offset: 0 },
    ]);
    expect(outline.shapes.map(({ kind }) => kind)).toEqual(['ring', 'ring', 'ring', 'ball', 'bolt']);
    expect(outline.outerRadius).toBe(0.048);
    expect(outline.boreRadius).toBe(0.003);
    expect([outline.low, outline.high]).toEqual([-0.009, 0.014]);
  });
  it('hatches closer the nearer a part comes to what is allowed, and says too much only past it', () => {
    expect([0, 0.24, 0.26, 0.51, 0.76, 1, 1.0001, 40].map(stressBand)).toEqual([0, 0, 1, 2, 3, 3, 4, 4]);
    expect(STRESS_BANDS.at(-1)?.words).toBe('too much');
  });
});

describe('the mark of the station', () => {
  const failsBySheet = (outcome: SpinSheetOutcome): boolean =>
    outcome.kind === 'refused' || outcome.sheet.gyros.some(({ failures }) => failures.length > 0);

  it('says of each rig what its whole sheet says', () => {
    const rigs = [
      ...DEMONSTRATIONS.map(({ rig }) => rig),
      withGyros(() => ({ speed: 8000 })),
      withGyros(({ motor }) => ({ motor: { ...motor, velocityConstant: 15 } })),
      withGyros(({ bearing }) => ({ bearing: { ...bearing, staticRating: 20 } })),
      withGyros(({ wheel }) => ({
        wheel: {
          ...wheel,
          parts: [{ ...wheel.parts[0]!, innerRadius: 0.9 } as (typeof wheel.parts)[number]],
        },
      })),
    ];
    const marks = rigs.map(spinMark);
    expect(marks).toEqual(rigs.map((rig) => (failsBySheet(spinSheet(rig, 0)) ? 'fails' : 'holds')));
    expect(new Set(marks)).toEqual(new Set(['holds', 'fails']));
  });
  it('is not yet for a rig without wheels, and follows the factor that was chosen', () => {
    expect(spinMark({ ...STRIDER, array: { gyros: [] } })).toBe('notYet');
    expect(spinMark(STRIDER)).toBe('holds');
    useSpinChoices.getState().choose({ factor: 20 });
    expect(spinMark(STRIDER)).toBe('fails');
  });
});

describe('the answer of the station', () => {
  const settle = () => new Promise((resolve) => setTimeout(resolve, 0));

  it('keeps to the newest rig and choice, skips those between, and leaves the last sheet when refused', async () => {
    useDocument.getState().open(STRIDER, { forgetsHistory: true });
    const asked: { rig: Rig; answer: (outcome: SpinSheetOutcome) => void }[] = [];
    let isClosed = false;
    const stop = startSpinning({
      spinSheet: (rig) => new Promise((answer) => asked.push({ rig, answer })),
      close: () => {
        isClosed = true;
      },
    });
    const faster = withGyros(() => ({ speed: 900 }));
    useDocument.getState().edit('Speed', () => withGyros(() => ({ speed: 870 })));
    useDocument.getState().edit('Speed', () => faster);
    expect(asked.map(({ rig }) => rig)).toEqual([STRIDER]);
    asked[0]!.answer(spinSheet(STRIDER, 0));
    await settle();
    expect(asked.map(({ rig }) => rig)).toEqual([STRIDER, faster]);
    asked[1]!.answer(spinSheet(faster, 0));
    await settle();
    const { sheet } = useSpinAnswer.getState();
    expect(sheet?.gyros[0]?.speed).toBe(900);
    useSpinChoices.getState().choose({ factor: 3 });
    expect(asked.length).toBe(3);
    asked[2]!.answer({ kind: 'refused', sentences: ['no'] });
    await settle();
    expect(useSpinAnswer.getState().outcome?.kind).toBe('refused');
    expect(useSpinAnswer.getState().sheet).toBe(sheet);
    stop();
    expect(isClosed).toBe(true);
    useSpinChoices.getState().choose({ factor: 4 });
    expect(asked.length).toBe(3);
  });

  it('hands on only what was chosen', () => {
    expect(chosenSpin(useSpinChoices.getState())).toEqual({ factor: 2, preload: 0 });
    useSpinChoices.getState().choose({ brakeCurrent: 3 });
    expect(chosenSpin(useSpinChoices.getState())).toEqual({ factor: 2, preload: 0, brakeCurrent: 3 });
  });

  it('crosses from a worker as it is', () => {
    const outcome = spinSheet(STRIDER, 2);
    expect(structuredClone(outcome)).toEqual(outcome);
  });
});

describe("parts of one's own in the browser", () => {
  const parts = keepPart(NO_PARTS, 'motors', BENCH_MOTOR);

  it('come back as they were kept; none are there at first', async () => {
    const store = openPartsStore();
    expect(await store.load()).toEqual({ kind: 'loaded', parts: NO_PARTS });
    expect(await store.save(parts)).toEqual({ kind: 'saved' });
    expect(await openPartsStore().load()).toEqual({ kind: 'loaded', parts });
  });

  it('fall back to the older text, and say why when neither can be read', async () => {
    const store = openPartsStore();
    await store.save(parts);
    const db = await openDB('tiltwright-parts', 1);
    await db.put('parts', { text: '{"format"', previous: partsToText(parts) }, 'own');
    expect(await store.load()).toEqual({ kind: 'loaded', parts });
    await db.put('parts', { text: '{"format"' }, 'own');
    db.close();
    const loaded = await store.load();
    expect(loaded).toMatchObject({
      kind: 'failed',
      sentence: expect.stringMatching(/cannot be read\. .*not JSON/),
    });
  });

  it('that no file could hold are refused, and what was kept stays', async () => {
    const store = openPartsStore();
    await store.save(parts);
    const bad = { ...parts, motors: [{ ...BENCH_MOTOR, resistance: 0 }] };
    expect(await store.save(bad)).toMatchObject({
      kind: 'failed',
      sentence: expect.stringMatching(/resistance/),
    });
    expect(await store.load()).toEqual({ kind: 'loaded', parts });
  });
});
