/**
 * Closed forms of gyroscopic balancing: quick answers for screens, and what the exact dynamics must come to.
 * Symbols: I body inertia about the roll line, k toppling stiffness m g l, J gimbal inertia, k2 gimbal toppling
 * stiffness, h total momentum of the wheels at rest tilt, all SI. Positive k and k2 are unstable.
 */

/** Coefficients of I J s^4 + (h^2 - I k2 - J k) s^2 + k k2, highest power first. */
export type Quartic = readonly [number, number, number, number, number];

/**
 * Characteristic polynomial of a body on a roll line with a free gimbal and damping d1 (roll), d2 (gimbal).
 * Without damping it is I J s^4 + (h^2 - I k2 - J k) s^2 + k k2.
 * Source: Thomson and Tait, Treatise on Natural Philosophy (1879), sec. 345; Merkin, Introduction to the Theory of
 * Stability (1997).
 */
export function passiveGimbalPolynomial(
  I: number,
  J: number,
  k: number,
  k2: number,
  h: number,
  d1 = 0,
  d2 = 0,
): Quartic {
  return [I * J, I * d2 + J * d1, h * h - I * k2 - J * k + d1 * d2, -(d1 * k2 + d2 * k), k * k2];
}

/** Least momentum that holds a top-heavy body by a top-heavy free gimbal: sqrt(I k2) + sqrt(J k). Source: as above. */
export const leastPassiveMomentum = (I: number, J: number, k: number, k2: number): number =>
  Math.sqrt(I * k2) + Math.sqrt(J * k);

export type PassiveVerdict =
  | { readonly kind: 'held'; readonly slow: number; readonly fast: number }
  | { readonly kind: 'falls'; readonly why: 'gimbal does not topple' | 'too little momentum' };

/**
 * Whether a toppling body (k > 0) is held by a free, undamped gimbal, with its two angular frequencies, rad/s. One
 * root stays positive at any momentum when the gimbal is bottom-heavy. Damping makes a held case drift away slowly.
 */
export function judgePassiveGimbal(I: number, J: number, k: number, k2: number, h: number): PassiveVerdict {
  if (!(k2 > 0)) return { kind: 'falls', why: 'gimbal does not topple' };
  if (!(h > leastPassiveMomentum(I, J, k, k2))) return { kind: 'falls', why: 'too little momentum' };
  const b = h * h - I * k2 - J * k;
  const root = Math.sqrt(b * b - 4 * I * J * k * k2);
  const fast = Math.sqrt((b + root) / (2 * I * J));
  return { kind: 'held', fast, slow: Math.sqrt((k * k2) / (I * J)) / fast };
}

/** Nutation of a rotor in gimbals of inertia Ia and Ib, rad/s: H / sqrt(Ia Ib). Source: Arnold and Maunder (1961). */
export const nutationRate = (H: number, Ia: number, Ib: number): number => H / Math.sqrt(Ia * Ib);

/**
 * PID from roll angle to tilt angle, ideal servo: (I + h Kd) s^2 + h Kp s + (h Ki - k), highest power first. P acts as
 * damping, I as stiffness, D as inertia. The loop integrates torque = h times tilt rate.
 */
export const tiltLoopPolynomial = (
  I: number,
  k: number,
  h: number,
  gains: { readonly Kp: number; readonly Ki: number; readonly Kd: number },
): readonly [number, number, number] => [I + h * gains.Kd, h * gains.Kp, h * gains.Ki - k];

/** The same with a first-order servo lag T: I T s^3 + (I + h Kd) s^2 + (h Kp - k T) s + (h Ki - k). */
export const laggedTiltLoopPolynomial = (
  I: number,
  k: number,
  h: number,
  gains: { readonly Kp: number; readonly Ki: number; readonly Kd: number },
  lag: number,
): readonly [number, number, number, number] => [
  I * lag,
  I + h * gains.Kd,
  h * gains.Kp - k * lag,
  h * gains.Ki - k,
];

/**
 * Largest survivable shove about the roll line, N*m*s: M (1 - exp(-a dH / M)) / a, with momentum still available dH,
 * torque limit M and toppling rate a = sqrt(k/I). Tends to dH for a fast gimbal. An impulse P at height z gives P z.
 */
export const largestShove = (momentum: number, torqueLimit: number, topplingRate: number): number =>
  topplingRate === 0
    ? momentum
    : (-torqueLimit * Math.expm1((-topplingRate * momentum) / torqueLimit)) / topplingRate;

/** Roll torque of a geared scissored pair, N*m: 2 h rate cos(tilt); yaw and pitch are zero. Source: Brown and Peck, JGCD 2009. */
export const scissoredTorque = (h: number, tilt: number, rate: number): number =>
  2 * h * rate * Math.cos(tilt);

