import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { STANDARD_GRAVITY } from '../../../src/core/physics';
import { computeDemand, groundOf, trunkOf } from '../../../src/core/planning/demand';
import { eventBlocks } from '../../../src/core/planning/disturbanceBlocks';
import {
  type DisturbanceSetting,
  roadWheelsOf,
  sampleDisturbances,
  spreadJumps,
} from '../../../src/core/planning/disturbances';
import { compileGait, runTimes, sampleGait } from '../../../src/core/planning/gait';
import { legMassCourse, legModelOf } from '../../../src/core/planning/legMass';
import { hatShare, sampleSeries } from '../../../src/core/planning/loadSampling';
import { type Disturbance, type LeggedBody, type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

/** Evenly spread: a plain double of this library is mostly near zero. */
const evenly = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + ((max - min) * n) / 1_000_000);

const LAND: DisturbanceSetting = { referenceHeight: 0, velocity: [0, 0], waves: undefined, road: undefined };
const time = runTimes(4, 200);

/** Area under values joined by straight lines. */
const area = (values: Float64Array, step: number): number => {
  let sum = 0;
  for (let k = 0; k + 1 < values.length; k++) sum += (step * (values[k]! + values[k + 1]!)) / 2;
  return sum;
};

const sample = (...sequence: readonly Disturbance[]) => sampleDisturbances(sequence, time, LAND);
const left = Math.PI / 2;

describe('disturbances', () => {
  it('leaves gravity alone when nothing happens', () => {
    const calm = sample();
    expect(calm.roll.every((m) => m === 0)).toBe(true);
    expect([...calm.gravity.subarray(0, 3)]).toEqual([0, 0, -STANDARD_GRAVITY]);
  });

  it('carries exactly the impulse of a load that switches on and off anywhere', () => {
    fc.assert(
      fc.property(evenly(0, 3), evenly(0.001, 0.9), evenly(-3, 3), (start, duration, direction) => {
        const load = sample({ kind: 'sideLoad', time: start, duration, force: 7, height: 0.4, direction });
        const roll = -0.4 * 7 * Math.sin(direction) * duration;
        const pitch = 0.4 * 7 * Math.cos(direction) * duration;
        expectClose([area(load.roll, 0.02), area(load.pitch, 0.02)], [roll, pitch], { abs: 1e-12 }); // measured 4e-15
      }),
      { seed: 77, numRuns: 200 },
    );
    // Also where it begins before the run and ends after it.
    const whole = sample({
      kind: 'sideLoad',
      time: 0,
      duration: 100,
      force: 7,
      height: 0.4,
      direction: left,
    });
    expectClose(whole.roll, new Float64Array(201).fill(-2.8), { rel: 1e-12 }); // measured 2e-16
    expectClose(hatShare(-5, 0, 0, 0.02, 0), 0.5, { rel: 1e-14 }); // measured 0
  });

  it('turns a push to the left into a fall to the left, and a push forward into one forward', () => {
    const shoves = sample(
      { kind: 'shove', time: 1.003, impulse: 2, height: 0.4, direction: left },
      { kind: 'shove', time: 0.5, impulse: 3, height: 0.4, direction: 0 },
    );
    expect(shoves.jumps.map((j) => [j.time, j.index])).toEqual([
      [0.5, 1],
      [1.003, 0],
    ]);
    expectClose(
      shoves.jumps.map((j) => j.roll),
      [0, -0.8],
      { abs: 1e-15 },
    ); // measured 0
    expectClose(
      shoves.jumps.map((j) => j.pitch),
      [1.2, 0],
      { abs: 1e-15 },
    ); // measured 2e-16
    const spread = spreadJumps(shoves);
    expectClose([area(spread.roll, 0.02), area(spread.pitch, 0.02)], [-0.8, 1.2], { rel: 1e-12 }); // measured 2e-16
    expect(spread.jumps.length).toBe(0);
    expect(shoves.roll.every((m) => m === 0)).toBe(true);
    const first = spreadJumps(sample({ kind: 'shove', time: 0, impulse: 2, height: 0.4, direction: left }));
    expectClose(area(first.roll, 0.02), -0.8, { rel: 1e-12 }); // measured 0
  });

  it('takes moments about the reference it is given', () => {
    const about = { ...LAND, referenceHeight: 0.4 };
    const load: Disturbance = {
      kind: 'sideLoad',
      time: 0,
      duration: 9,
      force: 7,
      height: 0.4,
      direction: left,
    };
    expect(sampleDisturbances([load], time, about).roll.every((m) => Math.abs(m) < 1e-15)).toBe(true);
  });

  it('tilts gravity on a slope and keeps its size', () => {
    const slope = sample({ kind: 'slope', time: 1, duration: 1, angle: 0.2, direction: left });
    const at = (k: number) => slope.gravity.subarray(3 * k, 3 * k + 3);
    expectClose(at(75), [0, STANDARD_GRAVITY * Math.sin(0.2), -STANDARD_GRAVITY * Math.cos(0.2)], {
      abs: 1e-14,
    }); // measured 1e-16
    expectClose(at(125), [0, 0, -STANDARD_GRAVITY], { abs: 1e-14 }); // measured 0
    const twice = sample(
      { kind: 'slope', time: 0, duration: 4, angle: 0.1, direction: 0.7 },
      { kind: 'slope', time: 0, duration: 4, angle: 0.15, direction: 0.7 },
    );
    const g = twice.gravity.subarray(300, 303);
    expectClose(Math.sqrt(g[0]! ** 2 + g[1]! ** 2 + g[2]! ** 2), STANDARD_GRAVITY, { rel: 1e-14 }); // measured 2e-16
    expectClose(g[2]!, -STANDARD_GRAVITY * Math.cos(0.25), { rel: 1e-14 }); // measured 0
  });

  it('throws a turning body outward, its road wheels with it', () => {
    const road = roadWheelsOf({
      kind: 'inline',
      wheelbase: 1,
      frame: { length: 1, width: 0.1, height: 0.3, centreHeight: 0.4, mass: 10 },
      tyre: { radius: 0.3, crownRadius: 0.02, mass: 1.5 },
    });
    const turn: Disturbance = { kind: 'turn', time: 0, duration: 4, speed: 5, radius: 10 };
    const course = sampleDisturbances([turn], time, { ...LAND, road });
    expectClose([course.gravity[301]!, course.yawRate[100]!], [-2.5, 0.5], { rel: 1e-14 }); // measured 0
    // Spin inertia 2 m r^2, spin v / r, yaw rate v / R: 2 x 1.5 x 0.09 x (5 / 0.3) x 0.5, falling to the right.
    expectClose(course.roll[100]!, 2.25, { rel: 1e-12 }); // measured 2e-16
    const right = sampleDisturbances([{ ...turn, radius: -10 }], time, { ...LAND, road });
    expectClose([right.gravity[301]!, right.roll[100]!], [2.5, -2.25], { rel: 1e-12 }); // measured 2e-16
  });

  it('shakes the floor by what was recorded, joined by straight lines', () => {
    const shake = sample({ kind: 'shake', time: 1, interval: 0.05, acceleration: [0, 2, -1] });
    expectClose([shake.gravity[3 * 51 + 1]!, shake.gravity[3 * 54 + 1]!], [-0.8, -0.2], { abs: 1e-12 }); // measured 4e-15
    expectClose(shake.gravity[3 * 49 + 1]!, 0, { abs: 1e-15 }); // measured 0
    expect(sampleSeries([4, 5], 1, 0.1, 1.2)).toBe(0);
    const recorded = sample({ kind: 'recorded', time: 1, interval: 1, moment: [0, 10] });
    expectClose(recorded.roll[75]!, 5, { rel: 1e-12 }); // measured 0
  });

  it('blocks the ribbon from beginning to end', () => {
    const blocks = eventBlocks(
      [
        { kind: 'shake', time: 1, interval: 0.5, acceleration: [0, 1, 0] },
        { kind: 'payload', time: 2, duration: 1, mass: -1, position: [0, 0, 0] },
      ],
      2,
    );
    expect(blocks).toEqual([
      { kind: 'event', label: 'Floor shake', from: 1, to: 2, row: 2, index: 0 },
      { kind: 'event', label: 'Payload put down', from: 2, to: 3, row: 2, index: 1 },
    ]);
  });
});

