import { readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import ts from 'typescript';
import { describe, expect, it } from 'vitest';

const root = resolve(import.meta.dirname, '../../..');
const source = join(root, 'src');

/** Within core, each folder may use only those before it. */
const CORE_ORDER = ['units', 'rig', 'physics', 'control', 'planning', 'trial', 'bench', 'handover'];
/** Rings outside core, and what each may use. */
const RINGS: Readonly<Record<string, readonly string[]>> = {
  core: ['core'],
  yard: ['core', 'yard'],
  workers: ['core', 'yard', 'workers'],
  headless: ['core', 'yard', 'headless'],
  app: ['core', 'yard', 'workers', 'app'],
};
/** Packages that core may lean on: pure, no DOM. */
const CORE_PACKAGES = ['valibot', 'ml-matrix', 'fft.js', 'papaparse'];

interface Arrow {
  readonly from: string;
  readonly to: string;
}

function filesUnder(folder: string): string[] {
  return readdirSync(folder).flatMap((entry) => {
    const path = join(folder, entry);
    if (statSync(path).isDirectory()) return filesUnder(path);
    return /\.tsx?$/.test(entry) && !entry.endsWith('.d.ts') ? [path] : [];
  });
}

/** Every import of a text, type-only and dynamic ones included. */
const importsOf = (text: string): string[] =>
  ts.preProcessFile(text, true, true).importedFiles.map((file) => file.fileName);

/** Where a path stands: its ring, and inside core its folder. */
function placeOf(path: string): { ring: string; folder: string | undefined } {
  const [ring, folder] = relative(source, path).split('/');
  return { ring: ring as string, folder: ring === 'core' ? folder : undefined };
}

/** What is wrong with an arrow; undefined when nothing is. */
function faultOf({ from, to }: Arrow): string | undefined {
  const here = placeOf(from);
  if (!Object.hasOwn(RINGS, here.ring) && here.ring.includes('.') === false) return `${here.ring} is no ring`;
  if (here.folder !== undefined && !CORE_ORDER.includes(here.folder))
    return `core has no folder ${here.folder}`;
  if (!to.startsWith('.')) {
    const name = to.startsWith('@') ? to.split('/').slice(0, 2).join('/') : to.split('/')[0];
    if (here.ring === 'core' && !CORE_PACKAGES.includes(name as string)) return `core may not use ${to}`;
    if (here.ring === 'yard' && name !== 'cannon-es') return `the yard may use cannon-es only, not ${to}`;
    return undefined;
  }
  const target = resolve(dirname(from), to);
  if (!target.startsWith(source)) return `${to} leaves src`;
  const there = placeOf(target);
  if (!RINGS[here.ring]?.includes(there.ring)) return `${here.ring} may not use ${there.ring}`;
  if (here.ring === 'core') {
    const mine = CORE_ORDER.indexOf(here.folder as string);
    const theirs = CORE_ORDER.indexOf(there.folder as string);
    if (theirs < 0) return `core has no folder ${there.folder}`;
    if (theirs > mine) return `core/${here.folder} may not use core/${there.folder}`;
  }
  const isElsewhere = there.ring !== here.ring || there.folder !== here.folder;
  const depth = relative(source, target).split('/').length;
  const door = there.ring === 'core' ? 2 : 1;
  if (isElsewhere && there.ring !== 'workers' && depth > door)
    return `${to} goes past the door of ${there.ring}/${there.folder ?? ''}`;
  return undefined;
}

describe('arrows between folders', () => {
  const arrows = filesUnder(source).flatMap((from) =>
    importsOf(readFileSync(from, 'utf8')).map((to) => ({ from, to })),
  );

  it('point inward only, and through the doors', () => {
    const faults = arrows.flatMap((arrow) => {
      const fault = faultOf(arrow);
      return fault === undefined ? [] : [`${relative(root, arrow.from)}: ${fault}`];
    });
    expect(faults).toEqual([]);
    expect(arrows.length).toBeGreaterThan(50);
  });

  it('are told when they are wrong', () => {
    const from = (path: string, to: string) => faultOf({ from: join(source, path), to });
    expect(from('core/physics/a.ts', '../planning')).toMatch(/may not use core\/planning/);
    expect(from('core/physics/a.ts', '../units/quantities')).toMatch(/past the door/);
    expect(from('core/physics/a.ts', 'three')).toMatch(/may not use three/);
    expect(from('core/gadgets/a.ts', '../units')).toMatch(/no folder gadgets/);
    expect(from('core/units/a.ts', '../../app/state')).toMatch(/core may not use app/);
    expect(from('yard/a.ts', '../workers')).toMatch(/yard may not use workers/);
    expect(from('gadgets/a.ts', '../core/units')).toMatch(/no ring/);
    expect(from('core/physics/a.ts', '../../../tests/support/closeTo')).toMatch(/leaves src/);
    expect(from('core/physics/a.ts', '../units')).toBeUndefined();
    expect(
      importsOf("import type { A } from './a'; export type { B } from './b'; const c = import('./c');"),
    ).toEqual(['./a', './b', './c']);
  });
});
