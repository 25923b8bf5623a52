import type { MaterialName } from '../../core/rig';

/** How each wheel material looks on the stage, sRGB: the metal or plastic itself under workshop light. */
export const MATERIAL_TINTS: Readonly<Record<MaterialName, string>> = {
  'aluminium 6061-T6': '#c3c8ca',
  'aluminium 7075-T6': '#b6bcc0',
  'steel 4140 annealed': '#8d9499',
  'steel 4140 normalised': '#858c92',
  'steel 4140 QT205': '#6d7378',
  'steel 4140 QT425': '#71767b',
  'steel 4140 QT540': '#767c81',
  'steel 4140 QT650': '#7b8186',
  'steel S235': '#939a9f',
  'stainless 304': '#a9b0b3',
  'titanium 6Al-4V': '#a39e98',
  'brass C36000': '#c9a34e',
  'tungsten B777 class 1': '#5e6166',
  'tungsten B777 class 2': '#595c61',
  'tungsten B777 class 3': '#54575c',
  'tungsten B777 class 4': '#4f5257',
  'steel 52100': '#9aa2a8',
  'PLA printed': '#d8d3c4',
  'PETG printed': '#b9cdd1',
  'PA12 printed': '#e3e1da',
};
