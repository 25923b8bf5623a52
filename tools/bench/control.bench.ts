import { PerformanceObserver } from 'node:perf_hooks';
import {
  chooseSubsteps,
  createRollLoopWork,
  designGains,
  mountServo,
  NO_DISTURBANCE,
  NO_VIBRATION,
  type RollDisturbance,
  type RollLoopModel,
  type RollTiltPlant,
  runRollLoop,
  summariseServo,
} from '../../src/core/control';
import { BENCH_SERVO } from '../../src/core/rig';
import { describeMujocoRig, runMujocoLoop } from '../../tests/support/mujocoRollLoop';
import { openMujoco } from '../../tests/support/mujocoStar';
import type { Row } from './row';

const median = (values: number[]): number => values.sort((a, b) => a - b)[Math.floor(values.length / 2)]!;

/** s of processor time used so far: what one core does, whatever else the machine is busy with. */
const processorTime = (): number => {
  const used = process.cpuUsage();
  return (used.user + used.system) / 1e6;
};

const PLANT: RollTiltPlant = {
  actuator: 'tilt',
  inertia: 0.3,
  stiffness: 7.5,
  damping: 0.05,
  momentum: 0.6,
  servoLag: BENCH_SERVO.lag,
  delay: summariseServo(BENCH_SERVO).delay + 0.001,
  sampleTime: 0.001,
  sensorHeight: 0.1,
  gravity: 9.80665,
};

/** A pair driven by two bench servos, 1 kHz loop, every imperfection on. */
function buildPair(): RollLoopModel {
  const estimator = { kind: 'complementary', sampleTime: 0.001, timeConstant: 1.5 } as const;
  const design = designGains({ plant: PLANT, estimator, law: 'feedback', hasTrim: true });
  if (design.kind !== 'designed') throw new Error('the benchmark rig has no gains');
  const servo = mountServo(BENCH_SERVO, {
    gimbalInertia: 3e-4,
    rotorInertia: 2e-4,
    tiltMin: -0.8,
    tiltMax: 0.8,
  });
  const gimbal = (yawMomentum: number) => ({
    servo,
    momentum: 0.3,
    yawMomentum,
    follow: 1,
    spin: { kind: 'constant' } as const,
  });
  const actuator = { kind: 'servo', gimbals: [gimbal(0.3), gimbal(-0.3)] } as const;
  return {
    body: {
      inertia: PLANT.inertia,
      stiffness: PLANT.stiffness,
      damping: PLANT.damping,
      quadraticDamping: 0.01,
      fallenAt: 0.6,
    },
    actuator,
    sensor: {
      sampleTime: 0.001,
      gyroNoise: 1.2e-4,
      gyroBias: 3e-3,
      gyroDrift: 7e-5,
      driftTime: 100,
      gyroRange: 8.7,
      gyroResolution: 2.7e-4,
      accelNoise: 1.2e-3,
      accelBias: 0.05,
      height: 0.1,
      gravity: 9.80665,
      vibration: { ...NO_VIBRATION, frequency: 838, rateAmplitude: 0.002, accelAmplitude: 0.2 },
    },
    estimator,
    controller: design.controller,
    loopDelay: 0.001,
    loopJitter: 0.0002,
    tiltMin: -0.8,
    tiltMax: 0.8,
    substeps: chooseSubsteps(actuator, PLANT.inertia, 0.001),
  };
}

const KNOCKS: RollDisturbance = {
  step: 1,
  isCyclic: false,
  moment: new Float64Array(0),
  shoves: Float64Array.of(1, 0.05, 20, -0.05, 40, 0.05),
};

/** Garbage collections during ten minutes of loop time, after one to warm up. */
async function countCollections(run: () => void): Promise<number> {
  let count = 0;
  const observer = new PerformanceObserver((list) => {
    count += list.getEntries().length;
  });
  /* what was left before has its collections first */
  await new Promise((resolve) => setTimeout(resolve, 50));
  observer.observe({ entryTypes: ['gc'] });
  run();
  await new Promise((resolve) => setTimeout(resolve, 50));
  observer.disconnect();
  return count;
}

