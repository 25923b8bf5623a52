import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { STRIDER } from '../../src/core/rig';
import { expectClose } from '../support/closeTo';
import { runRig } from '../support/runRig';
import { compiledOf, EDGE_RIG } from '../support/yardCases';

const strider = 'public/rigs/strider.json';
const folder = mkdtempSync(join(tmpdir(), 'yard-'));
afterAll(() => rmSync(folder, { recursive: true }));

const rowsOf = (csv: string): number[][] =>
  csv
    .trim()
    .split('\n')
    .slice(1)
    .map((line) => line.split(',').map(Number));

describe('walk', () => {
  it('walks Strider and samples it, exit 0', () => {
    const { status, out } = runRig('walk', strider, '--seconds', '4', '--rate', '10', '--csv');
    expect(status).toBe(0);
    const rows = rowsOf(out);
    expect(rows).toHaveLength(41);
    expectClose(rows.at(-1)?.[0] as number, 4, { abs: 1e-9 });
    expectClose(rows.at(-1)?.[1] as number, 0.16, { abs: 0.003 }); // four steps of 40 mm; measured 0.1600
  });

  it('fails a rig that topples, exit 1, and says when and that no limit is to be taken from it', () => {
    const { status, out } = runRig('walk', strider, '--seconds', '3', '--rate', '2', '--array', 'off');
    expect(status).toBe(1);
    const output = JSON.parse(out);
    expect(output.toppledAt).toBeGreaterThan(0.5);
    expect(output.toppledAt).toBeLessThan(3);
    expect(output.note).toContain('plan and trial');
  });

  it('refuses a ground there is not and a time out of range, exit 2', () => {
    const { status, err } = runRig('walk', strider, '--ground', 'moon', '--seconds', '-1');
    expect(status).toBe(2);
    expect(err).toContain('--ground: "moon" is not one of flat, slope, step, plank, blocks.');
    expect(err).toContain('--seconds: "-1" is not a number from 0.01 to 600 s.');
  });
});

describe('fall', () => {
  it('grows a small lean on an edge as a body that topples does: by the hyperbolic cosine', () => {
    const path = join(folder, 'edge.json');
    writeFileSync(path, JSON.stringify(EDGE_RIG));
    const { status, out } = runRig(
      'fall',
      path,
      '--lean',
      '0.001',
      '--seconds',
      '0.4',
      '--rate',
      '10',
      '--csv',
    );
    expect(status).toBe(0);
    // Locked by their servos the wheels do nothing. Rate: sqrt(k / I), first principles.
    const { whole } = compiledOf(EDGE_RIG);
    const inertia = whole.inertia[0] + whole.mass * (whole.com[1] ** 2 + whole.com[2] ** 2);
    const growth = Math.sqrt((whole.mass * 9.80665 * whole.com[2]) / inertia);
    const leans = rowsOf(out).map((row) => row[1] as number);
    const wanted = [0, 0.1, 0.2, 0.3, 0.4].map((time) => 0.001 * Math.cosh(growth * time));
    expectClose(leans, wanted, { rel: 1e-5 });
  });

  it('lets a walker that leans a little come back flat on its feet, and one past its edge fall', () => {
    const back = JSON.parse(runRig('fall', strider, '--lean', '0.05').out);
    expect(back.ends).toBe('flat on its feet');
    const over = JSON.parse(runRig('fall', strider, '--lean', '0.25', '--drive', 'locked').out);
    expect(over.ends).toBe('on its side');
  });

  it('has the same fall with wheels locked whatever their speed: a locked wheel does nothing for a line', () => {
    const path = join(folder, 'still.json');
    const gyros = STRIDER.array.gyros.map((gyro) => ({ ...gyro, speed: 0 }));
    writeFileSync(path, JSON.stringify({ ...STRIDER, array: { gyros } }));
    const options = ['--lean', '0.25', '--drive', 'locked', '--seconds', '0.5', '--rate', '10', '--csv'];
    const turning = rowsOf(runRig('fall', strider, ...options).out).map((row) => row[1] as number);
    const still = rowsOf(runRig('fall', path, ...options).out).map((row) => row[1] as number);
    expectClose(turning, still, { rel: 1e-12 }); // measured 0
  });

  it('refuses a drive there is not, exit 2', () => {
    expect(runRig('fall', strider, '--drive', 'loose').status).toBe(2);
  });
});

describe('layout', () => {
  it('tells what a scissored pair gives: 2 h rate cos(tilt) of roll and nothing of yaw beside it', () => {
    const { status, out } = runRig('layout', strider, '--tilts', '0,0.5');
    expect(status).toBe(0);
    const { places, envelope } = JSON.parse(out);
    const { wheels, speeds } = compiledOf(STRIDER);
    const h = (wheels[0]?.spinInertia as number) * Math.abs(speeds[0] as number);
    expectClose(places[1].momentum, [2 * h * Math.sin(0.5), 0, 0], { rel: 1e-12, abs: 1e-15 });
    expectClose(places[1].mostTorque.roll / places[0].mostTorque.roll, Math.cos(0.5), { rel: 1e-12 });
    expectClose(places[1].besideMostRoll.yawLeak, 0, { abs: 1e-12 });
    expectClose(envelope.roll, 2 * h, { rel: 0.005 }); // measured 0.0021 short: the surface is sampled
    // A wheel 2 % too fast leaves 2 % of one wheel's momentum over.
    const { leftovers } = places[1];
    const { speedMismatch } = leftovers;
    expectClose(Math.hypot(...speedMismatch.momentum), 0.02 * h, { rel: 1e-12 });
    expectClose(Math.abs(speedMismatch.torque[2] / speedMismatch.torque[0]), Math.tan(0.5), { rel: 1e-9 });
    expect(Math.abs(leftovers.laggingServo.torque[2])).toBeGreaterThan(0);
  });

  it('refuses tilts that are no numbers, exit 2', () => {
    const { status, err } = runRig('layout', strider, '--tilts', '0,steep');
    expect(status).toBe(2);
    expect(err).toContain('--tilts: "0,steep" is not a list of angles');
  });
});
