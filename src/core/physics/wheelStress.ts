import { MATERIALS, type Material, type MaterialName, type Range, type WheelPart } from '../rig';
import {
  ballContact,
  ballRingStress,
  DISC_STRESS_FORMULAS,
  equivalentStress,
  holeEdgeStress,
  type PlaneStress,
} from './discStress';
import type { FormulaNote } from './formula';
import { joinedDiscs, jointTension, type Ring, ringGrowth, ringStress } from './joinedDiscs';
import { partProperties, type WheelFault } from './wheelProperties';
import { type BuiltWheel, buildRings } from './wheelRings';

/**
 * Allowable over stress that a wheel is to keep, so speed squared may rise by this before the allowable is
 * met: 2 leaves 1.41 in speed. Common practice for a wheel with no burst test of its own.
 */
export const USUAL_SPEED_SQUARED_FACTOR = 2;

export type StressPlace = 'spin' | 'hole edge' | 'groove wall';

/** The greatest stress of one kind in one part, and the speed it allows. */
export interface StressLine {
  /** Place of the part in the wheel's list. */
  readonly part: number;
  readonly place: StressPlace;
  /** m, radius at which it stands. */
  readonly radius: number;
  /** Pa at the given speed: the greatest of hoop, radial and von Mises. */
  readonly stress: number;
  /** Pa per (rad/s)^2; stress is this times speed squared. */
  readonly stressPerSquare: number;
  readonly material: MaterialName;
  /** Pa, minimum allowable of the material. */
  readonly allowable: number;
  /** rad/s, at which stress times the factor meets the allowable. */
  readonly safeSpeed: number;
  /** rad/s, safe speed at the weakest and the strongest the material is found; equal ends for a metal. */
  readonly safeSpeedRange: Range;
  readonly note: FormulaNote;
}

/** A joint between a part and the part inside it. */
export interface JointLine {
  readonly part: number;
  readonly carrier: number;
  readonly radius: number;
  /** Pa that glue, bolts or shrink fit must hold at the given speed; negative: the joint closes by itself. */
  readonly tension: number;
}

/** A ball against its groove: told, not limited, as a small dent is common and harmless. */
export interface ContactLine {
  readonly part: number;
  readonly carrier: number;
  /** N, of one ball. */
  readonly force: number;
  /** Pa, greatest Hertz pressure. */
  readonly pressure: number;
  /** Pa, pressure near which the wall starts to yield below its surface: 1.6 yield. */
  readonly yieldPressure: number;
}

export interface WheelStress {
  /** Least safe speed first. */
  readonly lines: readonly StressLine[];
  /** rad/s, of the first line. */
  readonly safeSpeed: number;
  /** (safe^2 - speed^2) / safe^2; negative: over its safe speed. */
  readonly spare: number;
  /** m, by which the innermost bore grows in radius; 0 for a wheel with no bore. */
  readonly boreGrowth: number;
  /** m, by which the outermost radius grows. */
  readonly rimGrowth: number;
  readonly joints: readonly JointLine[];
  readonly contacts: readonly ContactLine[];
  readonly isPrinted: boolean;
  /** rad/s, estimate at which it flies apart: pull across a diameter equals strength across it. */
  readonly burstSpeed: number;
}

export type WheelStressOutcome =
  | { readonly kind: 'stressed'; readonly stress: WheelStress }
  | { readonly kind: 'refused'; readonly faults: readonly WheelFault[] };

/** Pa, weakest and strongest that a material may be counted on. */
export const allowableRange = (material: Material): Range =>
  material.kind === 'printed'
    ? [material.minimumAllowable, material.inPlaneUltimate[1]]
    : [material.minimumAllowable, material.minimumAllowable];

const greatestOf = (s: PlaneStress): number =>
  Math.max(Math.abs(s.hoop), Math.abs(s.radial), equivalentStress(s));

const SAMPLES = 64;

/** The radius and size of the greatest stress across a ring, at 1 rad/s. */
function peakOf(ring: Ring, field: { readonly A: number; readonly B: number }) {
  let radius = ring.inner;
  let greatest = greatestOf(ringStress(ring, field, ring.inner));
  for (let i = 1; i <= SAMPLES; i++) {
    const r = ring.inner + ((ring.outer - ring.inner) * i) / SAMPLES;
    const here = greatestOf(ringStress(ring, field, r));
    if (here > greatest) {
      greatest = here;
      radius = r;
    }
  }
  return { radius, greatest };
}

function lineOf(
  part: number,
  place: StressPlace,
  radius: number,
  stressPerSquare: number,
  material: MaterialName,
  speed: number,
  factor: number,
  note: FormulaNote,
): StressLine {
  const [low, high] = allowableRange(MATERIALS[material]);
  const safeAt = (allowable: number): number => Math.sqrt(allowable / (factor * stressPerSquare));
  return {
    part,
    place,
    radius,
    stress: stressPerSquare * speed * speed,
    stressPerSquare,
    material,
    allowable: low,
    safeSpeed: safeAt(low),
    safeSpeedRange: [safeAt(low), safeAt(high)],
    note,
  };
}

/**
 * Stresses, safe speed, growth and joints of a wheel.
 *
 * @param parts   the wheel's stack, lengths m; rings that touch (bore of one on the outside of another, side by
 *                side along the axis) are taken as joined without slip; all others stand alone
 * @param speed   rad/s, at which stresses, joints and contacts are told; its sign does not matter
 * @param factor  allowable over stress to keep, at least 1
 * @returns       stresses, or what is not carried (balls with no wall, bolts in no part)
 *
 * Plane stress: good for parts thin against their radius; the middle of a bar longer than its radius has up to
 * 5 % more. O(parts). Sources: with each line.
 */
