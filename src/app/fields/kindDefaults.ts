/** What a branch of a union starts with when it is chosen: values of a size that suits the rig as it stands. */
import { BENCH_SERVO, type Disturbance, type Rig, SKIFF, STRIDER, type WheelPart } from '../../core/rig';
import { type RigPath, readAt } from './rigPath';

type Kinds = Readonly<Record<string, (rig: Rig, path: RigPath) => unknown>>;

const beamOf = (rig: Rig): { beam: number; depth: number } =>
  rig.body.kind === 'hull' ? rig.body.section : { beam: 1.5, depth: 0.6 };

const FOOTINGS: Kinds = {
  firm: () => STRIDER.footing,
  edge: () => ({ kind: 'edge', offset: 0 }),
  point: () => ({ kind: 'point', position: [0, 0, 0] }),
  rocker: () => ({ kind: 'rocker', radius: 0.1 }),
  float: () => SKIFF.footing,
};

const SECTIONS: Kinds = {
  deadrise: (rig) => ({ kind: 'deadrise', ...sizeOf(rig), deadrise: (12 * Math.PI) / 180 }),
  bilge: (rig) => ({ kind: 'bilge', ...sizeOf(rig), bilgeRadius: 0.3 * beamOf(rig).depth }),
};

const sizeOf = (rig: Rig): { beam: number; depth: number } => {
  const { beam, depth } = beamOf(rig);
  return { beam, depth };
};

const KEELS: Kinds = {
  none: () => ({ kind: 'none' }),
  fin: (rig) => ({
    kind: 'fin',
    depth: 0.4 * beamOf(rig).depth,
    length: 0.5 * beamOf(rig).beam,
    thickness: 0.03,
    mass: 20,
  }),
};

const DRIVES: Kinds = {
  servo: () => ({ kind: 'servo', servo: BENCH_SERVO }),
  free: () => ({ kind: 'free', stiffness: 0.1, damping: 0.01, centreOffset: [0, 0, 0] }),
  locked: () => ({ kind: 'locked' }),
  // A gimbal can follow another only if there is another, and the first of them follows nobody.
  geared: (rig, path) =>
    rig.array.gyros.length > 1 && path[2] !== 0
      ? { kind: 'geared', leader: 2 * Math.floor((path[2] as number) / 2), ratio: -1 }
      : undefined,
};

const SPINS: Kinds = {
  held: () => ({ kind: 'held' }),
  coasting: () => ({ kind: 'coasting' }),
  actuated: () => ({ kind: 'actuated', torque: 0.1 }),
};

const HOUSINGS: Kinds = {
  open: () => ({ kind: 'open' }),
  shrouded: () => ({ kind: 'shrouded', gap: 0.004 }),
  evacuated: () => ({ kind: 'evacuated', gap: 0.004, pressure: 2000 }),
};

const GAITS: Kinds = {
  stand: () => ({ kind: 'stand' }),
  pattern: (rig) =>
    rig.body.kind === 'legged'
      ? {
          ...STRIDER.jobs.gait,
          pattern: rig.body.legs === 2 ? 'walk' : rig.body.legs === 4 ? 'pace' : 'tripod',
          stanceWidth: rig.body.hips.width,
        }
      : undefined,
};

const ESTIMATORS: Kinds = {
  complementary: () => ({ kind: 'complementary', timeConstant: 1.5 }),
  kalman: () => ({ kind: 'kalman' }),
};

/** The usual parts of a wheel, sized to a wheel's own outer radius, m. */
export const newWheelPart = (kind: WheelPart['kind'], radius: number): WheelPart => {
  const steel = 'steel 4140 QT540' as const;
  switch (kind) {
    case 'disc':
      return { kind, radius: 0.8 * radius, bore: 0.1 * radius, thickness: 0.004, material: steel, offset: 0 };
    case 'rim':
      return {
        kind,
        outerRadius: radius,
        innerRadius: 0.8 * radius,
        width: 0.01,
        material: steel,
        offset: 0,
      };
    case 'hub':
      return { kind, radius: 0.2 * radius, bore: 0.06 * radius, length: 0.018, material: steel, offset: 0 };
    case 'balls':
      return {
        kind,
        count: 12,
        diameter: 0.2 * radius,
        pitchRadius: 0.85 * radius,
        material: 'steel 52100',
        offset: 0,
      };
    case 'bolts':
      return { kind, count: 6, mass: 0.004, pitchRadius: 0.9 * radius, offset: 0 };
  }
};

export const DISTURBANCE_KINDS = ['shove', 'sideLoad', 'slope', 'payload', 'turn', 'waves', 'sea'] as const;

/** A disturbance of a size the rig should feel but may survive. */
export const newDisturbance = (kind: (typeof DISTURBANCE_KINDS)[number], rig: Rig): Disturbance => {
  const time = 1;
  const height = Math.max(...rig.array.gyros.map((gyro) => gyro.position[2]), 0.3);
  switch (kind) {
    case 'shove':
      return { kind, time, impulse: 0.4, height, direction: Math.PI / 2 };
    case 'sideLoad':
      return { kind, time, duration: 0.5, force: 1, height, direction: Math.PI / 2 };
    case 'slope':
      return { kind, time, duration: 2, angle: 0.02, direction: Math.PI / 2 };
    case 'payload':
      return { kind, time, duration: 2, mass: 0.1, position: [0, 0.05, height] };
    case 'turn':
      return { kind, time, duration: 3, speed: 1, radius: 8 };
    case 'waves':
      return { kind, time: 0, duration: rig.jobs.duration, height: 0.2, period: 2.6, heading: Math.PI / 2 };
    case 'sea':
      return {
        kind,
        time: 0,
        duration: rig.jobs.duration,
        significantHeight: 0.25,
        peakPeriod: 3,
        spectrum: 'jonswap',
        heading: Math.PI / 2,
        speed: 0,
        seed: 1,
      };
  }
};

const BY_LAST_KEY: Readonly<Record<string, Kinds>> = {
  footing: FOOTINGS,
  section: SECTIONS,
  keel: KEELS,
  drive: DRIVES,
  spin: SPINS,
  housing: HOUSINGS,
  gait: GAITS,
  estimator: ESTIMATORS,
};

/** The value a branch starts with at a place of the rig; undefined when it cannot be chosen there. */
export function kindDefault(rig: Rig, path: RigPath, kind: string): unknown {
  const now = readAt(rig, path) as { readonly kind?: unknown } | undefined;
  if (now?.kind === kind) return now;
  return BY_LAST_KEY[String(path.at(-1))]?.[kind]?.(rig, path);
}
