import { describe, expect, it } from 'vitest';
import {
  createServoWork,
  resetServo,
  SERVO_STATE,
  type ServoModel,
  sendCommand,
} from '../../../src/core/control/servoModel';
import { meanServoTorque, stepServo } from '../../../src/core/control/servoMotion';
import { expectClose } from '../../support/closeTo';

const STRONG: ServoModel = {
  stallTorque: 1e4,
  noLoadSpeed: 1e4,
  torqueLimit: 1e4,
  delay: 0,
  lag: 0.02,
  backlash: 0,
  deadBand: 0,
  resolution: 0,
  updateRate: 0,
  gimbalInertia: 1e-3,
  rotorInertia: 0,
  tiltMin: -2,
  tiltMax: 2,
};

/** Tilt after a step command of `command` at time 0, sampled each step. */
function respond(model: ServoModel, command: number, dt: number, duration: number, load = 0): Float64Array {
  const work = createServoWork(model, 1 / dt);
  sendCommand(model, work, command, 0);
  const out = new Float64Array(Math.round(duration / dt));
  for (let i = 0; i < out.length; i++) {
    stepServo(model, work, load, dt);
    out[i] = work.state[SERVO_STATE.tilt]!;
  }
  return out;
}

describe('servo', () => {
  it('follows 1 - exp(-t / lag) exactly at any step when nothing limits it', () => {
    for (const dt of [1e-3, 5e-3]) {
      const tilt = respond(STRONG, 0.3, dt, 0.1);
      expectClose(
        tilt,
        tilt.map((_, i) => 0.3 * -Math.expm1((-(i + 1) * dt) / 0.02)),
        { rel: 1e-12 },
      ); // measured 1e-15
    }
  });

  it('starts after its delay, to a fraction of a step', () => {
    for (const delay of [0.004, 0.0047]) {
      const tilt = respond({ ...STRONG, delay }, 0.3, 1e-3, 0.1);
      const exact = tilt.map((_, i) => 0.3 * -Math.expm1(-Math.max(0, (i + 1) * 1e-3 - delay) / 0.02));
      expectClose(tilt, exact, { abs: 2e-4 }); // measured 8e-5, all of it from the fractional delay
      expect(tilt[3]).toBe(0);
    }
  });

  it('reads its command only at its own frames', () => {
    const model = { ...STRONG, updateRate: 50, lag: 0 };
    const work = createServoWork(model, 1000);
    const seen: number[] = [];
    for (let i = 0; i < 60; i++) {
      sendCommand(model, work, i * 1e-3, 0);
      stepServo(model, work, 0, 1e-3);
      seen.push(work.state[SERVO_STATE.tilt]!);
    }
    expectClose([seen[5]!, seen[19]!, seen[20]!, seen[39]!, seen[40]!], [0, 0, 0.02, 0.02, 0.04], {
      abs: 1e-12,
    }); // measured 5e-16
  });

  it('runs along its speed-torque line: no-load speed free, half of it at half the stall torque', () => {
    const model = {
      ...STRONG,
      stallTorque: 2,
      torqueLimit: 2,
      noLoadSpeed: 8,
      lag: 0,
      tiltMax: 50,
      tiltMin: -50,
    };
    const rateAt = (load: number): number => {
      const tilt = respond(model, 40, 1e-3, 1, load);
      return (tilt[999]! - tilt[998]!) / 1e-3;
    };
    expectClose([rateAt(0), rateAt(-1), rateAt(-2), rateAt(1)], [8, 4, 0, 12], { abs: 1e-9 }); // measured 5e-13
  });

  it('gains speed with the motor time constant J noLoad / stall, first order in the step and stable far above it', () => {
    const model = { ...STRONG, stallTorque: 0.1, torqueLimit: 0.1, noLoadSpeed: 8, lag: 0, tiltMax: 50 };
    const constant = (1e-3 * 8) / 0.1;
    const rate = (dt: number): number => {
      const tilt = respond(model, 40, dt, 0.08);
      return (tilt[tilt.length - 1]! - tilt[tilt.length - 2]!) / dt;
    };
    const exact = 8 * -Math.expm1(-0.08 / constant);
    expectClose((rate(2e-3) - exact) / (rate(1e-3) - exact), 2, { rel: 0.05 }); // measured 5e-3
    const light = { ...model, gimbalInertia: 1e-7 };
    const tilt = respond(light, 40, 5e-3, 0.05);
    expectClose(tilt[9]! - tilt[8]!, 8 * 5e-3, { rel: 1e-3 }); // measured 5e-16
  });

  it('never gives more than its line and its current limit allow, whatever is asked', () => {
    const model = { ...STRONG, stallTorque: 2, torqueLimit: 0.7, noLoadSpeed: 8, lag: 0.002 };
    const work = createServoWork(model, 1000);
    let saturated = 0;
    for (let i = 0; i < 4000; i++) {
      sendCommand(model, work, Math.sin(i * 0.004) * (i % 700 < 350 ? 1 : -1), 0);
      const load = 0.6 * Math.sin(i * 0.013);
      stepServo(model, work, load, 1e-3);
      const torque = work.state[SERVO_STATE.torque]!;
      const rate = work.state[SERVO_STATE.motorRate]!;
      expect(Math.abs(torque)).toBeLessThanOrEqual(0.7 + 1e-9);
      expect(torque).toBeLessThanOrEqual(2 * (1 - rate / 8) + 1e-9);
      expect(torque).toBeGreaterThanOrEqual(-2 * (1 + rate / 8) - 1e-9);
      saturated += work.state[SERVO_STATE.saturated]!;
    }
    expect(saturated).toBeGreaterThan(100);
    expect(saturated).toBeLessThan(3900);
    expectClose(work.state[SERVO_STATE.saturatedTime]!, saturated * 1e-3, { rel: 1e-9 }); // measured 6e-14
  });

  it('is driven back by a load above its stall torque, at the rate its line gives', () => {
    const model = { ...STRONG, stallTorque: 1, torqueLimit: 1, noLoadSpeed: 8, lag: 0.01, tiltMin: -1e5 };
    const work = createServoWork(model, 1000);
    for (let i = 0; i < 2000; i++) stepServo(model, work, -1.5, 1e-3);
    /* the current limit caps braking at 1, so the net 0.5 N*m accelerates it without end */
    expectClose(work.state[SERVO_STATE.rate]!, (-0.5 / 1e-3) * 2, { rel: 1e-3 }); // measured 5e-14
  });

  it('holds a steady load with that torque and remembers the heat', () => {
    const work = createServoWork(STRONG, 1000);
    for (let i = 0; i < 1000; i++) stepServo(STRONG, work, 0.4, 1e-3);
    expectClose([work.state[SERVO_STATE.torque]!, meanServoTorque(work)], [-0.4, 0.4], { rel: 1e-12 }); // measured 1e-14
  });

  it('leaves a play of the size given when driven to and fro, and none without', () => {
    const width = (backlash: number, load: number): number => {
      const model = { ...STRONG, backlash, lag: 0.002, rotorInertia: 1e-3 };
      const work = createServoWork(model, 1000);
      let up = 0;
      let down = 0;
      for (let i = 0; i < 4000; i++) {
        const phase = (i % 2000) / 2000;
        sendCommand(model, work, phase < 0.5 ? 2 * phase - 0.5 : 1.5 - 2 * phase, 0);
        /* friction against motion keeps the gimbal on the trailing side */
        stepServo(model, work, load - 0.02 * work.state[SERVO_STATE.rate]!, 1e-3);
        if (i === 2500) up = work.state[SERVO_STATE.tilt]! - work.state[SERVO_STATE.motor]!;
        if (i === 3500) down = work.state[SERVO_STATE.tilt]! - work.state[SERVO_STATE.motor]!;
      }
      return down - up;
    };
    expectClose(width(0.02, 0), 0.02, { rel: 1e-6 }); // measured 0
    expectClose(width(0, 0), 0, { abs: 1e-12 }); // measured 0
    expectClose(width(0.02, 0.5), 0, { abs: 1e-12 }, 'a load one way closes the gap'); // measured 0
  });

  it('ignores errors within its dead band and rounds to its resolution', () => {
    const still = respond({ ...STRONG, deadBand: 0.01 }, 0.009, 1e-3, 0.2);
    expect(still[199]).toBe(0);
    const near = respond({ ...STRONG, deadBand: 0.01 }, 0.1, 1e-3, 0.5);
    expect(Math.abs(near[499]! - 0.1)).toBeLessThanOrEqual(0.01);
    expect(Math.abs(near[499]! - 0.1)).toBeGreaterThan(0.005);
    const coarse = respond({ ...STRONG, resolution: 0.05 }, 0.12, 1e-3, 0.5);
    expectClose(coarse[499]!, 0.1, { rel: 1e-6 }); // measured 1e-11
  });

  it('stops at its stops, on either side', () => {
    const model = { ...STRONG, tiltMin: -0.2, tiltMax: 0.5, backlash: 0.01 };
    const work = createServoWork(model, 1000);
    for (const [push, stop] of [
      [50, 0.5],
      [-50, -0.2],
    ] as const) {
      resetServo(work, 0);
      for (let i = 0; i < 500; i++) stepServo({ ...model, stallTorque: 1, torqueLimit: 1 }, work, push, 1e-3);
      expect([work.state[SERVO_STATE.tilt], work.state[SERVO_STATE.rate]]).toEqual([stop, 0]);
    }
  });

  it('does not mind a flood of commands', () => {
    const model = { ...STRONG, delay: 0.05 };
    const work = createServoWork(model, 100);
    for (let i = 0; i < 500; i++) {
      sendCommand(model, work, 0.3, 0);
      stepServo(model, work, 0, 1e-3);
    }
    expectClose(work.state[SERVO_STATE.tilt]!, 0.3, { rel: 1e-4 }); // measured 2e-10
  });
});
