/** How far each figure of a built rig may lie from the drawing, and the draw of one rig within that. */
import { createRandom, drawUniform } from '../control';
import type { QuantityInfo } from '../rig';
import { AS_DRAWN, type Build } from './build';

/** Half widths, drawn evenly either way. */
export interface Tolerances {
  /** share */ readonly mass: number;
  /** m */ readonly centreAcross: number;
  /** m */ readonly centreUp: number;
  /** share */ readonly wheelSpeed: number;
  /** share */ readonly servoLag: number;
  /** share */ readonly backlash: number;
  /** share */ readonly noise: number;
  /** share */ readonly friction: number;
  /** share, of the shoves in the rig's own run */ readonly shove: number;
}

export const TOLERANCE_NAMES = [
  'mass',
  'centreAcross',
  'centreUp',
  'wheelSpeed',
  'servoLag',
  'backlash',
  'noise',
  'friction',
  'shove',
] as const satisfies readonly (keyof Tolerances)[];
export type ToleranceName = (typeof TOLERANCE_NAMES)[number];

/** Careful work with common parts: common practice. */
export const USUAL_TOLERANCES: Tolerances = {
  mass: 0.03,
  centreAcross: 0.004,
  centreUp: 0.006,
  wheelSpeed: 0.03,
  servoLag: 0.3,
  backlash: 0.5,
  noise: 0.5,
  friction: 0.5,
  shove: 0.1,
};

const share = (label: string, most: number): QuantityInfo => ({
  label,
  dimension: 'ratio',
  min: 0,
  max: most,
});
const length = (label: string): QuantityInfo => ({ label, dimension: 'length', min: 0, max: 0.5 });

/** Label, dimension and range of each, for fields and messages. */
export const TOLERANCE_FIELDS: Readonly<Record<ToleranceName, QuantityInfo>> = {
  mass: share('Mass, ± share', 0.5),
  centreAcross: length('Centre of mass across, ±'),
  centreUp: length('Centre of mass up, ±'),
  wheelSpeed: share('Wheel speed, ± share', 0.5),
  servoLag: share('Servo lag, ± share', 0.95),
  backlash: share('Backlash, ± share', 1),
  noise: share('Sensor noise, ± share', 1),
  friction: share('Gimbal friction, ± share', 1),
  shove: share('Shoves of the run, ± share', 1),
};

const isLength = (name: ToleranceName): boolean => name === 'centreAcross' || name === 'centreUp';

/** Channel of the tolerances among a run's streams; 1 is the sensor's, 2 the jitter's. */
const CHANNEL = 3;

/** A knock out of the blue: how large at most (N*s, either way), how high (m), and over which part of the run (s). */
export interface ShoveDraw {
  readonly most: number;
  readonly height: number;
  readonly from: number;
  readonly to: number;
}

export interface Draw {
  readonly build: Build;
  /** N*s to the left; 0 without a draw. */
  readonly shove: number;
  /** s */
  readonly shoveAt: number;
}

/** The rig of one run of a seed. Every stream has its own name, so nothing depends on who draws it, or when. */
export function drawBuild(
  tolerances: Tolerances,
  shove: ShoveDraw | undefined,
  seed: number,
  run: number,
): Draw {
  const random = createRandom(seed, run, CHANNEL);
  const build: Record<ToleranceName, number> = { ...AS_DRAWN };
  for (const name of TOLERANCE_NAMES) {
    const off = tolerances[name] * (2 * drawUniform(random) - 1);
    build[name] = isLength(name) ? off : 1 + off;
  }
  const size = drawUniform(random);
  const when = drawUniform(random);
  if (!shove) return { build, shove: 0, shoveAt: 0 };
  return {
    build,
    shove: shove.most * (2 * size - 1),
    shoveAt: shove.from + when * (shove.to - shove.from),
  };
}