/** Seconds of computing for a second of one gyro's loop at 1 kHz: the kernel's and MuJoCo's, in the same run. */
async function compareWithMujoco(): Promise<{ ours: number; theirs: number }> {
  const mujoco = await openMujoco();
  const model = describeMujocoRig(1);
  const work = createRollLoopWork(model);
  const start = { roll: 0.06, rollRate: 0, tilt: 0, estimateError: 0, seed: 5, run: 0 };
  runMujocoLoop(mujoco, model, 0.06, 1, 5);
  runRollLoop(model, work, KNOCKS, { ...start, duration: 20 }, undefined);
  const ours: number[] = [];
  const theirs: number[] = [];
  for (let i = 0; i < 3; i++) {
    const from = processorTime();
    runRollLoop(model, work, NO_DISTURBANCE, { ...start, duration: 40 }, undefined);
    ours.push((processorTime() - from) / 40);
    const then = processorTime();
    runMujocoLoop(mujoco, model, 0.06, 4, 5);
    theirs.push((processorTime() - then) / 4);
  }
  return { ours: median(ours), theirs: median(theirs) };
}

export async function run(): Promise<Row[]> {
  const model = buildPair();
  const work = createRollLoopWork(model);
  const start = { roll: 0, rollRate: 0, tilt: 0, estimateError: 0, seed: 5, run: 0 };
  runRollLoop(model, work, KNOCKS, { ...start, duration: 20 }, undefined);
  const times: number[] = [];
  let fallen = false;
  for (let i = 0; i < 7; i++) {
    const from = processorTime();
    const outcome = runRollLoop(model, work, KNOCKS, { ...start, run: i, duration: 60 }, undefined);
    times.push(processorTime() - from);
    fallen ||= outcome.hasFallen;
  }
  const seconds = median(times);
  const collections = await countCollections(() => {
    for (let i = 0; i < 10; i++)
      runRollLoop(model, work, KNOCKS, { ...start, run: i, duration: 60 }, undefined);
  });
  const peer = await compareWithMujoco();
  const many: number[] = [];
  for (let i = 0; i < 3; i++) {
    const from = processorTime();
    for (let k = 0; k < 100; k++) {
      runRollLoop(model, work, KNOCKS, { ...start, run: k, duration: 5 }, undefined);
    }
    many.push(processorTime() - from);
  }
  const designs: number[] = [];
  for (let i = 0; i < 5; i++) {
    const from = processorTime();
    designGains({ plant: PLANT, estimator: model.estimator, law: 'feedback' });
    designs.push(1000 * (processorTime() - from));
  }
  return [
    {
      name: 'closed loop, pair on two servos, 60 s at 1 kHz with noise',
      value: seconds,
      unit: 's',
      target: 'at most 0.3 s, and the body stays up',
      ok: seconds <= 0.3 && !fallen,
    },
    {
      name: 'closed loop, 100 runs of 5 s on one core',
      value: median(many),
      unit: 's',
      target: 'at most 3 s (1,000 runs in 15 s on two cores)',
      ok: median(many) <= 3,
    },
    {
      name: 'closed loop, garbage collections in 10 minutes of loop time',
      value: collections,
      unit: '',
      target: 'none',
      ok: collections === 0,
    },
    { name: 'closed loop of one gyro, computing for each second', value: peer.ours * 1000, unit: 'ms' },
    { name: 'the same loop on mujoco-js', value: peer.theirs * 1000, unit: 'ms' },
    { name: 'times faster than mujoco-js, same run', value: peer.theirs / peer.ours, unit: 'x' },
    { name: 'gains for a pair, designed and verified', value: median(designs), unit: 'ms' },
  ];
}
