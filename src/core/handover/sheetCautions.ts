import {
  BODY_RATE,
  type Caution,
  type CompiledRig,
  cautionsFor,
  gimbalRateOf,
  packEnergy,
  type SpinSheetOutcome,
  STANDARD_GRAVITY,
} from '../physics';
import { MATERIALS } from '../rig';

/**
 * The cautions a sheet carries. A wheel whose stresses cannot be worked out is no less dangerous for that: then they
 * follow from its size, mass and speed alone.
 */
export function sheetCautions(compiled: CompiledRig, spin: SpinSheetOutcome): readonly Caution[] {
  if (spin.kind === 'sheet') return spin.sheet.cautions;
  const { rig, wheels } = compiled;
  const hazards = { rimSpeed: 0, spinEnergy: 0, throwHeight: 0, printedParts: 0, gimbalTorque: 0 };
  rig.array.gyros.forEach((gyro, i) => {
    const { spinInertia, outerRadius, mass } = wheels[i]!;
    const { speed, drive } = gyro;
    const energy = (spinInertia * speed * speed) / 2;
    const couple = spinInertia * speed * Math.min(gimbalRateOf(rig, gyro), BODY_RATE);
    hazards.rimSpeed = Math.max(hazards.rimSpeed, speed * outerRadius);
    hazards.spinEnergy += energy;
    hazards.throwHeight = Math.max(hazards.throwHeight, energy / (mass * STANDARD_GRAVITY));
    hazards.gimbalTorque = Math.max(
      hazards.gimbalTorque,
      couple,
      drive.kind === 'servo' ? drive.servo.stallTorque : 0,
    );
    if (speed > 0)
      hazards.printedParts += gyro.wheel.parts.filter(
        (part) => part.kind !== 'bolts' && MATERIALS[part.material].kind === 'printed',
      ).length;
  });
  const { cells, cellVoltage, capacity } = rig.power;
  return cautionsFor({ ...hazards, batteryEnergy: packEnergy(cells, cellVoltage, capacity) });
}
