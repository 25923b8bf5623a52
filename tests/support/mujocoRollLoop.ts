/**
 * One gyro on a body that rolls, closed by the same sensors, estimator, law and servo as the fast kernel, with
 * MuJoCo (npm package mujoco-js) for the mechanics: body, gimbal and wheel as three bodies on three hinges.
 */
import {
  CONTROLLER_PORT,
  createRollLoopWork,
  ESTIMATE,
  NO_VIBRATION,
  READING,
  type RollLoopModel,
  readSensors,
  resetController,
  resetEstimator,
  SERVO_STATE,
  seedRandom,
  sendCommand,
  stepController,
  stepEstimator,
  stepServo,
} from '../../src/core/control';
import type { Mujoco } from './mujocoStar';

const GRAVITY = 9.80665;
const BODY = { mass: 2.5, height: 0.3, inertia: 0.07 };
const WHEEL = { mass: 0.3, height: 0.4, along: 3.6e-4, across: 2e-4 };
const ARMATURE = 2e-4;
const SPIN = 1000;

/** The kernel's description of that rig; a feedback law that holds it. */
export function describeMujocoRig(substeps: number): RollLoopModel {
  const bodyInertia = BODY.inertia + BODY.mass * BODY.height ** 2;
  return {
    body: {
      inertia: bodyInertia + WHEEL.mass * WHEEL.height ** 2 + WHEEL.across,
      stiffness: (BODY.mass * BODY.height + WHEEL.mass * WHEEL.height) * GRAVITY,
      damping: 0,
      quadraticDamping: 0,
      fallenAt: 1,
    },
    actuator: {
      kind: 'servo',
      gimbals: [
        {
          servo: {
            stallTorque: 2.5,
            noLoadSpeed: 8,
            torqueLimit: 2.5,
            delay: 0.004,
            lag: 0.015,
            backlash: 0,
            deadBand: 0,
            resolution: 0,
            updateRate: 0,
            gimbalInertia: WHEEL.across,
            rotorInertia: ARMATURE,
            tiltMin: -1.2,
            tiltMax: 1.2,
          },
          momentum: WHEEL.along * SPIN,
          yawMomentum: WHEEL.along * SPIN,
          follow: 1,
          spin: { kind: 'constant' },
        },
      ],
    },
    sensor: {
      sampleTime: 0.001,
      gyroNoise: 1e-4,
      gyroBias: 0,
      gyroDrift: 0,
      driftTime: 100,
      gyroRange: 20,
      gyroResolution: 0,
      accelNoise: 1e-3,
      accelBias: 0,
      height: 0.2,
      gravity: GRAVITY,
      vibration: NO_VIBRATION,
    },
    estimator: { kind: 'complementary', sampleTime: 0.001, timeConstant: 1 },
    controller: { kind: 'feedback', lean: 90, leanRate: 16, tilt: 1.2, tiltRate: 0, trim: 0 },
    loopDelay: 0.001,
    loopJitter: 0,
    tiltMin: -1.2,
    tiltMax: 1.2,
    substeps,
  };
}

const describeXml = (dt: number): string => `<mujoco><compiler angle="radian"/>
<option timestep="${dt}" gravity="0 0 ${-GRAVITY}" integrator="RK4"/><worldbody>
<body><joint type="hinge" axis="1 0 0"/>
<inertial pos="0 0 ${BODY.height}" mass="${BODY.mass}" diaginertia="${BODY.inertia} ${BODY.inertia} ${BODY.inertia}"/>
<body pos="0 0 ${WHEEL.height}"><joint type="hinge" axis="0 1 0" armature="${ARMATURE}"/>
<inertial pos="0 0 0" mass="1e-9" diaginertia="1e-12 1e-12 1e-12"/>
<body><joint type="hinge" axis="0 0 1"/>
<inertial pos="0 0 0" mass="${WHEEL.mass}" diaginertia="${WHEEL.across} ${WHEEL.across} ${WHEEL.along}"/>
</body></body></body></worldbody></mujoco>`;

/** Runs the loop and returns roll and tilt at each tick: rows of two. */
export function runMujocoLoop(
  mujoco: Mujoco,
  model: RollLoopModel,
  roll: number,
  duration: number,
  seed: number,
): Float64Array {
  const work = createRollLoopWork(model);
  if (model.actuator.kind !== 'servo') throw new Error('this harness drives one servo');
  const { servo } = model.actuator.gimbals[0]!;
  const line = work.actuator.servos[0]!;
  const tick = model.sensor.sampleTime;
  const dt = tick / model.substeps;
  mujoco.FS.writeFile('/rollLoop.xml', describeXml(dt));
  const m = mujoco.MjModel.loadFromXML('/rollLoop.xml')!;
  const d = new mujoco.MjData(m);
  seedRandom(work.sensor.random, seed, 0, 1);
  resetEstimator(model.estimator, work.estimator, roll);
  resetController(work.controller, 0);
  d.qpos[0] = roll;
  d.qvel[2] = SPIN;
  mujoco.mj_forward(m, d);
  /* the wheel's momentum along its own axis: speed plus what the body's roll adds, held by a free bearing */
  const ticks = Math.round(duration / tick);
  const out = new Float64Array(2 * ticks);
  let lastRate = 0;
  for (let k = 0; k < ticks; k++) {
    const rate = d.qvel[0]!;
    out[2 * k] = d.qpos[0]!;
    out[2 * k + 1] = d.qpos[1]!;
    readSensors(model.sensor, work.sensor, d.qpos[0]!, rate, (rate - lastRate) / tick, k * tick);
    lastRate = rate;
    const reading = work.sensor.reading;
    stepEstimator(model.estimator, work.estimator, reading[READING.gyro]!, reading[READING.accelRoll]!, 0, 0);
    const { estimate } = work.estimator;
    stepController(
      model.controller,
      work.controller,
      estimate[ESTIMATE.roll]!,
      estimate[ESTIMATE.rate]!,
      0,
      model.tiltMin,
      model.tiltMax,
      tick,
    );
    sendCommand(servo, line, work.controller.state[CONTROLLER_PORT.output]!, model.loopDelay);
    for (let i = 0; i < model.substeps; i++) {
      const s = line.state;
      s[SERVO_STATE.motor] = d.qpos[1]!;
      s[SERVO_STATE.motorRate] = d.qvel[1]!;
      const load = WHEEL.along * SPIN * Math.cos(d.qpos[1]!) * d.qvel[0]!;
      stepServo(servo, line, load, dt);
      d.qfrc_applied[1] = s[SERVO_STATE.torque]!;
      mujoco.mj_step(m, d);
    }
  }
  d.delete();
  m.delete();
  return out;
}
