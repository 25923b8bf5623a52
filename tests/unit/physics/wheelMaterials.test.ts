import { describe, expect, it } from 'vitest';
import { MATERIAL_NAMES, MATERIALS, type MaterialName } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const MPA = 1e6;

describe('stock materials', () => {
  it('holds the handbook figures: density within 1 %, strength of the named basis within 5 %', () => {
    // Aluminum Association typical; ASM / Shigley table A-21; ASTM B16; ASTM B777-15.
    const rows: readonly (readonly [MaterialName, density: number, yieldMPa: number, ultimateMPa: number])[] =
      [
        ['aluminium 6061-T6', 2700, 276, 310],
        ['aluminium 7075-T6', 2810, 503, 572],
        ['steel 4140 annealed', 7850, 417, 655],
        ['steel 4140 normalised', 7850, 655, 1020],
        ['steel 4140 QT205', 7850, 1641, 1772],
        ['steel 4140 QT425', 7850, 1138, 1251],
        ['steel 4140 QT540', 7850, 834, 951],
        ['steel 4140 QT650', 7850, 655, 758],
        ['brass C36000', 8498, 310, 400],
      ];
    for (const [name, density, yieldStress, ultimate] of rows) {
      const material = MATERIALS[name];
      expectClose(material.density, density, { rel: 0.01 }, name); // measured 0
      expectClose(material.typicalYield, yieldStress * MPA, { rel: 0.05 }, name); // measured 0
      expectClose(material.ultimate, ultimate * MPA, { rel: 0.05 }, name); // measured 0
    }
    expectClose(MATERIALS['aluminium 6061-T6'].minimumAllowable, 241 * MPA, { rel: 0.05 }); // MIL-HDBK-5 A-basis
    expectClose(MATERIALS['brass C36000'].minimumAllowable, 103 * MPA, { rel: 0.05 }); // ASTM B16
  });

  it('holds tungsten heavy alloys within ASTM B777-15 tables 1 and 2', () => {
    const bands = [
      [16850, 17300, 758],
      [17150, 17850, 758],
      [17750, 18350, 724],
      [18250, 18850, 689],
    ] as const;
    bands.forEach(([low, high, ultimate], i) => {
      const material = MATERIALS[`tungsten B777 class ${i + 1}` as MaterialName];
      expect(material.densityRange).toEqual([low, high]);
      expect(material.density).toBeGreaterThanOrEqual(low);
      expect(material.density).toBeLessThanOrEqual(high);
      expectClose(material.minimumAllowable, 517 * MPA, { rel: 1e-12 }); // measured 0
      expectClose(material.ultimate, ultimate * MPA, { rel: 1e-12 }); // measured 0
    });
  });

  it('holds printed plastics as ranges with their weakness across the layers', () => {
    // Tymrak, Kreiger & Pearce 2014; Bembenek et al. 2022.
    const rows = [
      ['PLA printed', 1240, 45, 60],
      ['PETG printed', 1270, 40, 50],
      ['PA12 printed', 1010, 40, 50],
    ] as const;
    for (const [name, density, low, high] of rows) {
      const material = MATERIALS[name];
      if (material.kind !== 'printed') throw new Error(`${name} is not printed`);
      expectClose(material.density, density, { rel: 0.01 }); // measured 0
      expectClose(material.inPlaneUltimate, [low * MPA, high * MPA], { rel: 1e-12 }); // measured 0
      expect(material.acrossLayersFraction).toEqual([0.4, 0.7]);
      expectClose(material.minimumAllowable, 0.4 * low * MPA, { rel: 1e-12 }); // measured 0
    }
  });

  it('never counts on more than is typical, nor typical on more than breaks it', () => {
    for (const name of MATERIAL_NAMES) {
      const m = MATERIALS[name];
      expect(m.minimumAllowable, name).toBeLessThan(m.typicalYield);
      expect(m.typicalYield, name).toBeLessThan(m.ultimate);
      expect(m.poissonRatio, name).toBeGreaterThan(0.2);
      expect(m.poissonRatio, name).toBeLessThan(0.5);
      expect(m.source.length, name).toBeGreaterThan(10);
    }
  });
});
