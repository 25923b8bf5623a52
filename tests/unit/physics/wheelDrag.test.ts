import { describe, expect, it } from 'vitest';
import { permissibleUnbalance } from '../../../src/core/physics/balanceGrade';
import { bearingLoads, swingingMeanLoad } from '../../../src/core/physics/bearings';
import { compileDrive, holdSpeed } from '../../../src/core/physics/drive';
import { fitWheelDrag, wheelDragParts, wheelEnvelope } from '../../../src/core/physics/wheelDrag';
import { wheelProperties } from '../../../src/core/physics/wheelProperties';
import { BENCH_WHEEL, type Housing, type WheelPart } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const RPM = (2 * Math.PI) / 60;

const HEAVY: readonly WheelPart[] = [
  { kind: 'disc', radius: 0.2, bore: 0, thickness: 0.1, material: 'steel 4140 QT540', offset: 0 },
  { kind: 'hub', radius: 0.02, bore: 0, length: 0.3, material: 'steel 4140 QT540', offset: 0 },
];

/** Power from the battery to hold a wheel of 100 kg at about 10,000 rpm while its gimbal works, W. */
function heavyPower(housing: Housing): number {
  const speed = 9700 * RPM;
  const outcome = wheelProperties(HEAVY);
  if (outcome.kind !== 'wheel') throw new Error('refused');
  const { mass, spinInertia } = outcome.wheel;
  expectClose(mass, 100, { rel: 0.02 }); // measured 1.6e-2
  const [load] = bearingLoads({
    mass,
    momentum: spinInertia * speed,
    unbalance: permissibleUnbalance(2.5, speed, mass),
    speed,
    gimbalRate: 0.4,
    toLeft: 0.12,
    toRight: 0.12,
    preload: 500,
    loadFactor: 1,
  });
  const mean = swingingMeanLoad(load.weight + load.unbalance + 500, load.gyroscopic);
  const bearing = { bore: 0.04, friction: 0.0015 };
  const drag = wheelDragParts(wheelEnvelope(HEAVY), housing, bearing, [mean, mean]);
  const drive = compileDrive(
    { name: 'm', velocityConstant: 110 * RPM, resistance: 0.03, noLoadCurrent: 1.5, currentLimit: 200 },
    { cells: 27, cellVoltage: 3.7, capacity: 1e6, resistance: 0.01, otherPower: 0 },
  );
  const held = holdSpeed(drive, drag.total, speed);
  if (held.kind !== 'held') throw new Error('cannot be held');
  return held.flows.battery;
}

describe('drag of a wheel', () => {
  it('about a kilowatt for 100 kg at 10,000 rpm in a vacuum housing, many times that in the open: common practice', () => {
    const evacuated = heavyPower({ kind: 'evacuated', gap: 0.01, pressure: 130 });
    const open = heavyPower({ kind: 'open' });
    expectClose(evacuated, 1000, { rel: 0.4 }); // measured 0.24: 756 W, gimbal drive not counted
    expect(open / evacuated).toBeGreaterThan(4); // measured 5.3: 4020 W
  });

  it('takes the outermost parts as the width the gas sees', () => {
    expect(wheelEnvelope(BENCH_WHEEL.parts)).toEqual({ radius: 0.045, width: 0.014 });
    expect(wheelEnvelope(HEAVY)).toEqual({ radius: 0.2, width: 0.1 });
  });

  it('fits the law of the dynamics to size and slope at the running speed', () => {
    const parts = wheelDragParts(
      wheelEnvelope(BENCH_WHEEL.parts),
      { kind: 'shrouded', gap: 0.004 },
      { bore: 0.006, friction: 0.0015 },
      [20, 20],
    );
    for (const rpm of [2000, 8000, 20000]) {
      const speed = rpm * RPM;
      const fit = fitWheelDrag(parts, speed);
      const at = (w: number) => fit.constant + fit.viscous * w + fit.quadratic * w * w;
      expectClose(at(speed), parts.total(speed), { rel: 1e-12 }); // measured 1.9e-16
      const slope = (parts.total(speed * 1.001) - parts.total(speed * 0.999)) / (0.002 * speed);
      expectClose(fit.viscous + 2 * fit.quadratic * speed, slope, { rel: 1e-6 }); // measured 1.8e-13
      expect(Math.min(fit.constant, fit.viscous, fit.quadratic)).toBeGreaterThanOrEqual(0);
      expectClose(at(speed * 0.8), parts.total(speed * 0.8), { rel: 0.03 }); // measured 1.2e-2
    }
  });
});
