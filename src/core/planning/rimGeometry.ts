/** The lightest rim that stores a momentum at a chosen outer radius, width, material and rim speed: closed form. */
import { USUAL_SPEED_SQUARED_FACTOR } from '../physics';
import { MATERIALS, type MaterialName } from '../rig';

export interface RimAsk {
  /** N*m*s that the rim must store, apart from web and hub. */
  readonly momentum: number;
  /** m, outer radius and width (along the spin axis). */
  readonly radius: number;
  readonly width: number;
  readonly material: MaterialName;
  /** m/s at the outer radius. */
  readonly rimSpeed: number;
}

export type RimOutcome =
  | {
      readonly kind: 'rim';
      readonly innerRadius: number;
      /** kg, kg*m^2, rad/s. */
      readonly mass: number;
      readonly spinInertia: number;
      readonly speed: number;
    }
  /** Even a solid disc of this radius and width stores too little: what it stores, N*m*s. */
  | { readonly kind: 'too small'; readonly most: number };

/**
 * Rim speed at which the hoop stress of a thin ring, rho v^2, times the usual factor on speed squared meets the
 * material's minimum allowable, m/s. Any thicker rim is stressed less at the same rim speed.
 */
export function safeRimSpeed(material: MaterialName): number {
  const { minimumAllowable, density } = MATERIALS[material];
  return Math.sqrt(minimumAllowable / (USUAL_SPEED_SQUARED_FACTOR * density));
}

/**
 * Lightest rim. With J = pi rho w (R^4 - a^4) / 2 and h = J v / R:
 *
 *   a^4 = R^4 - 2 h R / (pi rho w v),
 *
 * lightest because every bit of mass then sits as far out as the width lets it.
 *
 * O(1).
 */
export function lightestRim({ momentum, radius, width, material, rimSpeed }: RimAsk): RimOutcome {
  if (!(radius > 0 && width > 0 && rimSpeed > 0 && momentum >= 0)) {
    throw new RangeError('radius, width and rim speed must be positive, momentum not negative');
  }
  const { density } = MATERIALS[material];
  const speed = rimSpeed / radius;
  const perFourth = (Math.PI * density * width) / 2;
  const inner = radius ** 4 - momentum / (perFourth * speed);
  if (inner < 0) return { kind: 'too small', most: perFourth * radius ** 4 * speed };
  const innerRadius = inner ** 0.25;
  return {
    kind: 'rim',
    innerRadius,
    mass: Math.PI * density * width * (radius * radius - innerRadius * innerRadius),
    spinInertia: momentum / speed,
    speed,
  };
}
