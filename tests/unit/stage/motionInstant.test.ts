import { describe, expect, it } from 'vitest';
import { createInstant, leanOf, readInstant, rollAndPitch } from '../../../src/app/stage/motionInstant';
import { PACER, SKIFF, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { motionFixture } from '../../support/motionFixture';

const motion = motionFixture(STRIDER, { samples: 101, duration: 2 });
const instant = () => createInstant(motion.gyros, motion.legs);

describe('readInstant', () => {
  it('gives a sample back as it stands, at the sample', () => {
    const out = instant();
    readInstant(motion, motion.time[37], out);
    expectClose(out.tilt, motion.tilt.subarray(74, 76), { abs: 1e-12 }); // measured 0: the time is rounded
    expectClose(out.pose, motion.pose.subarray(7 * 37, 7 * 38), { abs: 1e-12 }); // measured 1e-16
    expectClose(out.demand, motion.demand[37], { abs: 1e-12 }); // measured 0
  });

  it('goes straight from one sample to the next', () => {
    const out = instant();
    readInstant(motion, motion.time[10] + 0.3 * 0.02, out);
    const mixed = (column: Float64Array, width: number, k: number) =>
      0.7 * column[10 * width + k] + 0.3 * column[11 * width + k];
    expectClose(out.tilt[1], mixed(motion.tilt, 2, 1), { abs: 1e-12 }); // measured 6e-17
    expectClose(out.torque[2], mixed(motion.torque, 3, 2), { abs: 1e-12 }); // measured 0
    expectClose(out.feet[4], mixed(motion.feet, 6, 4), { abs: 1e-12 }); // measured 7e-18
  });

  it('turns the short way between attitudes of opposite sign, and keeps a unit quaternion', () => {
    const turning = motionFixture(STRIDER, { samples: 2, duration: 1 });
    const half = 0.2;
    turning.pose.set([0, 0, 0, 1, 0, 0, 0], 0);
    // The same turn of 2 * half about x, written with the other sign.
    turning.pose.set([0, 0, 0, -Math.cos(half), -Math.sin(half), 0, 0], 7);
    const out = instant();
    readInstant(turning, 0.5, out);
    expectClose(out.pose.subarray(3), [Math.cos(half / 2), Math.sin(half / 2), 0, 0], { abs: 1e-14 }); // measured 1e-16
    readInstant(turning, 0.21, out);
    expectClose(Math.hypot(...out.pose.subarray(3)), 1, { abs: 1e-14 }); // measured 0
  });

  it('keeps the chord within a thousandth of a degree of the arc for samples two degrees apart', () => {
    const turning = motionFixture(STRIDER, { samples: 2, duration: 1 });
    const half = Math.PI / 180;
    turning.pose.set([0, 0, 0, 1, 0, 0, 0], 0);
    turning.pose.set([0, 0, 0, Math.cos(half), 0, Math.sin(half), 0], 7);
    const out = instant();
    readInstant(turning, 0.25, out);
    const turned = 2 * Math.asin(out.pose[5]);
    expectClose(turned, 0.5 * half, { abs: (1e-3 * Math.PI) / 180 }); // measured 2e-7 rad, 1e-5 of a degree
  });

  it('takes the nearer sample beside one that is not a number', () => {
    const broken = motionFixture(STRIDER, { samples: 11, duration: 1 });
    broken.centreOfPressure.fill(Number.NaN, 10);
    const out = instant();
    readInstant(broken, 0.43, out);
    expectClose(out.centreOfPressure[1], broken.centreOfPressure[9], { abs: 1e-15 }); // measured 0
    readInstant(broken, 0.47, out);
    expect(out.centreOfPressure[1]).toBeNaN();
  });

  it('stays at the ends for times beyond them, and reads a motion of one sample', () => {
    const out = instant();
    readInstant(motion, 99, out);
    expectClose(out.tilt, motion.tilt.subarray(200), { abs: 1e-15 }); // measured 0
    readInstant(motion, -1, out);
    expectClose(out.tilt, motion.tilt.subarray(0, 2), { abs: 1e-15 }); // measured 0
    const still = { ...motion, samples: 1 };
    readInstant(still, 0.4, out);
    expectClose(out.tilt, motion.tilt.subarray(0, 2), { abs: 1e-15 }); // measured 0
  });

  it('has water for what floats and none on land', () => {
    const afloat = motionFixture(SKIFF);
    const out = createInstant(afloat.gyros, 0);
    readInstant(afloat, 0, out);
    expectClose(out.waterSlope, 0.07, { rel: 1e-12 }); // measured 0
    const land = motionFixture(PACER);
    const dry = createInstant(land.gyros, land.legs);
    readInstant(land, 0.1, dry);
    expect(dry.water).toBeNaN();
  });
});

describe('angles of a pose', () => {
  const rolled = (angle: number) => [0, 0, 0, Math.cos(angle / 2), Math.sin(angle / 2), 0, 0];

  it('reads lean whichever way it goes', () => {
    expectClose(leanOf(rolled(-0.7)), 0.7, { rel: 1e-12 }); // measured 2e-16
    expectClose(leanOf([0, 0, 0, 0, 1, 0, 0]), Math.PI, { rel: 1e-12 }); // measured 0
  });

  it('tells roll from pitch', () => {
    const [roll, pitch] = rollAndPitch(rolled(0.3));
    expectClose([roll, pitch], [0.3, 0], { abs: 1e-14 }); // measured 6e-17
    const nosed = rollAndPitch([0, 0, 0, Math.cos(0.1), 0, Math.sin(0.1), 0]);
    expectClose(nosed, [0, 0.2], { abs: 1e-14 }); // measured 0
  });
});
