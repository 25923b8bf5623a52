import { findCommandChanges, type HeldCommand, simulateServo } from './servoMotion';

/** The five numbers a closed-loop run can correct. */
export interface RollParameters {
  /** kg*m^2, about the roll line. */
  readonly inertia: number;
  /** N*m*s: total momentum of the array; torque on the body = -momentum * d sin(tilt)/dt. */
  readonly momentum: number;
  /** s. */
  readonly lag: number;
  /** s. */
  readonly delay: number;
  /** m, to the left: a body heavy on its left falls to the left, moment -weight * offset. */
  readonly centreOffset: number;
}

/** Readings [from, from + length) that share one start. */
export interface Stretch {
  readonly from: number;
  readonly length: number;
}

/** A run cut into stretches, each with its own start. */
export interface RunData {
  readonly time: Float64Array;
  readonly roll: Float64Array;
  readonly command: Float64Array;
  readonly moment: Float64Array | undefined;
  readonly stiffness: number;
  readonly weight: number;
  readonly stretches: readonly Stretch[];
  readonly step: number;
  /** Instants at which the servo is asked for its tilt, and the command it follows. */
  readonly grid: Float64Array;
  readonly held: HeldCommand;
}

/** Runge-Kutta steps between two readings. */
const SUBSTEPS = 2;

/** Readings with the half steps of the integration between them, and the command as it is held. */
export function layGrid(
  time: Float64Array,
  command: Float64Array,
): { grid: Float64Array; held: HeldCommand } {
  const n = time.length;
  const fine = 2 * SUBSTEPS;
  const grid = new Float64Array((n - 1) * fine + 1);
  for (let i = 0; i + 1 < n; i++) {
    for (let k = 0; k < fine; k++) grid[i * fine + k] = time[i] + ((time[i + 1] - time[i]) * k) / fine;
  }
  grid[(n - 1) * fine] = time[n - 1];
  return { grid, held: findCommandChanges(time, command) };
}

/**
 * Residual (predicted minus measured roll) of every stretch, the best start of each already taken out; zero outside.
 *
 * I phi'' = k phi - W y - h d(sin tilt)/dt + M. With psi = phi' + (h/I) sin(tilt) the tilt rate drops out:
 * phi' = psi - (h/I) sin(tilt), psi' = (k phi - W y + M)/I, so that steps of the command need no derivative.
 *
 * @param out  readings long, rad
 */
export function predictRun(run: RunData, p: RollParameters, out: Float64Array): void {
  const { grid, held } = run;
  const tilt = new Float64Array(grid.length);
  simulateServo(
    { delay: p.delay, lag: p.lag, speedLimit: Number.POSITIVE_INFINITY, backlash: 0 },
    held,
    grid,
    tilt,
  );
  for (let i = 0; i < tilt.length; i++) tilt[i] = (p.momentum / p.inertia) * Math.sin(tilt[i]);
  const a2 = run.stiffness / p.inertia;
  const rest = (-run.weight * p.centreOffset) / p.inertia;
  out.fill(0);
  for (const { from, length } of run.stretches) {
    const u = new Float64Array(length);
    const v = new Float64Array(length);
    forceStretch(run, a2, rest, p.inertia, tilt, from, length, out);
    freeStretch(run, a2, from, u, v);
    project(u, v, from, out);
  }
}

function forceStretch(
  run: RunData,
  a2: number,
  rest: number,
  inertia: number,
  tilt: Float64Array,
  from: number,
  length: number,
  out: Float64Array,
): void {
  const fine = 2 * SUBSTEPS;
  let phi = 0;
  let psi = tilt[from * fine];
  for (let j = 0; j < length; j++) {
    const i = from + j;
    out[i] = phi - run.roll[i];
    if (j === length - 1) break;
    const h = (run.time[i + 1] - run.time[i]) / SUBSTEPS;
    const m0 = run.moment ? run.moment[i] / inertia : 0;
    const m1 = run.moment ? run.moment[i + 1] / inertia : 0;
    for (let k = 0; k < SUBSTEPS; k++) {
      const s0 = tilt[i * fine + 2 * k];
      const s1 = tilt[i * fine + 2 * k + 1];
      const s2 = tilt[i * fine + 2 * k + 2];
      const push = rest + m0 + ((m1 - m0) * (k + 0.5)) / SUBSTEPS;
      const p1 = psi - s0;
      const q1 = a2 * phi + push;
      const p2 = psi + 0.5 * h * q1 - s1;
      const q2 = a2 * (phi + 0.5 * h * p1) + push;
      const p3 = psi + 0.5 * h * q2 - s1;
      const q3 = a2 * (phi + 0.5 * h * p2) + push;
      const p4 = psi + h * q3 - s2;
      const q4 = a2 * (phi + h * p3) + push;
      phi += (h / 6) * (p1 + 2 * p2 + 2 * p3 + p4);
      psi += (h / 6) * (q1 + 2 * q2 + 2 * q3 + q4);
    }
  }
}

/**
 * The two free motions. For a body that topples they are taken as one that grows to 1 at the end and one that decays from
 * 1 at the start: cosh and sinh span the same, but are all but parallel over a long stretch.
 */
function freeStretch(run: RunData, a2: number, from: number, u: Float64Array, v: Float64Array): void {
  const n = u.length;
  const a = Math.sqrt(Math.abs(a2));
  const span = run.time[from + n - 1] - run.time[from];
  for (let j = 0; j < n; j++) {
    const t = run.time[from + j] - run.time[from];
    if (a * span < 1e-3) {
      u[j] = 1;
      v[j] = t;
    } else if (a2 > 0) {
      u[j] = Math.exp(a * (t - span));
      v[j] = Math.exp(-a * t);
    } else {
      u[j] = Math.cos(a * t);
      v[j] = Math.sin(a * t);
    }
  }
}

/** Takes the parts along u and v out of a stretch of `out` (Gram-Schmidt). */
function project(u: Float64Array, v: Float64Array, from: number, out: Float64Array): void {
  const n = u.length;
  normalise(u);
  let dot = 0;
  for (let j = 0; j < n; j++) dot += u[j] * v[j];
  for (let j = 0; j < n; j++) v[j] -= dot * u[j];
  normalise(v);
  for (const w of [u, v]) {
    let along = 0;
    for (let j = 0; j < n; j++) along += w[j] * out[from + j];
    for (let j = 0; j < n; j++) out[from + j] -= along * w[j];
  }
}

function normalise(w: Float64Array): void {
  let s = 0;
  for (let j = 0; j < w.length; j++) s += w[j] * w[j];
  s = 1 / Math.sqrt(s);
  for (let j = 0; j < w.length; j++) w[j] *= s;
}
