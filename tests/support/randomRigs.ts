/** Rigs drawn at random from a seed: any body, footing, layout and job that the schema allows and a person might try. */

import { firstDisturbance, kindsFor } from '../../src/core/planning';
import {
  type Disturbance,
  LAYOUTS,
  type Layout,
  layOut,
  PACER,
  type Rig,
  SKIFF,
  STRIDER,
} from '../../src/core/rig';

/** A generator of even numbers from 0 to 1 (mulberry32). */
export function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const INLINE: Rig['body'] = {
  kind: 'inline',
  wheelbase: 0.5,
  frame: { length: 0.5, width: 0.12, height: 0.2, centreHeight: 0.3, mass: 6 },
  tyre: { radius: 0.12, crownRadius: 0.02, mass: 0.4 },
};

const SKEWS = [0.3, 0.9553, 1.3] as const;

/** The rig of a seed. */
export function drawRig(seed: number): Rig {
  const draw = seeded(seed);
  const pick = <T>(of: readonly T[]): T => of[Math.floor(draw() * of.length)] as T;
  const about = (value: number, by: number): number => value * by ** (2 * draw() - 1);
  const base = pick([STRIDER, PACER, SKIFF, STRIDER]);
  const layout = pick<Layout>(LAYOUTS);
  const pattern = base.array.gyros[0] as Rig['array']['gyros'][number];
  const tilt = about(0.6, 1.8);
  const gyros = layOut(
    layout,
    { ...pattern, speed: about(pattern.speed, 2), tilt: { min: -tilt, max: tilt } },
    { centre: pattern.position, spacing: 0.14, skew: pick(SKEWS) },
  );
  let rig: Rig = { ...base, name: `Seed ${seed}`, array: { gyros: [...gyros] } };
  if (base !== SKIFF) rig = withFooting(rig, draw, pick);
  const { gait } = rig.jobs;
  const changed: Rig['jobs']['gait'] =
    gait.kind === 'pattern' && rig.footing.kind === 'firm' && draw() < 0.7
      ? { ...gait, stepTime: about(gait.stepTime, 2), sway: about(0.03, 3), stepLength: about(0.04, 3) }
      : { kind: 'stand' };
  const duration = 2 + 4 * draw();
  const events = Math.floor(3 * draw());
  const sequence = Array.from({ length: events }, (): Disturbance => {
    const made = firstDisturbance(pick(kindsFor(rig)), duration * draw(), about(4, 4), 0.3);
    return made.kind === 'waves' || made.kind === 'sea' ? { ...made, time: 0, duration } : made;
  });
  return { ...rig, jobs: { ...rig.jobs, gait: changed, sequence, duration } };
}

function withFooting(rig: Rig, draw: () => number, pick: <T>(of: readonly T[]) => T): Rig {
  const footing = pick<Rig['footing']>([
    rig.footing,
    rig.footing,
    { kind: 'edge', offset: 0.01 * (draw() - 0.5) },
    { kind: 'point', position: [0, 0, 0] },
    { kind: 'rocker', radius: 0.05 + 0.5 * draw() },
  ]);
  if (footing.kind !== 'edge' || draw() < 0.5) return { ...rig, footing };
  return { ...rig, body: INLINE, footing };
}
