import { MATERIALS, type MaterialName, type WheelPart } from '../rig';
import type { Ring } from './joinedDiscs';
import { partProperties, type WheelFault, wheelProperties } from './wheelProperties';

/** A wheel's stack as rings that carry one another, with what sits in them. */
export interface BuiltWheel {
  readonly rings: readonly Ring[];
  /** The part and material each ring was cut from. */
  readonly owners: readonly { readonly part: number; readonly material: MaterialName }[];
  /** Bolt circles: the ring just inside each; the next in the list is just outside. */
  readonly holes: readonly { readonly below: number; readonly radius: number }[];
  /** Rows of balls and the wall each lies against. */
  readonly grooves: readonly {
    readonly balls: number;
    readonly part: number;
    readonly material: MaterialName;
    readonly wall: number;
    readonly pitch: number;
    readonly outer: number;
    readonly width: number;
  }[];
}

export type BuiltWheelOutcome =
  | { readonly kind: 'built'; readonly wheel: BuiltWheel }
  | { readonly kind: 'refused'; readonly faults: readonly WheelFault[] };

interface Load {
  readonly radius: number;
  /** kg, mass times pitch radius over circumference. */
  readonly pull: number;
  readonly isBolts: boolean;
}

interface Annulus {
  readonly part: number;
  readonly inner: number;
  readonly outer: number;
  readonly thickness: number;
  readonly offset: number;
  readonly material: MaterialName;
  readonly loads: Load[];
}

/** A bore below a millionth of the radius is finer than the metal's grain: the part counts as solid. */
const boreOf = (bore: number, radius: number): number => (bore < 1e-6 * radius ? 0 : bore);

const annulusOf = (part: WheelPart, index: number): Annulus | undefined => {
  switch (part.kind) {
    case 'disc':
    case 'hub': {
      const thickness = part.kind === 'disc' ? part.thickness : part.length;
      const { radius: outer, offset, material } = part;
      const inner = boreOf(part.bore, outer);
      return { part: index, inner, outer, thickness, offset, material, loads: [] };
    }
    case 'rim': {
      const { innerRadius: inner, outerRadius: outer, width: thickness, offset, material } = part;
      return { part: index, inner, outer, thickness, offset, material, loads: [] };
    }
    default:
      return undefined;
  }
};

/** Radii that agree to a tenth of a millimetre, or 2 % on a small wheel, are one joint. */
const isSameRadius = (a: number, b: number): boolean =>
  Math.abs(a - b) <= Math.min(1e-4, 0.02 * Math.max(a, b));

const overlapOf = (a: Annulus, b: Annulus): number =>
  Math.min(a.offset + a.thickness / 2, b.offset + b.thickness / 2) -
  Math.max(a.offset - a.thickness / 2, b.offset - b.thickness / 2);

/** The part that holds something at a radius and offset: the one whose middle plane is nearest. */
function holderAt(
  annuli: readonly Annulus[],
  offset: number,
  fits: (a: Annulus) => boolean,
): Annulus | undefined {
  const able = annuli.filter((a) => Math.abs(a.offset - offset) <= a.thickness / 2 && fits(a));
  return able.sort((a, b) => Math.abs(a.offset - offset) - Math.abs(b.offset - offset))[0];
}

/** Loads at one radius pull together; in order of radius. */
function mergeCuts(loads: readonly Load[]): Load[] {
  const cuts: Load[] = [];
  for (const load of [...loads].sort((a, b) => a.radius - b.radius)) {
    const last = cuts.at(-1);
    if (last && isSameRadius(last.radius, load.radius)) {
      cuts[cuts.length - 1] = {
        radius: last.radius,
        pull: last.pull + (load.pull * load.radius) / last.radius,
        isBolts: last.isBolts || load.isBolts,
      };
    } else {
      cuts.push(load);
    }
  }
  return cuts;
}

