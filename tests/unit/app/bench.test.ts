import { describe, expect, it } from 'vitest';
import { buildBalanceSheet, isFilled, useBalanceForm } from '../../../src/app/stations/bench/balanceForm';
import { useFindings } from '../../../src/app/stations/bench/benchFindings';
import { benchMark } from '../../../src/app/stations/bench/benchMark';
import { buildRequest, readTotals, useIdentifyForm } from '../../../src/app/stations/bench/identifyForm';
import { offerPatch } from '../../../src/app/stations/bench/patching';
import { predictQuantity } from '../../../src/app/stations/bench/prediction';
import { balanceWheel, type Identified, type Patch } from '../../../src/core/bench';
import { SKIFF, STRIDER } from '../../../src/core/rig';
import { createEvaluationWork, evaluate } from '../../../src/core/trial';
import { reduceCurve } from '../../../src/workers/curveView';
import { expectClose } from '../../support/closeTo';

const ALL_ON = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true };

describe('a curve reduced for a plot', () => {
  const n = 1_000_000;
  const time = Float64Array.from({ length: n }, (_, i) => i * 1e-3);
  const values = time.map((t) => Math.sin(t));
  values[345_678] = 9;
  values[765_432] = -7;
  values[500_000] = Number.NaN;
  it('keeps spikes of one reading and gaps, in order, within five points a pixel', () => {
    const view = reduceCurve({ time, values }, 0, 1000, 300);
    expect(view.time.length).toBeLessThanOrEqual(1500);
    expect(view.values).toContain(9);
    expect(view.values).toContain(-7);
    expect(view.values.some(Number.isNaN)).toBe(true);
    for (let i = 1; i < view.time.length; i++)
      expect(view.time[i] as number).toBeGreaterThan(view.time[i - 1] as number);
    for (let i = 0; i < view.time.length; i++)
      expect(Object.is(view.values[i], values[Math.round((view.time[i] as number) * 1e3)])).toBe(true);
  });
  it('hands a short stretch over as it is, with one reading beyond each end', () => {
    const view = reduceCurve({ time, values }, 10, 10.1, 300);
    expect(view.isWhole).toBe(true);
    expect(view.time[0]).toBe(time[9999]);
    expect(view.time.at(-1)).toBe(time[10_101]);
  });
  it('of nothing makes nothing', () => {
    expect(
      reduceCurve({ time: new Float64Array(0), values: new Float64Array(0) }, 0, 1, 10).time.length,
    ).toBe(0);
  });
});

describe('the prediction of a logged quantity', () => {
  const evaluation = evaluate(
    SKIFF,
    ALL_ON,
    createEvaluationWork(() => 0),
  );
  if (evaluation.kind === 'refused') throw new Error('the demonstration is refused');
  const { motion } = evaluation;
  it('reads roll from the attitude and the roll rate as its slope', () => {
    const roll = predictQuantity(motion, 'roll', 0, undefined);
    const rate = predictQuantity(motion, 'rollRate', 0, undefined);
    if (!roll || !rate) throw new Error('no prediction');
    const k = 300;
    const half = 0.5 * (motion.pose[7 * k + 4] as number);
    expect(half).not.toBe(0);
    // A body that only rolls has the quaternion cos, sin of half its roll.
    const x = motion.pose[7 * k + 4] as number;
    expectClose([roll.values[k] as number], [2 * Math.asin(x)], { abs: 1e-9 });
    let sum = roll.values[0] as number;
    for (let i = 1; i <= k; i++)
      sum +=
        0.5 *
        ((rate.values[i] as number) + (rate.values[i - 1] as number)) *
        ((roll.time[i] as number) - (roll.time[i - 1] as number));
    expectClose([sum], [roll.values[k] as number], { abs: 2e-3 });
  });
  it('says nothing of what the preview does not know', () => {
    expect(predictQuantity(motion, 'motorCurrent', 0, 900)).toBeUndefined();
    expect(predictQuantity(motion, 'tilt', 9, 900)).toBeUndefined();
    expect(predictQuantity(motion, 'wheelSpeed', 0, 900)?.values[5]).toBe(900);
  });
});

describe('the form of an identification', () => {
  it('takes the rig’s own numbers, with the share of doubt typed', () => {
    useIdentifyForm.setState({ kind: 'coastDown', typed: {}, sure: 0.05 });
    const givens = {
      mass: 8,
      weight: 80,
      wheelInertia: [2e-4],
      wheelMass: [0.3],
      cautions: [],
      loop: { kind: 'none', sentence: 'No loop.' },
    } as const;
    const built = buildRequest(useIdentifyForm.getState(), SKIFF, givens, 0);
    expect(built).toEqual({
      kind: 'log',
      request: { kind: 'coastDown', options: { inertia: { value: 2e-4, halfWidth: 1e-5 } } },
    });
    useIdentifyForm.setState({ kind: 'closedLoop' });
    expect(buildRequest(useIdentifyForm.getState(), SKIFF, givens, 0)).toEqual({
      kind: 'refused',
      sentence: 'No loop.',
    });
  });
  it('reads stopwatch seconds however they are parted, and refuses what is none', () => {
    expect(readTotals('15.2 15,3;15.1')).toEqual([15.2, 15.3, 15.1]);
    expect(readTotals('15.2, 15.3')).toEqual([15.2, 15.3]);
    expect(readTotals('15.2 about 15')).toBeUndefined();
    expect(readTotals('0')).toBeUndefined();
    expect(readTotals(' ')).toBeUndefined();
  });
});