describe('disturbances of a body on its feet', () => {
  const standing: Rig = { ...STRIDER, jobs: { ...STRIDER.jobs, gait: { kind: 'stand' } } };
  const demandWith = (rig: Rig, ...sequence: readonly Disturbance[]) => {
    const outcome = compileGait(rig);
    if (outcome.kind === 'refused') throw new Error('the rig was refused');
    const course = sampleGait(outcome.gait, time, false);
    const legs = legMassCourse(legModelOf(rig.body as LeggedBody), course);
    const disturbances = sampleDisturbances(sequence, time, { ...LAND, velocity: outcome.gait.velocity });
    return computeDemand(course, trunkOf(rig), legs, groundOf(rig)!, disturbances);
  };

  it('weighs a payload as if it had been built in', () => {
    const position = [0.02, 0.05, 0.5] as const;
    const picked = demandWith(standing, { kind: 'payload', time: 0, duration: 9, mass: 0.7, position });
    const built = demandWith({
      ...standing,
      payloads: [...standing.payloads, { name: 'Built in', mass: 0.7, size: [0.1, 0.1, 0.1], position }],
    });
    expectClose(picked.roll, built.roll, { rel: 1e-12 }); // measured 0
    expectClose(picked.pitch, built.pitch, { rel: 1e-12 }); // measured 1e-16
    expectClose(picked.verticalForce, built.verticalForce, { rel: 1e-12 }); // measured 0
    expectClose(picked.centreOfMass, built.centreOfMass, { abs: 1e-14 }); // measured 1e-16
    // Put down again what was built in: nothing is left of it.
    const back = demandWith(
      {
        ...standing,
        payloads: [...standing.payloads, { name: 'Built in', mass: 0.7, size: [0.1, 0.1, 0.1], position }],
      },
      { kind: 'payload', time: 0, duration: 9, mass: -0.7, position },
    );
    expectClose(back.roll, demandWith(standing).roll, { abs: 1e-12 }); // measured 0
  });

  it('shifts the pressure downhill by height times slope', () => {
    const demand = demandWith(standing, { kind: 'slope', time: 0, duration: 9, angle: 0.1, direction: left });
    const height = demand.centreOfMass[2]!;
    expectClose(demand.bareAcross[100]!, height * Math.tan(0.1), { rel: 1e-12 }); // measured 0
    expectClose(demand.horizontalForce[100]! / demand.verticalForce[100]!, Math.tan(0.1), { rel: 1e-12 }); // measured 1e-16
    expect(demand.yawHold[100]).toBeLessThan(demandWith(standing).yawHold[100]!);
  });

  it('shifts the pressure against a floor that moves, as a cart on a table', () => {
    const demand = demandWith(standing, { kind: 'shake', time: 0, interval: 4, acceleration: [0.5, 0.5] });
    const height = demand.centreOfMass[2]!;
    expectClose(demand.bareAcross[100]!, (-height * 0.5) / STANDARD_GRAVITY, { rel: 1e-12 }); // measured 0
  });
});