/** Stored momentum of a scissored pair, N*m*s: 2 h sin(tilt). */
export const scissoredMomentum = (h: number, tilt: number): number => 2 * h * Math.sin(tilt);

/** What a counter-rotating pair leaves over when it is not quite a pair. Body components about roll, pitch, yaw. */
export interface PairLeak {
  /** N*m. */
  readonly torque: readonly [number, number, number];
  /** Momentum that stands where a true pair has none, N*m*s. */
  readonly momentum: readonly [number, number, number];
}

/**
 * Leak of a pair whose wheels stand along the vertical at rest (momentum +h and -h) and tilt opposite ways about the
 * pitch axis: a share `speedMismatch` of h between the wheels, a servo that lags by `tiltLag` rad and by `rateLag`
 * rad/s, and a gimbal axis of the second turned by `axisError` rad about the vertical (small angles in the errors
 * only as far as they are given; exact otherwise). Torque is minus the momentum's rate, body at rest.
 */
export function pairLeak(
  h: number,
  tilt: number,
  rate: number,
  fault: {
    readonly speedMismatch: number;
    readonly tiltLag: number;
    readonly rateLag: number;
    readonly axisError: number;
  },
): PairLeak {
  const h1 = h * (1 + fault.speedMismatch / 2);
  const h2 = h * (1 - fault.speedMismatch / 2);
  const t2 = tilt - fault.tiltLag;
  const r2 = rate - fault.rateLag;
  const c = Math.cos(fault.axisError);
  const s = Math.sin(fault.axisError);
  // Wheel 1: h (sin t, 0, cos t). Wheel 2: -h tilted by -t2 about an axis turned by the error.
  const momentum = [
    h1 * Math.sin(tilt) + h2 * Math.sin(t2) * c - h * (Math.sin(tilt) + Math.sin(tilt)),
    h2 * Math.sin(t2) * s,
    h1 * Math.cos(tilt) - h2 * Math.cos(t2),
  ] as const;
  const torque = [
    -(h1 * Math.cos(tilt) * rate + h2 * Math.cos(t2) * r2 * c) + 2 * h * Math.cos(tilt) * rate,
    -h2 * Math.cos(t2) * r2 * s,
    h1 * Math.sin(tilt) * rate - h2 * Math.sin(t2) * r2,
  ] as const;
  return { torque: [torque[0], torque[1], torque[2]], momentum: [momentum[0], momentum[1], momentum[2]] };
}

/** Time to the tilt limit under a constant torque from null, s: H sin(limit)/torque. Source: momentum theorem. */
export const timeToTiltLimit = (H: number, limit: number, torque: number): number =>
  (H * Math.sin(limit)) / torque;

/** Tilt that an impulse about the output axis asks of one gimbal, rad: asin(impulse/H); NaN beyond its momentum. */
export const tiltForImpulse = (H: number, impulse: number): number => Math.asin(impulse / H);

/** Torque a gimbal drive must hold against a body rate about the output axis, N*m: H w cos(tilt). Source: Wie, ch. 7. */
export const gimbalHoldingTorque = (H: number, tilt: number, bodyRate: number): number =>
  H * bodyRate * Math.cos(tilt);

/** Rate of fast-top precession, rad/s: m g l / (I3 w3); a few per cent off for a slow top. */
export const fastPrecession = (mgl: number, spinMomentum: number): number => mgl / spinMomentum;

/** Gyroscopic couple, N*m: I w w_p. */
export const gyroscopicCouple = (axialInertia: number, spin: number, precession: number): number =>
  axialInertia * spin * precession;

/**
 * Rates of steady precession of a heavy top at lean theta, slow then fast, rad/s, from
 * I1 cos(theta) W^2 - I3 w3 W + m g l = 0; NaN when it spins too slowly. I1 about the pivot, w3 the total spin.
 * Source: Kibble and Berkshire, Classical Mechanics, 5th ed., ch. 12.
 */
export function steadyPrecession(
  I1: number,
  I3: number,
  w3: number,
  mgl: number,
  theta: number,
): readonly [slow: number, fast: number] {
  const L = I3 * w3;
  const root = Math.sqrt(L * L - 4 * I1 * mgl * Math.cos(theta));
  // The slow root from the product of roots: no digits lost to subtraction.
  return [(2 * mgl) / (L + root), (L + root) / (2 * I1 * Math.cos(theta))];
}

/** Least total spin for steady precession at lean theta; at theta = 0, for a sleeping top. rad/s. Source: as above. */
export const leastTopSpin = (I1: number, I3: number, mgl: number, theta: number): number =>
  (2 * Math.sqrt(I1 * mgl * Math.cos(theta))) / I3;