const patch = (quantity: Patch['quantity'], value: number, half: number): Patch => ({
  quantity,
  value,
  low: value - half,
  high: value + half,
  unit: 's',
});
const found = (patches: readonly Patch[]): Identified => ({
  kind: 'identified',
  estimates: [],
  patches,
  comparison: {
    time: new Float64Array(0),
    measured: new Float64Array(0),
    predicted: new Float64Array(0),
    unit: '',
  },
  residualSpread: 0,
  remarks: [],
});
const keep = (outcome: Identified): void =>
  useFindings.setState({ fits: { servoStep: { kind: 'servoStep', from: 'a log', outcome } } });

describe('a result and the rig', () => {
  const drive = SKIFF.array.gyros[0]?.drive;
  const delay = drive?.kind === 'servo' ? drive.servo.delay : Number.NaN;
  it('offers the new number, says whether the old agrees, and leaves the rig alone', () => {
    const before = JSON.stringify(SKIFF);
    const far = offerPatch(SKIFF, patch('servoDelay', delay + 0.02, 0.001), undefined, {});
    const near = offerPatch(SKIFF, patch('servoDelay', delay + 0.002, 0.01), undefined, {});
    expect(far).toMatchObject({ kind: 'offer', agrees: false });
    expect(near).toMatchObject({ kind: 'offer', agrees: true });
    expect(JSON.stringify(SKIFF)).toBe(before);
    expect(offerPatch(SKIFF, patch('bodyInertia', 1, 0.1), undefined, {})).toMatchObject({ kind: 'none' });
    expect(offerPatch(SKIFF, patch('servoDelay', -1, 0.1), undefined, {})).toMatchObject({
      kind: 'none',
      sentence: expect.stringContaining('delay'),
    });
  });
  it('a torque constant is held against the velocity constant of the field', () => {
    const kv = SKIFF.array.gyros[0]?.motor.velocityConstant ?? 0;
    expect(
      offerPatch(SKIFF, patch('motorTorqueConstant', 1.01 / kv, 0.02 / kv), undefined, {}),
    ).toMatchObject({ kind: 'offer', agrees: true });
    expect(offerPatch(SKIFF, patch('motorTorqueConstant', 1.1 / kv, 0.02 / kv), undefined, {})).toMatchObject(
      {
        kind: 'offer',
        agrees: false,
      },
    );
  });
  it('the mark is not yet, fails, and holds once the number is in', () => {
    useFindings.setState({ fits: {} });
    expect(benchMark(SKIFF)).toBe('notYet');
    const wanted = patch('servoDelay', delay + 0.02, 0.001);
    keep(found([wanted]));
    expect(benchMark(SKIFF)).toBe('fails');
    const offer = offerPatch(SKIFF, wanted, undefined, {});
    expect(offer.kind === 'offer' && benchMark(offer.rig)).toBe('holds');
    // What no field of the rig holds says nothing of it.
    keep(found([patch('bodyInertia', 1, 0.1)]));
    expect(benchMark(SKIFF)).toBe('notYet');
    useFindings.setState({ fits: {} });
    expect(benchMark(STRIDER)).toBe('notYet');
  });
});

describe('the balancing form', () => {
  it('becomes a sheet in shop units and finds an unbalance that was put in', () => {
    // 3 g at 200 degrees, read through a lag of 40 degrees at 2.5 units a gram.
    const rad = Math.PI / 180;
    const read = (weights: readonly (readonly [number, number])[]) => {
      let re = 0;
      let im = 0;
      for (const [grams, degrees] of weights) {
        re += 2.5 * grams * Math.cos((degrees + 40) * rad);
        im += 2.5 * grams * Math.sin((degrees + 40) * rad);
      }
      return { amplitude: Math.sqrt(re * re + im * im), angle: Math.atan2(im, re) };
    };
    const nothing = { amplitude: 0, angle: 0 };
    useBalanceForm.setState({
      method: 'onePlane',
      initial: [read([[3, 200]]), nothing],
      trials: [
        {
          weight: { mass: 2e-3, angle: 90 * rad },
          readings: [
            read([
              [3, 200],
              [2, 90],
            ]),
            nothing,
          ],
        },
        { weight: { mass: 1e-3, angle: 0 }, readings: [nothing, nothing] },
      ],
      hasHoles: true,
      holes: 12,
      firstHole: 0,
      most: 5e-3,
    });
    const form = useBalanceForm.getState();
    expect(isFilled(form)).toBe(true);
    const outcome = balanceWheel(buildBalanceSheet(form, { mass: 0.4, speed: 800 }));
    if (outcome.kind === 'refused') throw new Error(outcome.sentences.join());
    const plane = outcome.planes[0];
    expectClose([plane?.mass_g ?? 0, plane?.angle ?? 0], [3, 20], { abs: 1e-9 });
    expect(plane?.holes?.kind).toBe('split');
    expect(isFilled({ ...form, method: 'twoPlanes' })).toBe(false);
    expect(isFilled({ ...form, method: 'fourRun' })).toBe(false);
  });
});
