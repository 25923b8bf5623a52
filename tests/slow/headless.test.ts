import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { expectClose } from '../support/closeTo';
import { runRig } from '../support/runRig';

const folder = mkdtempSync(join(tmpdir(), 'rig-'));
const write = (name: string, text: string): string => {
  const path = join(folder, name);
  writeFileSync(path, text);
  return path;
};

describe('the headless program', () => {
  it('weighs a rig and prints JSON', () => {
    const { status, out } = runRig('weigh', 'public/rigs/strider.json');
    expect(status).toBe(0);
    const weighed = JSON.parse(out) as {
      mass: number;
      figures: { id: string; formula: string; source: string }[];
    };
    expect(weighed.mass).toBeGreaterThan(5);
    for (const figure of weighed.figures)
      expect(figure.formula.length * figure.source.length).toBeGreaterThan(0);
  });

  it('plans a rig and prints the schedule as a table that a CSV library reads', () => {
    const { status, out } = runRig('plan', 'public/rigs/pacer.json', '--csv');
    expect(status).toBe(0);
    const { data, errors } = Papa.parse<Record<string, number>>(out, {
      header: true,
      dynamicTyping: true,
      skipEmptyLines: true,
    });
    expect(errors).toEqual([]);
    expect(Object.keys(data[0]!)).toEqual([
      'time (s)',
      'Front tilt (rad)',
      'Front tilt rate (rad/s)',
      'Back tilt (rad)',
      'Back tilt rate (rad/s)',
    ]);
    expect(data).toHaveLength(241);
    // The schedule closes on itself, and the pair tilts opposite ways.
    expectClose(data[240]!['Front tilt (rad)']!, data[0]!['Front tilt (rad)']!, { abs: 1e-9 });
    for (const row of data) expect(row['Back tilt (rad)']! + row['Front tilt (rad)']!).toBe(0);
  });

  it('ends with 1 for a rig that has no plan, and says why and what would cure it', () => {
    const text = readFileSync('public/rigs/strider.json', 'utf8').replace('"sway": 0.03', '"sway": 0.004');
    const { status, out } = runRig('plan', write('stiff.json', text));
    expect(status).toBe(1);
    const answer = JSON.parse(out) as { sentence: string; cures: string[] };
    expect(answer.sentence).toMatch(/falls short by/);
    expect(answer.cures.length).toBeGreaterThan(2);
  });

  it('ends with 2 and a sentence for a bad file, option or command', () => {
    const cases: readonly (readonly [readonly string[], RegExp])[] = [
      [['weigh', join(folder, 'nothing.json')], /there is no such file/],
      [['weigh', write('zeros.json', '0'.repeat(9e6))], /a rig file is at most/],
      [['weigh', write('text.json', 'hello')], /not JSON/],
      [['weigh', write('newer.json', '{"format":"tiltwright-rig","version":9}')], /version 9 by a newer/],
      [['weigh'], /reads one file, and 0 were given/],
      [['plan', 'public/rigs/strider.json', '--cures', 'maybe'], /--cures: "maybe" is not one of yes, no/],
      [['plan', 'public/rigs/strider.json', '--speed', '2'], /plan has no such option/],
      [['bake', 'public/rigs/strider.json'], /"bake" is no command/],
    ];
    for (const [args, expected] of cases) {
      const { status, err, out } = runRig(...args);
      expect(status, args.join(' ')).toBe(2);
      expect(err).toMatch(expected);
      expect(out).toBe('');
    }
  });
});
