/** Rigs that trials are checked with: the walker on an edge, standing, and with hardware that has nothing amiss. */
import { type Rig, STRIDER } from '../../src/core/rig';
import { AS_DRAWN, type Switches, setUpTrial, type TrialSetup } from '../../src/core/trial';

export const ALL_ON: Switches = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true };
export const LOCKED: Switches = { isArrayOn: false, isPlanOn: false, isFeedbackOn: false };

/** The walker's body balanced on a line under its middle. */
export const EDGED: Rig = {
  ...STRIDER,
  name: 'Edged',
  footing: { kind: 'edge', offset: 0 },
  jobs: { ...STRIDER.jobs, gait: { kind: 'stand' }, duration: 5 },
};

export const STANDING: Rig = {
  ...STRIDER,
  name: 'Standing',
  jobs: { ...STRIDER.jobs, gait: { kind: 'stand' }, duration: 5 },
};

/** Sensors without noise, bias, drift or jitter, wheels in perfect balance. */
export const quieten = (rig: Rig): Rig => ({
  ...rig,
  sensing: {
    ...rig.sensing,
    gyroNoise: 0,
    gyroBias: 0,
    gyroDrift: 0,
    gyroResolution: 0,
    accelNoise: 0,
    accelBias: 0,
    loopJitter: 0,
  },
  array: {
    gyros: rig.array.gyros.map((gyro) => ({ ...gyro, wheel: { ...gyro.wheel, balanceGrade: 0.1 } })),
  },
});

/** Gimbals without play, dead band, steps or friction. */
export const tighten = (rig: Rig): Rig => ({
  ...rig,
  array: {
    gyros: rig.array.gyros.map((gyro) => ({
      ...gyro,
      gimbal: { ...gyro.gimbal, stiction: 0, friction: 0 },
      drive:
        gyro.drive.kind === 'servo'
          ? {
              ...gyro.drive,
              servo: { ...gyro.drive.servo, backlash: 0, deadBand: 0, resolution: 0 },
            }
          : gyro.drive,
    })),
  },
});

/** Servos a hundred times stronger and ten times quicker. */
export const strengthen = (rig: Rig): Rig => ({
  ...rig,
  array: {
    gyros: rig.array.gyros.map((gyro) => ({
      ...gyro,
      drive:
        gyro.drive.kind === 'servo'
          ? {
              ...gyro.drive,
              servo: {
                ...gyro.drive.servo,
                stallTorque: 100 * gyro.drive.servo.stallTorque,
                noLoadSpeed: 10 * gyro.drive.servo.noLoadSpeed,
                delay: 0,
                lag: 0.002,
                updateRate: 2000,
              },
            }
          : gyro.drive,
    })),
  },
  sensing: { ...rig.sensing, loopRate: 2000, loopDelay: 0 },
});

export function ready(rig: Rig): TrialSetup {
  const outcome = setUpTrial(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map((r) => r.sentence).join('\n'));
  return outcome.setup;
}

export const requestFor = (setup: TrialSetup, length: number, switches = ALL_ON) => ({
  switches,
  controller: setup.controller,
  length,
  build: AS_DRAWN,
  sensing: 'real' as const,
  seed: 1,
  run: 0,
  surprises: [] as { time: number; impulse: number; height: number }[],
});
