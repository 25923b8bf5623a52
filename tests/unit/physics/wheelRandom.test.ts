import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { spinGyro } from '../../../src/core/physics/spin';
import { spinFigures } from '../../../src/core/physics/spinFigures';
import { BENCH_GYRO, BENCH_POWER, type Housing, MATERIAL_NAMES, type WheelPart } from '../../../src/core/rig';

const length = (min: number, max: number) => fc.double({ min, max, noNaN: true });
const material = fc.constantFrom(...MATERIAL_NAMES);
const offset = length(-0.05, 0.05);

/** Parts within the ranges of a rig file, alike to each other in no way. */
const part: fc.Arbitrary<WheelPart> = fc.oneof(
  fc.record({
    kind: fc.constant('disc' as const),
    radius: length(0.002, 1),
    bore: length(0, 0.5),
    thickness: length(0.0002, 0.5),
    material,
    offset,
  }),
  fc.record({
    kind: fc.constant('rim' as const),
    outerRadius: length(0.003, 1),
    innerRadius: length(0.001, 1),
    width: length(0.0005, 0.5),
    material,
    offset,
  }),
  fc.record({
    kind: fc.constant('hub' as const),
    radius: length(0.002, 0.5),
    bore: length(0, 0.4),
    length: length(0.001, 0.5),
    material,
    offset,
  }),
  fc.record({
    kind: fc.constant('balls' as const),
    count: fc.integer({ min: 2, max: 400 }),
    diameter: length(0.001, 0.1),
    pitchRadius: length(0.003, 1),
    material,
    offset,
  }),
  fc.record({
    kind: fc.constant('bolts' as const),
    count: fc.integer({ min: 2, max: 100 }),
    mass: length(1e-5, 2),
    pitchRadius: length(0.002, 1),
    offset,
  }),
);

const housing: fc.Arbitrary<Housing> = fc.oneof(
  fc.constant({ kind: 'open' as const }),
  fc.record({ kind: fc.constant('shrouded' as const), gap: length(0.0005, 0.2) }),
  fc.record({
    kind: fc.constant('evacuated' as const),
    gap: length(0.0005, 0.2),
    pressure: length(0.1, 101325),
  }),
);

describe('any wheel of a rig file', () => {
  it('is refused with the name of a field, or has figures without a NaN', () => {
    let spun = 0;
    let refused = 0;
    fc.assert(
      fc.property(
        fc.array(part, { minLength: 1, maxLength: 6 }),
        housing,
        length(0, 12000),
        (parts, room, speed) => {
          const wheel = { ...BENCH_GYRO.wheel, parts };
          const outcome = spinGyro({ ...BENCH_GYRO, wheel, housing: room, speed }, BENCH_POWER, 4);
          if (outcome.kind === 'refused') {
            refused++;
            expect(outcome.faults.length).toBeGreaterThan(0);
            for (const fault of outcome.faults) expect(fault.field).toMatch(/^parts/);
            return;
          }
          spun++;
          const { report } = outcome;
          expect(report.stress.safeSpeed).toBeGreaterThan(0);
          expect(report.wheel.spinInertia).toBeGreaterThan(0);
          expect(report.wheel.transverseInertia * 2).toBeGreaterThanOrEqual(
            report.wheel.spinInertia * (1 - 1e-9),
          );
          for (const f of spinFigures(report).flatMap((group) => group.figures)) {
            expect(Number.isNaN(f.value), f.id).toBe(false);
          }
        },
      ),
      { seed: 20260007, numRuns: 300 },
    );
    expect(spun).toBeGreaterThan(20);
    expect(refused).toBeGreaterThan(20);
  });
});
