import { fitLeastSquares } from '../leastSquares';
import { differenceNoise } from '../statistics';
import {
  asGiven,
  type Estimate,
  estimateOf,
  type Given,
  type Identification,
  judgeResiduals,
  needPositive,
  patchOf,
  powerProduct,
  refuse,
  show,
} from './result';

export interface SpinUpLog {
  /** s, rising. */
  readonly time: Float64Array;
  /** rad/s. */
  readonly speed: Float64Array;
  /** V at the motor: one number, or logged. */
  readonly voltage: number | Float64Array;
  /** A, if logged. */
  readonly current?: Float64Array;
}

export interface SpinUpOptions {
  /** Spin inertia of wheel and rotor, kg*m^2. */
  readonly inertia: Given;
  /** Drag, from a coast-down: N*m, N*m*s, N*m*s^2. */
  readonly drag?: { readonly constant: number; readonly linear: number; readonly windage: number };
  /** A, where the controller cuts the current. */
  readonly currentLimit?: number;
}

interface SpinUpModel {
  readonly time: Float64Array;
  readonly voltage: Float64Array;
  readonly inertia: number;
  readonly drag: { readonly constant: number; readonly linear: number; readonly windage: number };
  readonly limit: number;
}

const MOST_POINTS = 20_000;

/**
 * Integrates J dW/dt = K i - drag(W), i = min((V - K W)/R, limit), and samples speed and current.
 *
 * @param p  3: resistance ohm, torque constant N*m/A (= V*s/rad), speed at time[0] rad/s
 */
function simulateSpinUp(m: SpinUpModel, p: Float64Array, speed: Float64Array, current: Float64Array): void {
  const R = p[0];
  const K = p[1];
  let w = p[2];
  const amps = (v: number, x: number): number => Math.min((v - K * x) / R, m.limit);
  const slope = (v: number, x: number): number =>
    (K * amps(v, x) - Math.sign(x) * m.drag.constant - m.drag.linear * x - m.drag.windage * x * Math.abs(x)) /
    m.inertia;
  const rate = (K * K) / (R * m.inertia);
  for (let i = 0; i < m.time.length; i++) {
    if (i > 0) {
      const span = m.time[i] - m.time[i - 1];
      const steps = Math.max(1, Math.ceil(span * rate * 20));
      if (!(steps < 1e5) || !(R > 0)) {
        speed.fill(Number.NaN);
        return;
      }
      const h = span / steps;
      for (let k = 0; k < steps; k++) {
        const from = m.voltage[i - 1] + ((m.voltage[i] - m.voltage[i - 1]) * k) / steps;
        const to = m.voltage[i - 1] + ((m.voltage[i] - m.voltage[i - 1]) * (k + 1)) / steps;
        const middle = 0.5 * (from + to);
        const k1 = slope(from, w);
        const k2 = slope(middle, w + 0.5 * h * k1);
        const k3 = slope(middle, w + 0.5 * h * k2);
        const k4 = slope(to, w + h * k3);
        w += (h / 6) * (k1 + 2 * k2 + 2 * k3 + k4);
      }
    }
    speed[i] = w;
    current[i] = amps(m.voltage[i], w);
  }
}

/**
 * Identifies winding resistance and torque constant from a spin-up of known inertia.
 *
 * The terminal speed fixes the constant, the time to get there (and the current, if logged) the resistance. Speed and
 * current are weighed by their own noise.
 *
 * @returns estimates 'motor resistance', 'torque constant', 'motor velocity constant'
 */
