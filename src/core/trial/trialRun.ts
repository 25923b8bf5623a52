/**
 * One trial: the closed loop with the servos, sensors and loop rate the rig names. The same step as the preview,
 * with the loop ticking at its own rate, late and unevenly, on what the sensors say.
 */
import {
  type Controller,
  createRandom,
  drawUniform,
  type RollOutcome,
  SERVO_STATE,
  type ServoGimbal,
} from '../control';
import { arrayMomentum, type CompiledRig } from '../physics';
import type { AxisSchedule, PlanSetting } from '../planning';
import { AS_DRAWN, type Build } from './build';
import type { Switches } from './evaluation';
import type { Motion } from './motion';
import { createMotion } from './motionRecorder';
import { type PreviewRun, prepareRun } from './previewRun';
import { advanceRun, GONE, LOST, tickRun } from './previewStep';
import { recordSample } from './recordSample';
import type { KernelRun } from './rollLoop';
import type { Surprise } from './runMount';
import { perfectSense, realSense } from './sensing';

/** s, longest step of the body. */
const LONGEST_STEP = 0.0025;
const SAMPLES_PER_SECOND = 100;

export interface TrialRequest {
  readonly switches: Switches;
  /** For gains that the rig leaves to be computed; undefined where none hold it. */
  readonly controller: Controller | undefined;
  /** s */
  readonly length: number;
  readonly build: Build;
  /** Perfect: the loop sees the true lean, at its own rate and with its own delay all the same. */
  readonly sensing: 'real' | 'perfect';
  readonly seed: number;
  /** Which of the seed's streams. */
  readonly run: number;
  readonly surprises: readonly Surprise[];
}

/** What a run came to, in numbers. */
export interface TrialFigures {
  readonly hasFallen: boolean;
  /** s; the length of the run when it did not fall. */
  readonly fellAt: number;
  /** rad */
  readonly peakLean: number;
  /** rad, root mean square. */
  readonly meanLean: number;
  /** rad, largest tilt of any gimbal. */
  readonly peakTilt: number;
  /** N*m, largest torque of any servo, or on a reaction wheel. */
  readonly peakTorque: number;
  /** s that the hardest-worked servo spent at the end of its speed-torque line. */
  readonly saturatedTime: number;
  /** N*m*s of roll momentum in the array at the end. */
  readonly finalMomentum: number;
}

/** Everything recorded, one entry a sample of the motion. */
export interface TrialColumns {
  readonly lean: Float64Array;
  readonly leanRate: Float64Array;
  /** What the firmware believes. */
  readonly leanEstimate: Float64Array;
  readonly rateEstimate: Float64Array;
  /** rad of tilt of the roll axis; N*m on the body for a reaction wheel. */
  readonly command: Float64Array;
  /** N*m, of the first servo, or on the body by reaction wheels. */
  readonly servoTorque: Float64Array;
}

export interface TrialRun {
  readonly motion: Motion;
  readonly columns: TrialColumns;
  readonly figures: TrialFigures;
}

export const usualTrial = (switches: Switches, length: number): TrialRequest => ({
  switches,
  controller: undefined,
  length,
  build: AS_DRAWN,
  sensing: 'real',
  seed: 1,
  run: 0,
  surprises: [],
});

/**
 * Runs a trial.
 *
 * @param setting    what was planned, or would have been
 * @param schedules  the plan's axes; empty when there is none
 *
 * About a fiftieth of real time. The same numbers for the same request, whoever runs it.
 */
export function runTrial(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  request: TrialRequest,
): TrialRun {
  const pace = paceOf(setting, request.length);
  const samples = Math.floor(pace.ticks / pace.every) + 1;
  const motion = { ...createMotion(setting, samples, pace.every * pace.tick), isCyclic: false };
  const column = () => new Float64Array(samples);
  const columns: TrialColumns = {
    lean: column(),
    leanRate: column(),
    leanEstimate: column(),
    rateEstimate: column(),
    command: column(),
    servoTorque: column(),
  };
  const figures = drive(setting, schedules, request, pace, (run, tick) => {
    const sample = tick / pace.every;
    if (!Number.isInteger(sample) || sample >= samples) return;
    recordSample(run, schedules, motion, sample);
    run.meanTorque.fill(0);
    columns.lean[sample] = run.state[0] as number;
    columns.leanRate[sample] = run.state[run.model.baseSpeedAt] as number;
    columns.leanEstimate[sample] = run.sense.lean;
    columns.rateEstimate[sample] = run.sense.leanRate;
    const isReaction = run.motorSigns.some((sign) => sign !== 0);
    columns.command[sample] = isReaction ? run.law.bodyTorque() : run.law.command();
    columns.servoTorque[sample] = isReaction
      ? (run.torque[0] as number)
      : ((run.actuators[0]?.work.state[SERVO_STATE.torque] ?? 0) as number);
  });
  return { motion, columns, figures };
}

/** The same without a record: for runs by the thousand. */
export const judgeTrial = (
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  request: TrialRequest,
): TrialFigures => drive(setting, schedules, request, paceOf(setting, request.length), undefined);

interface Pace {
  readonly tick: number;
  readonly ticks: number;
  readonly substeps: number;
  /** Ticks between samples. */
  readonly every: number;
}

function paceOf({ compiled }: PlanSetting, length: number): Pace {
  const { loopRate } = compiled.rig.sensing;
  const tick = 1 / loopRate;
  return {
    tick,
    ticks: Math.max(2, Math.round(length * loopRate)),
    substeps: Math.max(1, Math.ceil(tick / LONGEST_STEP - 1e-9), Math.ceil(tick * quickestRate(compiled))),
    every: Math.max(1, Math.round(loopRate / SAMPLES_PER_SECOND)),
  };
}

