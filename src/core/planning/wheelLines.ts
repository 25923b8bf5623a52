import {
  bearingLoads,
  type CompiledRig,
  equivalentDynamicLoad,
  permissibleUnbalance,
  USUAL_SPEED_SQUARED_FACTOR,
  wheelStress,
} from '../physics';
import { MATERIALS } from '../rig';
import type { LedgerLine } from './ledger';
import { input, lineOf } from './ledgerLine';

/** Life a wheel's bearings are asked to reach, s: 1,000 hours, common practice for a machine that is tended. */
export const ASKED_BEARING_LIFE = 1000 * 3600;

/** Rim stress and bearing life of the hardest-worked wheel. */
export function wheelLines(compiled: CompiledRig, greatestRate: number): readonly LedgerLine[] {
  const { gyros } = compiled.rig.array;
  const lines: LedgerLine[] = [];
  let rim: LedgerLine | undefined;
  let bearing: LedgerLine | undefined;
  gyros.forEach((gyro, i) => {
    const wheel = compiled.wheels[i];
    if (!wheel || gyro.speed === 0) return;
    const outcome = wheelStress(gyro.wheel.parts, gyro.speed);
    const hardest = outcome.kind === 'stressed' ? outcome.stress.lines[0] : undefined;
    if (hardest) {
      const line = lineOf({
        name: 'rimStress',
        label: 'Wheel stress',
        dimension: 'stress',
        ask: [hardest.stress],
        have: [hardest.allowable / USUAL_SPEED_SQUARED_FACTOR],
        askFormula: hardest.note.formula,
        haveFormula: 'minimum allowable / factor on speed squared',
        inputs: [
          input('Speed', gyro.speed, 'spinRate'),
          input('Density', MATERIALS[hardest.material].density, 'density'),
          input('Minimum allowable', hardest.allowable, 'stress'),
          input('Factor', USUAL_SPEED_SQUARED_FACTOR, 'ratio'),
        ],
        source: hardest.note.source,
      });
      if (!rim || line.spare < rim.spare) rim = line;
    }
    const momentum = wheel.spinInertia * gyro.speed;
    const load = bearingLoads({
      mass: wheel.mass,
      momentum,
      unbalance: permissibleUnbalance(gyro.wheel.balanceGrade, gyro.speed, wheel.mass),
      speed: gyro.speed,
      gimbalRate: greatestRate,
      toLeft: gyro.bearing.span / 2,
      toRight: gyro.bearing.span / 2,
      preload: 0,
      loadFactor: 1,
    })[0];
    const equivalent = equivalentDynamicLoad(load.radial, load.axial, gyro.bearing.staticRating);
    const turns = (gyro.speed * ASKED_BEARING_LIFE) / (2 * Math.PI);
    const line = lineOf({
      name: 'bearing',
      label: 'Bearing life',
      dimension: 'force',
      ask: [equivalent * Math.cbrt(turns / 1e6)],
      have: [gyro.bearing.dynamicRating],
      askFormula: 'P ∛(turns / 10⁶), P from weight, unbalance and the gyroscopic couple h r / span',
      haveFormula: 'dynamic load rating C',
      inputs: [
        input('Load from the gyroscopic couple', load.gyroscopic, 'force'),
        input('Load from unbalance', load.unbalance, 'force'),
        input('Load from weight', load.weight, 'force'),
        input('Life asked', ASKED_BEARING_LIFE, 'time'),
      ],
      source: 'ISO 281:2007; 1,000 hours is common practice',
    });
    if (!bearing || line.spare < bearing.spare) bearing = line;
  });
  if (rim) lines.push(rim);
  if (bearing) lines.push(bearing);
  return lines;
}
