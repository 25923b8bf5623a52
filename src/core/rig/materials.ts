/**
 * Stock materials a wheel can be cut, cast, printed or filled with. Densities kg/m^3, stresses Pa.
 *
 * Two yields are kept apart on purpose. `minimumAllowable` is what a designer may count on for any bar
 * bought to the standard; `typicalYield` is what a test piece usually shows. Safe speed rests on the first.
 * Where no standard gives a minimum, 0.8 of typical is taken and the source text says so.
 */
export const MATERIAL_NAMES = [
  'aluminium 6061-T6',
  'aluminium 7075-T6',
  'steel 4140 annealed',
  'steel 4140 normalised',
  'steel 4140 QT205',
  'steel 4140 QT425',
  'steel 4140 QT540',
  'steel 4140 QT650',
  'steel S235',
  'stainless 304',
  'titanium 6Al-4V',
  'brass C36000',
  'tungsten B777 class 1',
  'tungsten B777 class 2',
  'tungsten B777 class 3',
  'tungsten B777 class 4',
  'steel 52100',
  'PLA printed',
  'PETG printed',
  'PA12 printed',
] as const;

export type MaterialName = (typeof MATERIAL_NAMES)[number];

/** A low and a high value that both occur in practice. */
export type Range = readonly [low: number, high: number];

interface MaterialCommon {
  /** kg/m^3; for a print, of the solid (100 % filled) plastic. */
  readonly density: number;
  /** Range allowed by the standard, or the nominal value twice. */
  readonly densityRange: Range;
  /** Pa, the stress a safe speed is worked out from. For a print: lowest in-plane strength across layers. */
  readonly minimumAllowable: number;
  /** Pa. For a print: the middle of its in-plane tensile strengths, as it breaks rather than yields. */
  readonly typicalYield: number;
  /** Pa. */
  readonly ultimate: number;
  /** Pa. */
  readonly youngsModulus: number;
  readonly poissonRatio: number;
  /** Where the numbers come from, as printed beside them. */
  readonly source: string;
}

export interface Metal extends MaterialCommon {
  readonly kind: 'metal';
}

export interface PrintedPlastic extends MaterialCommon {
  readonly kind: 'printed';
  /** Pa, tensile strength along the layers. */
  readonly inPlaneUltimate: Range;
  /** Strength across the layers as a fraction of that along them. */
  readonly acrossLayersFraction: Range;
}

export type Material = Metal | PrintedPlastic;

const MPA = 1e6;
const GPA = 1e9;

/** Where no standard gives a minimum for every section, this much of the typical yield is counted on. */
export const MINIMUM_OF_TYPICAL = 0.8;

const metal = (
  density: number | Range,
  minimum: number,
  typical: number,
  ultimate: number,
  modulus: number,
  poissonRatio: number,
  source: string,
  nominalDensity?: number,
): Metal => {
  const densityRange: Range = typeof density === 'number' ? [density, density] : density;
  return {
    kind: 'metal',
    density: nominalDensity ?? (densityRange[0] + densityRange[1]) / 2,
    densityRange,
    minimumAllowable: minimum * MPA,
    typicalYield: typical * MPA,
    ultimate: ultimate * MPA,
    youngsModulus: modulus * GPA,
    poissonRatio,
    source,
  };
};

const alloySteel = (state: string, typical: number, ultimate: number): Metal =>
  metal(
    7850,
    MINIMUM_OF_TYPICAL * typical,
    typical,
    ultimate,
    205,
    0.29,
    `ASM / Shigley table A-21 family, ${state}, typical; minimum is 0.8 of typical, as no standard fixes one for every section`,
  );

const tungsten = (grade: string, density: Range, nominal: number, ultimate: number, modulus: number): Metal =>
  metal(
    density,
    517,
    590,
    ultimate,
    modulus,
    0.28,
    `ASTM B777-15 tables 1 and 2, ${grade}: density band, minimum yield and ultimate; typical yield, modulus and Poisson's ratio from memory`,
    nominal,
  );

