import { spawnSync } from 'node:child_process';
import { mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import type { HandoverDocument } from '../../src/core/handover';
import { writeCHeader } from '../../src/core/handover';
import { PACER, SKIFF, STRIDER } from '../../src/core/rig';
import { expectClose } from '../support/closeTo';
import { fileEnding, handOver, IMPRINT, textOf } from '../support/madeHandover';

const folder = mkdtempSync(join(tmpdir(), 'header-'));
const FLAGS = ['-std=c99', '-pedantic', '-Wall', '-Wextra', '-Werror'];

beforeAll(() => {
  if (spawnSync('gcc', ['--version']).status !== 0)
    throw new Error(
      'This test compiles the C header with gcc, which is not here: install the packages gcc and libc6-dev.',
    );
});

/** Compiles and runs a program; what it printed, or what the compiler said. */
function run(name: string, header: string, program: string): string {
  const source = join(folder, `${name}.c`);
  writeFileSync(join(folder, `${name}.h`), header);
  writeFileSync(source, `#include <stdio.h>\n#include "${name}.h"\n${program}`);
  const built = spawnSync('gcc', [...FLAGS, '-o', join(folder, name), source], { encoding: 'utf8' });
  expect(built.stderr).toBe('');
  expect(built.status).toBe(0);
  return spawnSync(join(folder, name), { encoding: 'utf8', maxBuffer: 1e8 }).stdout;
}

const PRINT_ALL = (name: string, big: string): string => `
int main(void)
{
    unsigned long i, g;
    printf("%d\\n", ${name}_is_whole());
    for (i = 0; i < ${big}_INSTANTS; i++) printf("%.9g\\n", (double)${name}_time_s[i]);
    for (g = 0; g < ${big}_GIMBALS; g++)
        for (i = 0; i < ${big}_INSTANTS; i++) printf("%.9g\\n", (double)${name}_tilt_rad[g][i]);
    for (g = 0; g < ${big}_GIMBALS; g++)
        for (i = 0; i < ${big}_INSTANTS; i++) printf("%.9g\\n", (double)${name}_tilt_rate_rad_s[g][i]);
    for (i = 0; i < ${big}_GAINS; i++) printf("%.9g\\n", (double)${name}_gains[i]);
    return 0;
}
`;

describe('the C header', () => {
  it.each([STRIDER, PACER, SKIFF])(
    'compiles without a warning, and a program reads its numbers back',
    (rig) => {
      const handover = handOver(rig);
      const name = rig.name.toLowerCase();
      const header = textOf(fileEnding(handover, '-control.h'));
      const lines = run(name, header, PRINT_ALL(name, rig.name.toUpperCase())).trim().split('\n').map(Number);
      const { schedule, gains } = JSON.parse(
        textOf(fileEnding(handover, '-control.json')),
      ) as HandoverDocument;
      if (schedule.kind === 'none' || gains.kind === 'none') throw new Error('nothing to read back');
      expect(lines[0]).toBe(1);
      const numbers = [
        ...schedule.time,
        ...schedule.gimbals.flatMap(({ tilt }) => tilt),
        ...schedule.gimbals.flatMap(({ tiltRate }) => tiltRate),
        ...gains.gains.map(({ value }) => value),
      ];
      // The very floats, not merely near them.
      expectClose(lines.slice(1).map(Math.fround), numbers.map(Math.fround), { rel: 1e-12 }); // measured 0
    },
  );

  it('says so when a number has been changed by hand', () => {
    const header = textOf(fileEnding(handOver(STRIDER), '-control.h'));
    const number = /-?\d+\.\d+(e-\d+)?f/g;
    const all = [...header.matchAll(number)];
    const last = all[all.length - 1]!;
    const changed = `${header.slice(0, last.index)}${(Number.parseFloat(last[0]) * 1.0001).toPrecision(9)}f${header.slice(last.index + last[0].length)}`;
    expect(changed).not.toBe(header);
    const ask = 'int main(void) { printf("%d", strider_is_whole()); return 0; }\n';
    expect(run('whole', header, ask)).toBe('1');
    expect(run('changed', changed, ask)).toBe('0');
  });

  it('compiles whatever the rig is called, with a schedule, gains, both or neither', () => {
    const names = ['*/ int x; /*', '3rd "rig" \\', '??/ é\n#error no', 'über'];
    const schedule = {
      kind: 'schedule',
      isCyclic: false,
      time: Float64Array.of(0, 0.1),
      gimbals: [{ name: names[0]!, tilt: Float64Array.of(0, 1e-30), tiltRate: Float64Array.of(-1, 3e10) }],
    } as const;
    const gains = {
      kind: 'gains',
      law: 'pidTilt',
      gains: [{ name: 'kp', unit: 'rad/rad', value: 4 }],
    } as const;
    const none = { kind: 'none', sentence: 'There is */ none' } as const;
    names.forEach((name, i) => {
      const header = writeCHeader(name, 'ab', i & 1 ? schedule : none, i & 2 ? gains : none, {
        ...IMPRINT,
        program: name,
      });
      expect(run(`name${i}`, header, 'int main(void) { printf("built"); return 0; }\n')).toBe('built');
    });
  });
});
