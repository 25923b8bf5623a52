/** Whether the wheels may be spun: worked out on the spot, as it is quick, and the same as the sheet says. */
import { gimbalRateOf, spinFailures, standGyro, usualSpinChoices } from '../../../core/physics';
import type { Rig } from '../../../core/rig';
import type { StationMark } from '../station';
import { chosenSpin, useSpinChoices } from './spinChoices';

let last:
  | { readonly rig: Rig; readonly factor: number; readonly preload: number; readonly mark: StationMark }
  | undefined;

function workOut(rig: Rig): StationMark {
  const { gyros } = rig.array;
  if (gyros.length === 0) return 'notYet';
  const choices = chosenSpin(useSpinChoices.getState());
  const done = new Set<string>();
  for (const gyro of gyros) {
    const rate = gimbalRateOf(rig, gyro);
    const { wheel, speed, motor, bearing, housing } = gyro;
    const key = JSON.stringify([wheel, speed, motor, bearing, housing, rate]);
    if (done.has(key)) continue;
    done.add(key);
    const stood = standGyro(gyro, rig.power, rate, { ...usualSpinChoices(gyro), ...choices });
    if (stood.kind === 'refused' || spinFailures(stood.standing).length > 0) return 'fails';
  }
  return 'holds';
}

/** The station's mark for a rig; the newest is kept, as the header asks for it at every change of the page. */
export function spinMark(rig: Rig): StationMark {
  const { factor, preload } = useSpinChoices.getState();
  if (last?.rig !== rig || last.factor !== factor || last.preload !== preload) {
    last = { rig, factor, preload, mark: workOut(rig) };
  }
  return last.mark;
}
