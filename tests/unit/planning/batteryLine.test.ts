import { describe, expect, it } from 'vitest';
import { compileRig, spinRig } from '../../../src/core/physics';
import { ledgerLines, setUpPlan, steeringOf } from '../../../src/core/planning';
import { batteryLine, meanGimbalPower } from '../../../src/core/planning/batteryLine';
import { DEMONSTRATIONS, type Gyro, PACER, type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { heldPlanOf, withLayout } from '../../support/plannedRigs';

function settingOf(rig: Rig) {
  const compiled = compileRig(rig);
  if (compiled.kind === 'refused') throw new Error('the rig is refused');
  const set = setUpPlan(compiled.compiled);
  if (set.kind === 'refused') throw new Error('the plan is refused');
  return set.setting;
}

const withGyros = (change: (gyro: Gyro) => Partial<Gyro>): Rig => ({
  ...STRIDER,
  array: { gyros: STRIDER.array.gyros.map((gyro) => ({ ...gyro, ...change(gyro) })) },
});

describe("the battery's line", () => {
  it.each(DEMONSTRATIONS)('of $file asks what the spin-up, the wheels and the rest take', ({ rig }) => {
    const [line] = batteryLine(settingOf(rig), []);
    const spin = spinRig(rig);
    // The line takes the spin-up in 12 pieces, the station in 60.
    expectClose([line!.ask.value], [spin.spinUpEnergy + spin.power * rig.jobs.duration], { rel: 1e-5 }); // measured 4e-7
    expectClose([line!.have.value], [0.8 * spin.batteryEnergy], { rel: 1e-12 }); // measured 0
    expect(line!.spare).toBeGreaterThan(0);
  });

  it('fails by what is missing when the battery is too small for the run', () => {
    const small = { ...STRIDER, power: { ...STRIDER.power, capacity: 30 } };
    const [line] = batteryLine(settingOf(small), []);
    expect(line!.ask.dimension).toBe('energy');
    expect(line!.spare).toBeLessThan(0);
  });

  it('tells the current when a wheel cannot be held, unless it coasts and can be brought up', () => {
    const fast = settingOf(withGyros(({ motor }) => ({ motor: { ...motor, velocityConstant: 15 } })));
    const [line] = batteryLine(fast, []);
    expect(line!.ask.dimension).toBe('current');
    expect(line!.spare).toBeLessThan(0);
    const coasting = batteryLine(settingOf(withGyros(() => ({ spin: { kind: 'coasting' } }))), []);
    const hold = coasting[0]!.ask.inputs.find(({ label }) => label === 'Power to hold all wheels');
    expect(hold?.value).toBe(0);
  });

  it('of a steered pyramid counts the power of every servo', () => {
    const planned = heldPlanOf(withLayout(PACER, 'pyramid'));
    expect(planned.setting.steered?.count).toBe(4);
    const steering = steeringOf(planned.setting, planned.schedules);
    const power = meanGimbalPower(planned.setting, planned.schedules, steering);
    expect(power).toBeGreaterThan(0);
    const lines = ledgerLines(planned.setting, planned.schedules);
    const told = lines
      .find(({ name }) => name === 'battery')
      ?.ask.inputs.find(({ label }) => label === 'Mean power of the gimbal drives');
    expect(told?.value).toBe(power);
  });

  it('is not there without wheels', () => {
    expect(batteryLine(settingOf({ ...STRIDER, array: { gyros: [] } }), [])).toEqual([]);
    expect(meanGimbalPower(settingOf(STRIDER), [])).toBe(0);
  });
});