/** rad/s of sliding at which a gimbal's friction changes sign, as the star has it. */
const CREEP_RATE = 0.001;

/** 1/s, the quickest thing a free gimbal does: settle in its damper and friction, or nutate with the body. */
function quickestRate({ rig, model, speeds, wheels, whole }: CompiledRig): number {
  return rig.array.gyros.reduce((most, { drive, gimbal }, i) => {
    if (drive.kind !== 'free') return most;
    const inertia = model.hingeInertia[i] as number;
    const momentum = Math.abs((speeds[i] as number) * (wheels[i]?.spinInertia ?? 0));
    const slope = drive.damping + gimbal.friction + gimbal.stiction / CREEP_RATE;
    return Math.max(most, slope / inertia + momentum / Math.sqrt(inertia * whole.inertia[0]));
  }, 0);
}

function drive(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  request: TrialRequest,
  pace: Pace,
  note: ((run: PreviewRun, tick: number) => void) | undefined,
): TrialFigures {
  const { compiled } = setting;
  const { loopDelay, loopJitter, loopRate } = compiled.rig.sensing;
  const sense =
    request.sensing === 'real'
      ? realSense(compiled, request.build, request.seed, request.run)
      : perfectSense();
  const run = prepareRun(setting, schedules, request.switches, {
    build: request.build,
    sense,
    controller: request.controller,
    surprises: request.surprises,
    length: request.length,
    commandRate: loopRate,
  });
  const jitter = createRandom(request.seed, request.run, 2);
  const dt = pace.tick / pace.substeps;
  const peaks = createPeaks();
  let fellAt: number | undefined;
  for (let k = 0; k <= pace.ticks; k++) {
    const time = k * pace.tick;
    const isStanding = Math.abs(run.state[0] as number) < GONE;
    const late = loopDelay + (loopJitter > 0 ? loopJitter * (2 * drawUniform(jitter) - 1) : 0);
    if (isStanding) tickRun(run, time, pace.tick, Math.max(0, late));
    note?.(run, k);
    if (k === pace.ticks) break;
    for (let i = 0; i < pace.substeps && isStanding; i++) {
      advanceRun(run, time + i * dt, dt);
      for (let axis = 0; axis < 3; axis++) {
        run.meanTorque[axis] += (run.torque[axis] as number) / (pace.substeps * pace.every);
      }
    }
    notePeaks(run, peaks);
    if (fellAt === undefined && !(Math.abs(run.state[0] as number) < LOST[setting.kind])) {
      fellAt = time;
      // Nothing more is learnt from a body that lies there, unless somebody watches it.
      if (!note) break;
    }
  }
  return conclude(run, peaks, fellAt, request.length);
}

interface Peaks {
  lean: number;
  squares: number;
  count: number;
  tilt: number;
  torque: number;
}

const createPeaks = (): Peaks => ({ lean: 0, squares: 0, count: 0, tilt: 0, torque: 0 });

function notePeaks(run: PreviewRun, peaks: Peaks): void {
  const lean = Math.abs(run.state[0] as number);
  peaks.lean = Math.max(peaks.lean, lean);
  peaks.squares += lean * lean;
  peaks.count += 1;
  for (let i = 0; i < run.tilt.length; i++) {
    peaks.tilt = Math.max(peaks.tilt, Math.abs(run.tilt[i] as number));
    if (run.motorSigns[i] !== 0) {
      peaks.torque = Math.max(peaks.torque, Math.abs(run.effort[run.model.gimbals + i] as number));
    }
  }
  for (const { work } of run.actuators) {
    peaks.torque = Math.max(peaks.torque, Math.abs(work.state[SERVO_STATE.torque] as number));
  }
}

function conclude(run: PreviewRun, peaks: Peaks, fellAt: number | undefined, length: number): TrialFigures {
  const momentum = new Float64Array(3);
  arrayMomentum(run.model.array, run.tilt, run.momentum, momentum);
  return {
    hasFallen: fellAt !== undefined,
    fellAt: fellAt ?? length,
    peakLean: peaks.lean,
    meanLean: Math.sqrt(peaks.squares / Math.max(1, peaks.count)),
    peakTilt: peaks.tilt,
    peakTorque: peaks.torque,
    saturatedTime: run.actuators.reduce(
      (most, { work }) => Math.max(most, work.state[SERVO_STATE.saturatedTime] as number),
      0,
    ),
    finalMomentum: momentum[0] as number,
  };
}

/** The fast kernel's outcome in the same words. */
export const kernelFigures = ({ model }: KernelRun, outcome: RollOutcome, length: number): TrialFigures => ({
  hasFallen: outcome.hasFallen,
  fellAt: outcome.hasFallen ? outcome.duration : length,
  peakLean: outcome.peakRoll,
  meanLean: outcome.meanRoll,
  peakTilt: outcome.peakTilt,
  peakTorque: outcome.peakTorque,
  saturatedTime: outcome.saturatedTime,
  finalMomentum: model.actuator.kind === 'servo' ? storedIn(model.actuator.gimbals, outcome.finalTilt) : 0,
});

/** Roll momentum at the tilt of the first gimbal, the others following it. */
function storedIn(gimbals: readonly ServoGimbal[], tilt: number): number {
  const lead = gimbals[0]?.follow ?? 1;
  return gimbals.reduce((sum, g) => sum + g.momentum * Math.sin(g.follow * lead * tilt), 0);
}
