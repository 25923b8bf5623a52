import { afterEach, describe, expect, it } from 'vitest';
import { createStageFrame } from '../../../src/app/stage/stageFrame';
import { type Evaluated, stream } from '../../../src/app/state/stream';
import { PACER, type Rig, SKIFF, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { motionFixture } from '../../support/motionFixture';

/** As much of an evaluation as the stage reads. */
const evaluated = (rig: Rig, fall = 0): Evaluated =>
  ({
    kind: 'evaluated',
    centreOfMass: [0.01, 0, 0.3],
    motion: motionFixture(rig, { fall }),
    outcome: fall > 0 ? { kind: 'falls', at: 1.5 } : { kind: 'holds' },
  }) as unknown as Evaluated;

describe('createStageFrame', () => {
  afterEach(() => stream.seek(0));

  it('stands the rig on its feet while there is no motion', () => {
    const { instant, hasFallen } = createStageFrame(STRIDER, undefined);
    expect(hasFallen).toBe(false);
    expect([...instant.isFootDown]).toEqual([1, 1]);
    expectClose(instant.pose, [0, 0, 0, 1, 0, 0, 0], { abs: 1e-15 }); // measured 0
    expect(instant.centreOfMass[0]).toBeNaN();
  });

  it('does not draw the motion of a rig with other legs or gyros', () => {
    const frame = createStageFrame(PACER, evaluated(STRIDER));
    frame.read();
    expect(frame.instant.isFootDown).toHaveLength(4);
    expectClose(frame.instant.centreOfMass, [0.01, 0, 0.3], { abs: 1e-15 }); // measured 0
  });

  it('reads the instant of the playhead', () => {
    const shown = evaluated(SKIFF);
    stream.setEvaluation(shown);
    const frame = createStageFrame(SKIFF, shown);
    stream.seek(0.6);
    frame.read();
    // A quarter of the fixture's swing: the roll is at its greatest.
    expectClose(2 * Math.asin(frame.instant.pose[4]), 0.09, { rel: 1e-9 }); // measured 0
  });

  it('has fallen from the moment the trial says so', () => {
    const shown = evaluated(STRIDER, 0.4);
    stream.setEvaluation(shown);
    const frame = createStageFrame(STRIDER, shown);
    stream.seek(1.4);
    frame.read();
    expect(frame.hasFallen).toBe(false);
    stream.seek(1.6);
    frame.read();
    expect(frame.hasFallen).toBe(true);
  });
});