export function identifySpinUp(log: SpinUpLog, options: SpinUpOptions): Identification {
  const wrong = needPositive('The spin inertia', options.inertia.value, 'kg·m²');
  if (wrong) return wrong;
  const rows: number[] = [];
  const stride = Math.max(1, Math.ceil(log.time.length / MOST_POINTS));
  const volts = (i: number): number => (typeof log.voltage === 'number' ? log.voltage : log.voltage[i]);
  for (let i = 0; i < log.time.length; i += stride) {
    if (
      Number.isFinite(log.speed[i]) &&
      Number.isFinite(volts(i)) &&
      (!log.current || Number.isFinite(log.current[i]))
    )
      rows.push(i);
  }
  const n = rows.length;
  if (n < 20) return refuse(`The log has ${n} whole readings of the spin-up; 20 are needed.`);
  const pick = (f: (i: number) => number): Float64Array => Float64Array.from(rows, f);
  const time = pick((i) => log.time[i] - log.time[rows[0]]);
  const speed = pick((i) => log.speed[i]);
  const voltage = pick(volts);
  const measured = log.current ? pick((i) => (log.current as Float64Array)[i]) : undefined;
  const noise = Math.max(differenceNoise(speed), 1e-9 * Math.abs(speed[n - 1]));
  const gain = speed[n - 1] - speed[0];
  if (!(gain > 10 * noise))
    return refuse(
      `The wheel does not spin up: it gains ${show(gain)} rad/s against a noise of ${show(noise)} rad/s.`,
    );
  const model: SpinUpModel = {
    time,
    voltage,
    inertia: options.inertia.value,
    drag: options.drag ?? { constant: 0, linear: 0, windage: 0 },
    limit: options.currentLimit ?? Number.POSITIVE_INFINITY,
  };
  const K = voltage[n - 1] / Math.max(speed[n - 1], 1e-9);
  let at = 0;
  while (at < n - 1 && speed[at] - speed[0] < 0.63 * gain) at++;
  const R = Math.max((K * K * Math.max(time[at], time[1])) / model.inertia, 1e-4);
  const noiseCurrent = measured ? Math.max(differenceNoise(measured), 1e-9) : 1;
  const w = new Float64Array(n);
  const amps = new Float64Array(n);
  const outcome = fitLeastSquares(
    {
      names: ['motor resistance', 'torque constant', 'first speed'],
      rows: measured ? 2 * n : n,
      sizes: [R, K, gain],
      lower: [1e-6, 1e-9, Number.NEGATIVE_INFINITY],
      evaluate(p, out) {
        simulateSpinUp(model, p, w, amps);
        for (let i = 0; i < n; i++) out[i] = (w[i] - speed[i]) / noise;
        if (measured) for (let i = 0; i < n; i++) out[n + i] = (amps[i] - measured[i]) / noiseCurrent;
      },
    },
    [R, 0.95 * K, speed[0]],
    { isTimeSeries: true },
  );
  if (outcome.kind !== 'fitted') return refuse(outcome.sentence);
  const { fit } = outcome;
  let left = 0;
  for (let i = 0; i < n; i++) left += (fit.residuals[i] * noise) ** 2 / n;
  left = Math.sqrt(left);
  if (left > 0.1 * gain)
    return refuse(
      `The log is no spin-up of a wheel of ${show(options.inertia.value)} kg·m² on ${show(voltage[0])} V: ${show((100 * left) / gain, 2)} % of the gain in speed is left unexplained.`,
    );
  const constant = estimateOf(fit, 1, 'torque constant', 'N·m/A');
  let resistance = estimateOf(fit, 0, 'motor resistance', 'Ω');
  // Without a logged current the resistance scales inversely with the inertia assumed.
  if (!measured && options.inertia.halfWidth) {
    resistance = powerProduct('motor resistance', 'Ω', options.inertia.value, [
      [asGiven(resistance), 1],
      [options.inertia, -1],
    ]);
  }
  const loose = [resistance, constant].find((e) => e.high - e.low > Math.abs(e.value));
  if (loose) {
    return refuse(
      `The log does not fix the ${loose.name}: 95 % from ${show(loose.low)} to ${show(loose.high)} ${loose.unit}. Let the wheel run closer to its final speed, or log the current.`,
    );
  }
  const estimates: Estimate[] = [
    resistance,
    constant,
    powerProduct('motor velocity constant', 'rad/(s·V)', 1, [[asGiven(constant), -1]]),
  ];
  return {
    kind: 'identified',
    estimates,
    patches: [patchOf('motorResistance', resistance), patchOf('motorTorqueConstant', constant)],
    remarks: judgeResiduals(fit),
    residualSpread: left,
    comparison: {
      time,
      measured: speed,
      predicted: speed.map((v, i) => v + fit.residuals[i] * noise),
      unit: 'rad/s',
    },
  };
}