export function wheelStress(
  parts: readonly WheelPart[],
  speed: number,
  factor: number = USUAL_SPEED_SQUARED_FACTOR,
): WheelStressOutcome {
  const built = buildRings(parts);
  if (built.kind === 'refused') return built;
  const { wheel } = built;
  const fields = joinedDiscs(wheel.rings);
  const lines: StressLine[] = [];
  wheel.rings.forEach((ring, i) => {
    const { part, material } = wheel.owners[i]!;
    const peak = peakOf(ring, fields[i]!);
    const note = ring.inner > 0 ? DISC_STRESS_FORMULAS.boredDisc : DISC_STRESS_FORMULAS.solidDisc;
    lines.push(lineOf(part, 'spin', peak.radius, peak.greatest, material, speed, factor, note));
  });
  for (const hole of wheel.holes) {
    const { part, material } = wheel.owners[hole.below]!;
    const below = ringStress(wheel.rings[hole.below]!, fields[hole.below]!, hole.radius);
    const above = ringStress(wheel.rings[hole.below + 1]!, fields[hole.below + 1]!, hole.radius);
    const edge = Math.max(holeEdgeStress(below), holeEdgeStress(above));
    const note = DISC_STRESS_FORMULAS.holeEdge;
    lines.push(lineOf(part, 'hole edge', hole.radius, edge, material, speed, factor, note));
  }
  for (const groove of wheel.grooves) lines.push(grooveLine(groove, parts, speed, factor));
  lines.sort((a, b) => a.safeSpeed - b.safeSpeed);
  const safeSpeed = lines[0]!.safeSpeed;
  const growth = wheel.rings.map((ring, i) => ({
    bore: ringGrowth(ring, fields[i]!, ring.inner) * speed * speed,
    rim: ringGrowth(ring, fields[i]!, ring.outer) * speed * speed,
  }));
  return {
    kind: 'stressed',
    stress: {
      lines,
      safeSpeed,
      spare: 1 - (speed / safeSpeed) ** 2,
      boreGrowth: growth[indexOfLeast(wheel.rings.map((ring) => ring.inner))]!.bore,
      rimGrowth: growth[indexOfLeast(wheel.rings.map((ring) => -ring.outer))]!.rim,
      joints: wheel.rings.flatMap((ring, i): JointLine[] => {
        const part = wheel.owners[i]!.part;
        const carrier = ring.carrier < 0 ? part : wheel.owners[ring.carrier]!.part;
        if (carrier === part) return [];
        const tension = jointTension(ring, fields[i]!) * speed * speed;
        return [{ part, carrier, radius: ring.inner, tension }];
      }),
      contacts: wheel.grooves.map((groove) => contactLine(groove, parts, speed)),
      isPrinted: lines.some((line) => MATERIALS[line.material].kind === 'printed'),
      burstSpeed: burstSpeedOf(parts),
    },
  };
}

const indexOfLeast = (values: readonly number[]): number => values.indexOf(Math.min(...values));

type Groove = BuiltWheel['grooves'][number];

function grooveLine(groove: Groove, parts: readonly WheelPart[], speed: number, factor: number): StressLine {
  const { wall, outer, width, material, balls } = groove;
  const { density, poissonRatio } = MATERIALS[material];
  const { mass } = partProperties(parts[balls]!);
  const s = ballRingStress(density, poissonRatio, 1, wall, outer, width, mass, groove.pitch, wall);
  const note = DISC_STRESS_FORMULAS.pressedRing;
  return lineOf(groove.part, 'groove wall', wall, greatestOf(s), material, speed, factor, note);
}

function contactLine(groove: Groove, parts: readonly WheelPart[], speed: number): ContactLine {
  const row = parts[groove.balls] as Extract<WheelPart, { kind: 'balls' }>;
  const ball = MATERIALS[row.material];
  const wall = MATERIALS[groove.material];
  const force = (partProperties(row).mass / row.count) * row.pitchRadius * speed * speed;
  const softness = (m: Material): number => (1 - m.poissonRatio ** 2) / m.youngsModulus;
  const modulus = 1 / (softness(ball) + softness(wall));
  return {
    part: groove.balls,
    carrier: groove.part,
    force,
    pressure: ballContact(force, row.diameter, groove.wall, modulus).pressure,
    yieldPressure: 1.6 * wall.minimumAllowable,
  };
}

/** Speed at which the pull across a diameter of the whole wheel meets its ultimate strength across it, rad/s. */
function burstSpeedOf(parts: readonly WheelPart[]): number {
  let pull = 0;
  let strength = 0;
  for (const part of parts) {
    if (part.kind === 'balls' || part.kind === 'bolts') {
      pull += (partProperties(part).mass * part.pitchRadius) / (2 * Math.PI);
      continue;
    }
    const [inner, outer, thickness] =
      part.kind === 'rim'
        ? [part.innerRadius, part.outerRadius, part.width]
        : [part.bore, part.radius, part.kind === 'disc' ? part.thickness : part.length];
    const material = MATERIALS[part.material];
    const ultimate = material.kind === 'printed' ? material.inPlaneUltimate[0] : material.ultimate;
    pull += (material.density * thickness * (outer ** 3 - inner ** 3)) / 3;
    strength += ultimate * thickness * (outer - inner);
  }
  return Math.sqrt(strength / pull);
}
