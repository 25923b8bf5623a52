/** What the simulated device measures and obeys: the rig's own closed loop, or its preview where the feet stand flat. */
import type { LoopbackBody } from '../../core/bench';
import {
  buildController,
  type Controller,
  createRollLoopWork,
  createRollRecord,
  LAW_GAINS,
  type Law,
  RECORD,
  RECORD_WIDTH,
  runRollLoop,
} from '../../core/control';
import { compileRig } from '../../core/physics';
import { type AxisSchedule, gimbalGroups, type LeanPlanSetting, setUpPlan } from '../../core/planning';
import type { Rig } from '../../core/rig';
import { AS_DRAWN, computeGains, kernelRun, type Motion, suitsKernel } from '../../core/trial';

export type BodyOutcome =
  | {
      readonly kind: 'body';
      readonly body: LoopbackBody;
      /** What it is, in words. */
      readonly sentence: string;
    }
  | { readonly kind: 'refused'; readonly sentence: string };

/** A device for a rig: its roll loop where it leans on servo-driven gimbals, else its preview played over and over. */
export function createRigBody(rig: Rig, motion: Motion | undefined): BodyOutcome {
  const compiled = compileRig(rig);
  const set = compiled.kind === 'refused' ? undefined : setUpPlan(compiled.compiled);
  if (set && set.kind !== 'refused' && suitsKernel(set.setting)) {
    const gains = computeGains(set.setting);
    const first =
      gains.kind === 'report'
        ? { law: gains.report.loop.law, values: [...gains.report.gains] }
        : { law: 'feedback' as Law, values: LAW_GAINS.feedback.map(() => 0) };
    return {
      kind: 'body',
      body: createLoopBody(set.setting, first.law, first.values),
      sentence:
        'The simulator runs this rig’s roll loop with its servo lag, backlash and sensor noise, its own run of disturbances and a shove now and then.',
    };
  }
  if (motion && motion.samples > 1) {
    return {
      kind: 'body',
      body: createReplayBody(motion),
      sentence: 'The simulator plays this rig’s preview over and over, and follows a schedule it is sent.',
    };
  }
  return { kind: 'refused', sentence: 'The rig as it stands has no motion to simulate.' };
}

/** A schedule as it is taken in point by point, and given out as a tilt at a time. */
interface HeldSchedule {
  take(word: string, fields: readonly string[]): string | undefined;
  /** Tilt of the first gimbal, rad, round and round; undefined while none is in use. */
  tiltAt(t: number): number | undefined;
  readonly isInUse: boolean;
  stop(): void;
}

function holdSchedule(): HeldSchedule {
  let time: number[] = [];
  let tilts: number[] = [];
  let isInUse = false;
  return {
    take(word, fields) {
      if (word === 'clear') {
        time = [];
        tilts = [];
        isInUse = false;
        return undefined;
      }
      if (word === 'point') {
        const [place, at, tilt] = fields.map(Number);
        if (place !== time.length) return `point ${fields[0]} where ${time.length} is next`;
        if (!Number.isFinite(at) || !Number.isFinite(tilt)) return 'no number';
        time.push(at as number);
        tilts.push(tilt as number);
        return undefined;
      }
      if (Number(fields[1]) !== time.length) return `${time.length} points are here`;
      if (time.length < 2) return 'at least 2 points are needed';
      isInUse = true;
      return undefined;
    },
    tiltAt(t) {
      const length = time.at(-1);
      if (!isInUse || !length) return undefined;
      const at = t % length;
      let k = 1;
      while (k < time.length - 1 && (time[k] as number) < at) k++;
      const [t0, t1] = [time[k - 1] as number, time[k] as number];
      const [a, b] = [tilts[k - 1] as number, tilts[k] as number];
      return t1 > t0 ? a + ((b - a) * (at - t0)) / (t1 - t0) : b;
    },
    get isInUse() {
      return isInUse;
    },
    stop() {
      isInUse = false;
    },
  };
}

const SCHEDULE_WORDS = ['clear', 'point', 'use'];

/** s of run that are worked out in one go. */
const CHUNK = 30;
/** s between two shoves that no plan knows of, and their size as a share of the array's momentum. */
const SHOVE_EVERY = 5;
const SHOVE_SHARE = 0.06;

