import { describe, expect, it } from 'vitest';
import {
  type CompiledRig,
  compileRig,
  fallModeFigures,
  fallOf,
  reportAfloat,
} from '../../../src/core/physics';
import { DEMONSTRATIONS, type Rig } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const compiledOf = (rig: Rig): CompiledRig => {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals[0]?.sentence);
  return outcome.compiled;
};
const walker = DEMONSTRATIONS.map(({ rig }) => rig).find(({ body }) => body.kind === 'legged') as Rig;
const hull = DEMONSTRATIONS.map(({ rig }) => rig).find(({ body }) => body.kind === 'hull') as Rig;
const valueIn = (figures: readonly { id: string; value: number }[], id: string): number =>
  figures.find((figure) => figure.id === id)?.value ?? Number.NaN;

describe('how it falls', () => {
  it('on an edge: the root of the linearised motion is the closed form sqrt(k / I)', () => {
    const compiled = compiledOf({ ...walker, footing: { kind: 'edge', offset: 0 } } as Rig);
    const fall = fallOf(compiled);
    if (fall.kind !== 'topples') throw new Error('a body on an edge topples');
    const figures = fallModeFigures(compiled);
    // Wheels at speed are locked to a body that moves in roll alone: they change nothing. Measured below 1e-9.
    expectClose(valueIn(figures, 'fallRate'), fall.rate, { rel: 1e-8 });
    expectClose(valueIn(figures, 'fallDoubling'), Math.LN2 / fall.rate, { rel: 1e-8 });
  });

  it('on feet: inertia about the foot edge is the parallel-axis sum that its own inputs give', () => {
    const figures = fallModeFigures(compiledOf(walker));
    const edge = figures.find(({ id }) => id === 'edgeInertia');
    if (!edge) throw new Error('a firm rig has a foot edge');
    const [centre, mass, distance] = edge.inputs.map(({ value }) => value) as [number, number, number];
    expectClose(edge.value, centre + mass * distance ** 2, { rel: 1e-12 }); // measured 2e-16
  });

  it('afloat: period and damping ratio follow from inertia, stiffness and linear damping', () => {
    const compiled = compiledOf(hull);
    if (hull.footing.kind !== 'float' || !compiled.floating) throw new Error('the hull floats');
    const fall = fallOf(compiled);
    const figures = fallModeFigures(compiled);
    const natural = Math.sqrt(fall.stiffness / fall.inertia);
    const ratio = hull.footing.linearDamping / (2 * Math.sqrt(fall.stiffness * fall.inertia));
    // The curve of arms is read between samples a degree apart: its slope upright is GM but for that.
    expectClose(valueIn(figures, 'swingDamping'), ratio, { rel: 0.01 });
    expectClose(valueIn(figures, 'swingPeriod'), (2 * Math.PI) / (natural * Math.sqrt(1 - ratio ** 2)), {
      rel: 0.01,
    });
    expectClose(valueIn(figures, 'swingHalving'), Math.LN2 / (ratio * natural), { rel: 0.02 });
  });

  it('afloat: added inertia lengthens the roll period by the root of the ratio of inertias', () => {
    const compiled = compiledOf(hull);
    const afloat = reportAfloat(compiled);
    if (!afloat || hull.footing.kind !== 'float') throw new Error('the hull floats');
    const dry = compiled.whole.inertia[0];
    const ratio = Math.sqrt((dry + hull.footing.addedInertia) / dry);
    expectClose(valueIn(afloat.figures, 'rollPeriod') / valueIn(afloat.figures, 'dryRollPeriod'), ratio, {
      rel: 1e-12,
    });
    expect(new Set(afloat.figures.map(({ id }) => id)).size).toBe(afloat.figures.length);
    expect(reportAfloat(compiledOf(walker))).toBeUndefined();
  });
});
