import { describe, expect, it } from 'vitest';
import { angleInPlane, lengthStep, placeOnLine, snap, unwrapAngle } from '../../../src/app/stage/dragMaths';
import { expectClose } from '../../support/closeTo';

const unit = (v: readonly [number, number, number]): [number, number, number] => {
  const size = Math.hypot(...v);
  return [v[0] / size, v[1] / size, v[2] / size];
};

/** A ray from an eye through a point. */
const through = (eye: readonly [number, number, number], point: readonly [number, number, number]) => ({
  origin: eye,
  direction: unit([point[0] - eye[0], point[1] - eye[1], point[2] - eye[2]]),
});

describe('placeOnLine', () => {
  it('finds the point of the line the pointer is on', () => {
    const axis = unit([1, 2, -1]);
    const point = [0.3 + 0.7 * axis[0], 0.1 + 0.7 * axis[1], 0.7 * axis[2]] as const;
    const place = placeOnLine(through([3, -2, 1], point), [0.3, 0.1, 0], axis);
    expectClose(place ?? Number.NaN, 0.7, { rel: 1e-12 }); // measured 8e-16
  });

  it('finds the nearest point for a ray that passes by', () => {
    // The ray runs along y at z = 0.2 above the x axis.
    const ray = { origin: [0.4, -5, 0.2], direction: [0, 1, 0] } as const;
    expectClose(placeOnLine(ray, [0, 0, 0], [1, 0, 0]) ?? Number.NaN, 0.4, { rel: 1e-12 }); // measured 0
  });

  it('says nothing when it looks along the line', () => {
    const ray = { origin: [5, 0, 0.001], direction: [-1, 0, 0] } as const;
    expect(placeOnLine(ray, [0, 0, 0], [1, 0, 0])).toBeUndefined();
  });
});

describe('angleInPlane', () => {
  it('is right-handed about the normal', () => {
    const angle = 1.1;
    // About y from z: a positive turn brings z towards x.
    const point = [2 * Math.sin(angle), 0.5, 2 * Math.cos(angle)] as const;
    const found = angleInPlane(through([1, 9, 1], point), [0, 0.5, 0], [0, 1, 0], [0, 0, 1]);
    expectClose(found ?? Number.NaN, angle, { rel: 1e-12 }); // measured 0
  });

  it('says nothing when the plane is seen edge-on or lies behind', () => {
    const edgeOn = { origin: [0, 0, 5], direction: unit([0, 0.001, -1]) } as const;
    expect(angleInPlane(edgeOn, [0, 0, 0], [0, 1, 0], [0, 0, 1])).toBeUndefined();
    const away = { origin: [0, 5, 0], direction: [0, 1, 0] } as const;
    expect(angleInPlane(away, [0, 0, 0], [0, 1, 0], [0, 0, 1])).toBeUndefined();
  });

  it('goes on past half a turn without a jump', () => {
    expectClose(unwrapAngle(-3.1, 3.1), -3.1 + 2 * Math.PI, { rel: 1e-15 }); // measured 0
    expectClose(unwrapAngle(0.2, 0.1), 0.2, { abs: 1e-15 }); // measured 0
  });
});

describe('snapping', () => {
  it('gives the plain decimal', () => {
    expect(snap(0.12345, 0.001)).toBe(0.123);
    expect(snap(0.3004, 0.0005)).toBe(0.3005);
    expect(snap(-0.0274, 0.005)).toBe(-0.025);
    expect(snap(0.77, 0)).toBe(0.77);
  });

  it('takes a step that suits the size', () => {
    expect(lengthStep(0.3)).toBe(0.0005);
    expect(lengthStep(0.8)).toBe(0.001);
    expect(lengthStep(4.5)).toBe(0.005);
    expect(lengthStep(2000)).toBe(0.1);
  });
});
