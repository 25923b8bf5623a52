import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compileRig, trimBallast, trimFigures } from '../../../src/core/physics';
import { DEMONSTRATIONS, type Rig } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const finite = (min: number, max: number) => fc.double({ min, max, noNaN: true, noDefaultInfinity: true });

const bodies = fc.record({
  mass: finite(0.1, 5000),
  x: finite(-1, 1),
  y: finite(-0.3, 0.3),
  z: finite(0.05, 2),
});
const boxes = fc
  .record({
    x: finite(-1, 1),
    y: finite(-1, 1),
    z: finite(0, 1),
    dx: finite(0, 1),
    dy: finite(0, 1),
    dz: finite(0, 1),
  })
  .map(({ x, y, z, dx, dy, dz }) => ({ low: [x, y, z] as const, high: [x + dx, y + dy, z + dz] as const }));

const wholeOf = ({ mass, x, y, z }: { mass: number; x: number; y: number; z: number }) => ({
  whole: { mass, com: [x, y, z] as const, inertia: [1, 1, 1, 0, 0, 0] as const },
});

type Box = {
  readonly low: readonly [number, number, number];
  readonly high: readonly [number, number, number];
};

/** The box, with its outer side no nearer the middle line than 10 mm. */
function reaching({ low, high }: Box, side: 1 | -1): Box {
  const [y, far] = side > 0 ? [low[1], Math.max(0.01, high[1])] : [Math.min(-0.01, low[1]), high[1]];
  return { low: [low[0], y, low[2]], high: [high[0], far, high[2]] };
}

describe('trim ballast', () => {
  it('lies in the box, is no heavier than allowed, and never makes the offset worse', () => {
    fc.assert(
      fc.property(bodies, boxes, finite(0, 500), (body, box, most) => {
        const { mass, position, offsetLeft } = trimBallast(wholeOf(body), box, most);
        expect(mass).toBeGreaterThanOrEqual(0);
        expect(mass).toBeLessThanOrEqual(most);
        for (let k = 0; k < 3; k++) {
          expect(position[k]).toBeGreaterThanOrEqual(box.low[k] as number);
          expect(position[k]).toBeLessThanOrEqual(box.high[k] as number);
        }
        // Measured worse by 2e-17 m at the most, from rounding.
        expect(Math.abs(offsetLeft)).toBeLessThanOrEqual(Math.abs(body.y) + 1e-15);
      }),
      { seed: 11, numRuns: 500 },
    );
  });

  it('cancels the offset whenever the box reaches the light side and the mass allows', () => {
    fc.assert(
      fc.property(bodies, boxes, (body, free) => {
        // Moved across until it reaches the light side.
        const side = body.y > 0 ? -1 : 1;
        const box = reaching(free, side);
        const reach = side > 0 ? box.high[1] : -box.low[1];
        const needed = (body.mass * Math.abs(body.y)) / reach;
        const { mass, position, offsetLeft } = trimBallast(wholeOf(body), box, 1.001 * needed);
        // The moment about the middle line, worked out anew.
        expectClose(body.mass * body.y + mass * position[1], 0, { abs: 1e-12 * body.mass }); // measured 4e-17 times the mass
        expectClose(offsetLeft, 0, { abs: 1e-12 }); // measured 3e-17
        expectClose(mass, needed, { rel: 1e-12 }); // least mass: no place in the box has a longer lever; measured 0
      }),
      { seed: 12, numRuns: 500 },
    );
  });

  it('gives what it can and says what is left when the mass allowed is too little', () => {
    const body = { mass: 10, x: 0, y: 0.01, z: 0.4 };
    const box = { low: [-0.1, -0.05, 0.1] as const, high: [0.1, 0.05, 0.2] as const };
    const { mass, offsetLeft } = trimBallast(wholeOf(body), box, 1);
    expect(mass).toBe(1);
    expectClose(offsetLeft, (10 * 0.01 - 1 * 0.05) / 11, { rel: 1e-14 });
  });

  it('puts none in a box that lies on the heavy side alone', () => {
    const box = { low: [0, 0.02, 0] as const, high: [0.1, 0.08, 0.1] as const };
    expect(trimBallast(wholeOf({ mass: 5, x: 0, y: 0.01, z: 0.3 }), box, 3)).toMatchObject({
      mass: 0,
      offsetLeft: 0.01,
    });
  });

  it('put into a rig as a payload, brings the compiled centre over the middle line', () => {
    const first = DEMONSTRATIONS[0]?.rig as Rig;
    const heavy: Rig = {
      ...first,
      payloads: [
        ...first.payloads,
        { name: 'Camera', mass: 0.3, size: [0.05, 0.05, 0.05], position: [0, 0.08, 0.5] },
      ],
    };
    const compiledOf = (rig: Rig) => {
      const outcome = compileRig(rig);
      if (outcome.kind === 'refused') throw new Error(outcome.refusals[0]?.sentence);
      return outcome.compiled;
    };
    const before = compiledOf(heavy);
    const ballast = trimBallast(before, { low: [-0.1, -0.1, 0.3], high: [0.1, 0.1, 0.5] }, 2);
    const after = compiledOf({
      ...heavy,
      payloads: [
        ...heavy.payloads,
        { name: 'Ballast', mass: ballast.mass, size: [0.02, 0.02, 0.02], position: [...ballast.position] },
      ],
    });
    expect(Math.abs(before.whole.com[1])).toBeGreaterThan(1e-3);
    expectClose(after.whole.com[1], 0, { abs: 1e-15 }); // measured below 1e-17
    const told = trimFigures(before, ballast);
    expectClose(told.find(({ id }) => id === 'ballastMass')?.value ?? Number.NaN, ballast.mass, {
      rel: 1e-15,
    });
    expectClose(told.find(({ id }) => id === 'trimOffset')?.value ?? Number.NaN, before.whole.com[1], {
      rel: 1e-15,
    });
  });
});
