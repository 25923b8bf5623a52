/**
 * Plane vectors as complex numbers. Angles are measured on the wheel from the mark, positive in the direction of
 * rotation. A reading is the part of the vibration at wheel speed, amplitude * cos(turn + angle), `turn` counted from the
 * passing of the mark; so a mass at wheel angle b adds a reading at angle b plus a fixed lag, and reading and mass turn
 * the same way.
 */
export interface Phasor {
  readonly re: number;
  readonly im: number;
}

export const phasor = (size: number, angle: number): Phasor => ({
  re: size * Math.cos(angle),
  im: size * Math.sin(angle),
});
export const sizeOf = (a: Phasor): number => Math.sqrt(a.re * a.re + a.im * a.im);
/** 0 to 2 pi. */
export const angleOf = (a: Phasor): number => {
  const angle = Math.atan2(a.im, a.re);
  return angle < 0 ? angle + 2 * Math.PI : angle;
};
export const add = (a: Phasor, b: Phasor): Phasor => ({ re: a.re + b.re, im: a.im + b.im });
export const subtract = (a: Phasor, b: Phasor): Phasor => ({ re: a.re - b.re, im: a.im - b.im });
export const multiply = (a: Phasor, b: Phasor): Phasor => ({
  re: a.re * b.re - a.im * b.im,
  im: a.re * b.im + a.im * b.re,
});
export const negate = (a: Phasor): Phasor => ({ re: -a.re, im: -a.im });
export function divide(a: Phasor, b: Phasor): Phasor {
  const d = b.re * b.re + b.im * b.im;
  return { re: (a.re * b.re + a.im * b.im) / d, im: (a.im * b.re - a.re * b.im) / d };
}