/** Cuts an annulus at the radii where something pulls on it. */
function ringsOf(
  annulus: Annulus,
  carrier: number,
  from: number,
): { rings: Ring[]; holes: BuiltWheel['holes'] } {
  const { density, youngsModulus, poissonRatio } = MATERIALS[annulus.material];
  const atBore = annulus.loads.filter((load) => isSameRadius(load.radius, annulus.inner));
  const cuts = mergeCuts(annulus.loads.filter((load) => !isSameRadius(load.radius, annulus.inner)));
  const rings: Ring[] = [];
  const holes: { below: number; radius: number }[] = [];
  let inner = annulus.inner;
  for (let i = 0; i <= cuts.length; i++) {
    const cut = cuts[i];
    if (cut?.isBolts) holes.push({ below: from + rings.length, radius: cut.radius });
    rings.push({
      inner,
      outer: cut?.radius ?? annulus.outer,
      thickness: annulus.thickness,
      density,
      youngsModulus,
      poissonRatio,
      carrier: rings.length === 0 ? carrier : from + rings.length - 1,
      edgePull: cut?.pull ?? 0,
      borePull: rings.length === 0 ? atBore.reduce((sum, load) => sum + load.pull, 0) : 0,
    });
    inner = cut?.radius ?? annulus.outer;
  }
  return { rings, holes };
}

/**
 * Sorts a stack into rings that carry one another, outward, and finds what holds balls and bolts.
 *
 * @param parts  the wheel's stack, m
 * @returns      rings each after its carrier, or what is held by nothing
 *
 * A rim that touches two webs is given to the one it overlaps most. O(parts^2).
 */
export function buildRings(parts: readonly WheelPart[]): BuiltWheelOutcome {
  const weighed = wheelProperties(parts);
  if (weighed.kind === 'refused') return weighed;
  const annuli = parts.map(annulusOf).filter((a) => a !== undefined);
  annuli.sort((a, b) => a.inner - b.inner || a.part - b.part);
  const faults: WheelFault[] = [];
  if (annuli.length === 0)
    faults.push({ field: 'parts', value: 'balls and bolts only', allowed: 'a disc, a hub or a rim as well' });
  const grooves: BuiltWheel['grooves'][number][] = [];
  parts.forEach((part, index) => {
    if (part.kind !== 'balls' && part.kind !== 'bolts') return;
    const radius = part.kind === 'balls' ? part.pitchRadius + part.diameter / 2 : part.pitchRadius;
    const isBalls = part.kind === 'balls';
    const holder = holderAt(
      annuli,
      part.offset,
      (a) =>
        radius < a.outer &&
        !isSameRadius(radius, a.outer) &&
        (radius > a.inner || (isBalls && isSameRadius(radius, a.inner))) &&
        (isBalls || !isSameRadius(radius, a.inner)),
    );
    if (!holder) {
      const allowed = isBalls
        ? 'a circle with a disc or rim outside it to hold the balls'
        : 'a circle inside a disc, hub or rim';
      faults.push({ field: `parts[${index}].pitchRadius`, value: part.pitchRadius, allowed });
      return;
    }
    const pull = (partProperties(part).mass * part.pitchRadius) / (2 * Math.PI * radius);
    holder.loads.push({ radius, pull, isBolts: !isBalls });
    if (isBalls) {
      const { part: owner, material, outer, thickness: width } = holder;
      grooves.push({
        balls: index,
        part: owner,
        material,
        wall: radius,
        pitch: part.pitchRadius,
        outer,
        width,
      });
    }
  });
  if (faults.length > 0) return { kind: 'refused', faults };
  return { kind: 'built', wheel: { ...joinAnnuli(annuli), grooves } };
}

function joinAnnuli(annuli: readonly Annulus[]): Omit<BuiltWheel, 'grooves'> {
  const rings: Ring[] = [];
  const owners: BuiltWheel['owners'][number][] = [];
  const holes: BuiltWheel['holes'][number][] = [];
  const outermost = new Map<Annulus, number>();
  for (const annulus of annuli) {
    const carriers = annuli.filter(
      (a) =>
        outermost.has(a) &&
        annulus.inner > 0 &&
        isSameRadius(a.outer, annulus.inner) &&
        a.inner < annulus.inner &&
        overlapOf(a, annulus) > 0,
    );
    const carrier = carriers.sort((a, b) => overlapOf(b, annulus) - overlapOf(a, annulus))[0];
    const cut = ringsOf(annulus, carrier === undefined ? -1 : outermost.get(carrier)!, rings.length);
    rings.push(...cut.rings);
    holes.push(...cut.holes);
    for (let i = 0; i < cut.rings.length; i++)
      owners.push({ part: annulus.part, material: annulus.material });
    outermost.set(annulus, rings.length - 1);
  }
  return { rings, owners, holes };
}