const printed = (
  density: number,
  inPlane: Range,
  modulus: number,
  poissonRatio: number,
  source: string,
): PrintedPlastic => {
  const across: Range = [0.4, 0.7];
  return {
    kind: 'printed',
    density,
    densityRange: [density, density],
    minimumAllowable: inPlane[0] * across[0] * MPA,
    typicalYield: ((inPlane[0] + inPlane[1]) / 2) * MPA,
    ultimate: inPlane[1] * MPA,
    youngsModulus: modulus * GPA,
    poissonRatio,
    inPlaneUltimate: [inPlane[0] * MPA, inPlane[1] * MPA],
    acrossLayersFraction: across,
    source: `${source}; across layers 0.4 to 0.7 of that, from memory; print your own test bar`,
  };
};

export const MATERIALS: Readonly<Record<MaterialName, Material>> = {
  'aluminium 6061-T6': metal(
    2700,
    241,
    276,
    310,
    68.9,
    0.33,
    'Aluminum Association typical; minimum MMPDS A-basis about 35 ksi',
  ),
  'aluminium 7075-T6': metal(
    2810,
    455,
    503,
    572,
    71.7,
    0.33,
    'Aluminum Association typical; minimum MIL-HDBK-5 A-basis, low end of 66 to 72 ksi by form',
  ),
  'steel 4140 annealed': alloySteel('annealed at 815 °C', 417, 655),
  'steel 4140 normalised': alloySteel('normalised at 870 °C', 655, 1020),
  'steel 4140 QT205': alloySteel('quenched and tempered at 205 °C (brittle)', 1641, 1772),
  'steel 4140 QT425': alloySteel('quenched and tempered at 425 °C', 1138, 1251),
  'steel 4140 QT540': alloySteel('quenched and tempered at 540 °C', 834, 951),
  'steel 4140 QT650': alloySteel('quenched and tempered at 650 °C', 655, 758),
  'steel S235': metal(7850, 215, 290, 360, 210, 0.3, 'EN 10025-2, 40 to 100 mm section, from memory'),
  'stainless 304': metal(
    7930,
    205,
    290,
    515,
    193,
    0.29,
    'ASTM A240/A276 annealed, from memory; typical yield from memory',
  ),
  'titanium 6Al-4V': metal(
    4430,
    827,
    880,
    950,
    113.8,
    0.34,
    'MIL-HDBK-5 annealed bar, 120 ksi minimum, from memory; typical from memory',
  ),
  'brass C36000': metal(
    8498,
    103,
    310,
    400,
    97,
    0.34,
    "ASTM B16: 0.307 lb/in3, typical 45/58 ksi for 25 mm H02 rod, minimum yield 15 to 25 ksi by section (low end taken); Poisson's ratio from memory",
  ),
  'tungsten B777 class 1': tungsten('class 1 (90 % W)', [16850, 17300], 17000, 758, 275),
  'tungsten B777 class 2': tungsten('class 2 (92.5 % W)', [17150, 17850], 17500, 758, 300),
  'tungsten B777 class 3': tungsten('class 3 (95 % W)', [17750, 18350], 18000, 724, 330),
  'tungsten B777 class 4': tungsten('class 4 (97 % W)', [18250, 18850], 18500, 689, 350),
  'steel 52100': metal(
    7810,
    MINIMUM_OF_TYPICAL * 2030,
    2030,
    2240,
    208,
    0.3,
    'ISO 683-17 / ISO 3290-1 ball steel, 60 to 66 HRC; strengths from memory, brittle: use for balls only; minimum is 0.8 of typical',
  ),
  'PLA printed': printed(
    1240,
    [45, 60],
    3.37,
    0.36,
    "Tymrak, Kreiger & Pearce, Materials & Design 58 (2014): mean 56.6 MPa, E 3.37 GPa; Poisson's ratio from memory",
  ),
  'PETG printed': printed(
    1270,
    [40, 50],
    2.0,
    0.38,
    "Bembenek et al., Polymers 14 (2022) 2446; modulus and Poisson's ratio from memory",
  ),
  'PA12 printed': printed(1010, [40, 50], 1.6, 0.4, 'typical of makers, from memory'),
};