function createLoopBody(setting: LeanPlanSetting, law: Law, first: readonly number[]): LoopbackBody {
  const names: readonly string[] = LAW_GAINS[law];
  const gains = [...first];
  const schedule = holdSchedule();
  const momentum = setting.axes.find(({ axis }) => axis === 'roll')?.array.momentum ?? 0;
  const shoves = Array.from(
    { length: Math.floor(CHUNK / SHOVE_EVERY) },
    (_, k) => [2 + k * SHOVE_EVERY, (k % 2 === 0 ? 1 : -1) * SHOVE_SHARE * momentum] as const,
  );
  // A schedule names the tilts of the gimbals; the loop's own is that of one whose momentum adds in roll.
  const lead = gimbalGroups(setting.compiled).find(({ leader }) => leader === 0);
  const sense = (lead?.sine[0] ?? 1) < 0 ? -1 : 1;
  const tick = 1 / setting.compiled.rig.sensing.loopRate;
  const record = createRollRecord(Math.ceil(CHUNK / tick) + 1, 1);
  const now = { roll: 0.01, rollRate: 0, tilt: 0 };
  let chunkStart = 0;
  let rows = 0;
  let isReleased = false;
  let hasFallen = false;
  let seed = 1;
  let latest = 0;

  const planned = (): readonly AxisSchedule[] => {
    if (!schedule.isInUse) return [];
    const none = new Float64Array(setting.time.length);
    const tilt = Float64Array.from(setting.time, (t) => sense * (schedule.tiltAt(t) ?? 0));
    return [
      {
        momentum: none,
        torque: none,
        tilt,
        tiltRate: none,
        tiltAcceleration: none,
        servoTorque: none,
        pressure: none,
        lean: none,
        leanRate: none,
      },
    ];
  };
  const run = (from: number): void => {
    const controller: Controller = buildController(law, gains);
    const { model, disturbance } = kernelRun(
      setting,
      planned(),
      { isArrayOn: !isReleased, isPlanOn: schedule.isInUse, isFeedbackOn: true },
      controller,
      AS_DRAWN,
      isReleased ? [] : shoves,
    );
    record.rows.fill(Number.NaN);
    const outcome = runRollLoop(
      model,
      createRollLoopWork(model),
      disturbance,
      { ...now, estimateError: 0, duration: CHUNK, seed, run: 0 },
      record,
    );
    seed++;
    rows = Math.max(1, outcome.rows);
    hasFallen = outcome.hasFallen;
    chunkStart = from;
  };
  const look = (t: number): number => RECORD_WIDTH * Math.min(rows - 1, Math.floor((t - chunkStart) / tick));
  const stay = (at: number): void => {
    now.roll = record.rows[at + RECORD.roll] as number;
    now.rollRate = record.rows[at + RECORD.rollRate] as number;
    now.tilt = record.rows[at + RECORD.tilt] as number;
  };
  /** Goes on from where it is under what was just told; a body on its side is set upright first. */
  const goOn = (): void => {
    stay(look(latest));
    if (hasFallen) Object.assign(now, { roll: 0.01, rollRate: 0, tilt: 0 });
    run(latest);
  };
  run(0);

  return {
    names: ['roll_rad', 'roll_rate_rad/s', 'tilt_rad', 'tilt_command_rad'],
    sample(t, out) {
      latest = t;
      if (t - chunkStart >= CHUNK && !hasFallen) {
        stay((rows - 1) * RECORD_WIDTH);
        run(t);
      }
      const at = look(t);
      out[0] = record.rows[at + RECORD.roll] as number;
      out[1] = hasFallen && t - chunkStart > rows * tick ? 0 : (record.rows[at + RECORD.rollRate] as number);
      out[2] = record.rows[at + RECORD.tilt] as number;
      out[3] = record.rows[at + RECORD.command] as number;
    },
    obey(word, fields) {
      if (word === 'gain') {
        const place = names.indexOf(fields[0] ?? '');
        const value = Number(fields[1]);
        if (place < 0) return `no gain ${fields[0]}; there are ${names.join(' ')}`;
        if (!Number.isFinite(value)) return 'no number';
        gains[place] = value;
      } else if (SCHEDULE_WORDS.includes(word)) {
        const reason = schedule.take(word, fields);
        if (reason !== undefined || word === 'point') return reason;
      } else return `no command ${word}`;
      isReleased = false;
      goOn();
      return undefined;
    },
    release() {
      isReleased = true;
      schedule.stop();
      goOn();
    },
  };
}

function createReplayBody(motion: Motion): LoopbackBody {
  const schedule = holdSchedule();
  const { gyros, samples, time } = motion;
  const step = (time[1] as number) - (time[0] as number);
  const length = step * (samples - 1);
  const names = [
    'roll_rad',
    ...Array.from({ length: gyros }, (_, g) => (g === 0 ? 'tilt_rad' : `tilt${g + 1}_rad`)),
  ];
  let heldAt: number | undefined;
  let latest = 0;
  const rollAt = (i: number): number => {
    const at = 7 * i;
    const [w, x, y, z] = [3, 4, 5, 6].map((k) => motion.pose[at + k]) as [number, number, number, number];
    return Math.atan2(2 * (w * x + y * z), 1 - 2 * (x * x + y * y));
  };
  return {
    names,
    sample(t, out) {
      latest = t;
      const at = Math.min(samples - 1, Math.floor(((heldAt ?? t) % length) / step));
      out[0] = rollAt(at);
      const sent = heldAt === undefined ? schedule.tiltAt(t) : undefined;
      for (let g = 0; g < gyros; g++) {
        const own = motion.tilt[at * gyros + g] as number;
        out[1 + g] = g === 0 && sent !== undefined ? sent : own;
      }
    },
    obey(word, fields) {
      if (word === 'gain') return 'the feet stand flat, so there is no lean to feed back';
      if (!SCHEDULE_WORDS.includes(word)) return `no command ${word}`;
      const reason = schedule.take(word, fields);
      if (reason === undefined && word === 'use') heldAt = undefined;
      return reason;
    },
    release() {
      schedule.stop();
      heldAt = latest;
    },
  };
}
