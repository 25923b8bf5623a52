import { describe, expect, it } from 'vitest';
import { createLegPoses, poseLegs, rotateInto, toBody } from '../../../src/app/stage/legPose';
import { type LeggedBody, PACER, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const strider = STRIDER.body as LeggedBody;
const pacer = PACER.body as LeggedBody;
const UPRIGHT = [0, 0, 0, 1, 0, 0, 0];

const distance = (a: ArrayLike<number>, b: ArrayLike<number>): number =>
  Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);

/** A turn about x, then y, as a pose away from the origin. */
const leaning = (): number[] => {
  const [c, s] = [Math.cos(0.2), Math.sin(0.2)];
  const [d, t] = [Math.cos(-0.15), Math.sin(-0.15)];
  return [0.3, -0.2, 0.05, c * d, s * d, c * t, s * t];
};

describe('poseLegs', () => {
  it('keeps both links at their lengths for every leg, in a leaning body that has walked away', () => {
    const pose = leaning();
    const poses = createLegPoses(pacer);
    const feet = new Float64Array(12);
    const sole = new Float64Array(3);
    poses.forEach((leg, i) => {
      rotateInto(pose, leg.hip[0] + 0.02, leg.hip[1] - 0.01, 0.03, sole);
      feet.set([sole[0] + pose[0], sole[1] + pose[1], sole[2] + pose[2]], 3 * i);
    });
    poseLegs(pacer, pose, feet, poses);
    for (const leg of poses) {
      expect(leg.isReached).toBe(true);
      expectClose(distance(leg.hip, leg.knee), pacer.thigh.length, { rel: 1e-12 }); // measured 4e-16
      expectClose(distance(leg.knee, leg.ankle), pacer.shank.length, { rel: 1e-12 }); // measured 2e-16
      expectClose(leg.ankle, [leg.hip[0] + 0.02, leg.hip[1] - 0.01, 0.03], { abs: 1e-14 }); // measured 4e-17
    }
  });

  it('bends the knee forward', () => {
    const poses = createLegPoses(strider);
    const feet = Float64Array.from(poses.flatMap((leg) => [leg.hip[0], leg.hip[1], 0]));
    poseLegs(strider, UPRIGHT, feet, poses);
    for (const leg of poses) expect(leg.knee[0]).toBeGreaterThan(leg.hip[0] + 0.01);
  });

  it('leaves a gap to a foot that is too far: the links do not stretch', () => {
    const poses = createLegPoses(strider);
    const feet = Float64Array.from(poses.flatMap((leg) => [leg.hip[0], leg.hip[1], -0.2]));
    poseLegs(strider, UPRIGHT, feet, poses);
    for (const leg of poses) {
      expect(leg.isReached).toBe(false);
      expectClose(distance(leg.hip, leg.ankle), strider.thigh.length + strider.shank.length, { rel: 1e-12 }); // measured 0
      expectClose(distance(leg.knee, leg.ankle), strider.shank.length, { rel: 1e-12 }); // measured 0
      expectClose(leg.sole[2], -0.2, { abs: 1e-15 }); // measured 0
    }
  });

  it('gives numbers even for a sole that lies in its hip', () => {
    const poses = createLegPoses(strider);
    const feet = Float64Array.from(poses.flatMap((leg) => [...leg.hip]));
    poseLegs(strider, UPRIGHT, feet, poses);
    for (const leg of poses) {
      expect(leg.isReached).toBe(false);
      expect([...leg.knee].every(Number.isFinite)).toBe(true);
    }
  });
});

describe('toBody', () => {
  it('is undone by rotateInto and the shift of the origin', () => {
    const pose = leaning();
    const out = new Float64Array(3);
    const back = new Float64Array(3);
    toBody(pose, [9, 9, 9, 0.7, -0.4, 1.1], 3, out);
    rotateInto(pose, out[0], out[1], out[2], back);
    expectClose([back[0] + pose[0], back[1] + pose[1], back[2] + pose[2]], [0.7, -0.4, 1.1], { abs: 1e-14 }); // measured 6e-17
  });
});
