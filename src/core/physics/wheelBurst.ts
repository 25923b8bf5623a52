import type { FormulaNotes } from './formula';
import { STANDARD_GRAVITY } from './hydrostatics';
import type { WheelProperties } from './wheelProperties';

/** What a wheel could do if it came apart at speed. */
export interface WheelBurst {
  /** J, stored in the spin. */
  readonly energy: number;
  /** m, to which that energy would lift the wheel's own weight. */
  readonly throwHeight: number;
  /** m/s, of the outermost material. */
  readonly rimSpeed: number;
  /** m/s, of the centre of one piece, were a flat disc to part in three. */
  readonly pieceSpeed: number;
  /** J, in the flight of those three pieces; the rest stays in their spin. */
  readonly flightEnergy: number;
}

export const BURST_FORMULAS: FormulaNotes<'energy' | 'throwHeight' | 'rimSpeed' | 'pieceSpeed'> = {
  energy: { formula: 'E = J_s ω² / 2', source: 'definition' },
  throwHeight: { formula: 'h = E / (m g)', source: 'definition' },
  rimSpeed: { formula: 'v = ω R', source: 'definition' },
  pieceSpeed: {
    formula: 'v = ω r_c, r_c = √3/π R of a third of a flat disc',
    source:
      'centroid of a 120° sector, 2 R sin(60°)/(3 π/3); three equal pieces is the usual case for a guard, common practice',
  },
};

/** Centroid of a third of a flat disc over its radius: 2 sin(60 deg) / (3 (pi/3)) = sqrt(3)/pi. */
const THIRD_CENTROID = Math.sqrt(3) / Math.PI;

/**
 * Energy and speeds that a guard would have to stop.
 *
 * @param wheel  mass kg, inertia kg*m^2, outer radius m
 * @param speed  rad/s
 *
 * O(1). Source: definitions.
 */
export function wheelBurst(
  wheel: Pick<WheelProperties, 'mass' | 'spinInertia' | 'outerRadius'>,
  speed: number,
): WheelBurst {
  const energy = 0.5 * wheel.spinInertia * speed * speed;
  const pieceSpeed = Math.abs(speed) * THIRD_CENTROID * wheel.outerRadius;
  return {
    energy,
    throwHeight: energy / (wheel.mass * STANDARD_GRAVITY),
    rimSpeed: Math.abs(speed) * wheel.outerRadius,
    pieceSpeed,
    flightEnergy: Math.min(energy, 0.5 * wheel.mass * pieceSpeed * pieceSpeed),
  };
}
