/** What the rig weighs, where its centre is, and how it falls or rolls: the figures of the Weigh station. */
import type { Figure, FigureInput } from '../units';
import { arrayMomentum } from './arrayLaw';
import type { CompiledRig } from './compile';
import { STANDARD_GRAVITY } from './hydrostatics';
import { inertiaAbout } from './massProperties';

const input = (label: string, value: number, dimension: FigureInput['dimension']): FigureInput => ({
  label,
  value,
  dimension,
});

/** How a body left alone moves in roll. */
export type Fall =
  /** Goes over: lean grows as exp(rate t). */
  | { readonly kind: 'topples'; readonly rate: number; readonly stiffness: number; readonly inertia: number }
  /** Comes back: swings with a period. */
  | { readonly kind: 'swings'; readonly period: number; readonly stiffness: number; readonly inertia: number }
  /** Stands flat until its centre passes the edge of its feet: the angle that takes. */
  | {
      readonly kind: 'stands';
      readonly edge: number;
      readonly angle: number;
      readonly rate: number;
      readonly stiffness: number;
      readonly inertia: number;
    };

/**
 * Roll stiffness and inertia about the line the rig pivots on, array locked, and what follows from them.
 * A firm rig is taken as standing on one foot's middle line when its legs alternate, and tipping about the
 * outer edge of its stance.
 *
 * Source: small motion of a rigid body on a line, first principles; hulls: Derrett & Barrass.
 */
export function fallOf(compiled: CompiledRig): Fall {
  const { rig, whole } = compiled;
  const weight = whole.mass * STANDARD_GRAVITY;
  const [x, y, z] = whole.com;
  switch (rig.footing.kind) {
    case 'float': {
      const floating = compiled.floating;
      if (!floating) throw new Error('a floating rig is compiled with its flotation');
      const stiffness = weight * floating.flotation.GM;
      const inertia = whole.inertia[0] + floating.footing.addedInertia;
      return stiffness > 0
        ? { kind: 'swings', period: 2 * Math.PI * Math.sqrt(inertia / stiffness), stiffness, inertia }
        : { kind: 'topples', rate: Math.sqrt(-stiffness / inertia), stiffness, inertia };
    }
    case 'rocker': {
      const inertia = inertiaAbout(whole, [x, 0, 0])[0];
      const stiffness = weight * (rig.footing.radius - z);
      return stiffness > 0
        ? { kind: 'swings', period: 2 * Math.PI * Math.sqrt(inertia / stiffness), stiffness, inertia }
        : { kind: 'topples', rate: Math.sqrt(-stiffness / inertia), stiffness, inertia };
    }
    case 'edge':
    case 'point': {
      const pivot =
        rig.footing.kind === 'edge' ? ([x, rig.footing.offset, 0] as const) : rig.footing.position;
      const inertia = inertiaAbout(whole, [x, pivot[1], pivot[2]])[0];
      const stiffness = -weight * (z - pivot[2]);
      return stiffness > 0
        ? { kind: 'swings', period: 2 * Math.PI * Math.sqrt(inertia / stiffness), stiffness, inertia }
        : { kind: 'topples', rate: Math.sqrt(-stiffness / inertia), stiffness, inertia };
    }
    case 'firm': {
      const support = compiled.star.footing.kind === 'firm' ? compiled.star.footing.support : [];
      const left = Math.max(...support.map(([, side]) => side)) - y;
      const right = y - Math.min(...support.map(([, side]) => side));
      const edge = Math.min(left, right);
      const inertia = inertiaAbout(whole, [x, left < right ? y + left : y - right, 0])[0];
      const stiffness = -weight * z;
      return {
        kind: 'stands',
        edge,
        angle: Math.atan2(edge, z),
        rate: Math.sqrt(-stiffness / inertia),
        stiffness,
        inertia,
      };
    }
  }
}

/** The figures of the Weigh station, each with its formula, inputs and source. */
export function weigh(compiled: CompiledRig): readonly Figure[] {
  const { whole } = compiled;
  const composition = 'composition of parts; parallel-axis theorem';
  const inertiaFigure = (id: string, label: string, value: number): Figure => ({
    id,
    label,
    value,
    dimension: 'inertia',
    formula: 'I = Σ (I_i + m_i d_i²)',
    inputs: [input('Mass', whole.mass, 'mass')],
    source: composition,
  });
  return [
    {
      id: 'mass',
      label: 'Mass',
      value: whole.mass,
      dimension: 'mass',
      formula: 'm = Σ m_i',
      inputs: [
        input('Body and payloads', compiled.carrier.mass, 'mass'),
        input('Gyros', whole.mass - compiled.carrier.mass, 'mass'),
      ],
      source: 'sum of the parts',
    },
    ...(['x, forward', 'y, left', 'z, up'] as const).map(
      (axis, k): Figure => ({
        id: `centre${'XYZ'[k]}`,
        label: `Centre of mass ${axis}`,
        value: whole.com[k] as number,
        dimension: 'length',
        formula: 'c = Σ m_i c_i / m',
        inputs: [input('Mass', whole.mass, 'mass')],
        source: composition,
      }),
    ),
    inertiaFigure('inertiaRoll', 'Inertia in roll, about the centre', whole.inertia[0]),
    inertiaFigure('inertiaPitch', 'Inertia in pitch, about the centre', whole.inertia[1]),
    inertiaFigure('inertiaYaw', 'Inertia in yaw, about the centre', whole.inertia[2]),
    ...momentumFigures(compiled),
    ...fallFigures(compiled),
  ];
}

function momentumFigures({ rig, wheels, model, speeds }: CompiledRig): readonly Figure[] {
  const first = rig.array.gyros[0];
  const wheel = wheels[0];
  if (!first || !wheel) return [];
  const each: Figure = {
    id: 'wheelMomentum',
    label: 'Momentum of one wheel',
    value: wheel.spinInertia * first.speed,
    dimension: 'angularMomentum',
    formula: 'h = J_s Ω',
    inputs: [input('J_s', wheel.spinInertia, 'inertia'), input('Ω', first.speed, 'spinRate')],
    source: 'definition',
  };
  const tilt = new Float64Array(rig.array.gyros.length);
  const held = speeds.map((speed, i) => speed * (wheels[i]?.spinInertia ?? 0));
  const atRest = new Float64Array(3);
  arrayMomentum(model.array, tilt, held, atRest);
  const size = Math.sqrt(
    (atRest[0] as number) ** 2 + (atRest[1] as number) ** 2 + (atRest[2] as number) ** 2,
  );
  return [
    each,
    {
      id: 'restMomentum',
      label: 'Momentum of the array at rest',
      value: size,
      dimension: 'angularMomentum',
      formula: '|Σ h_i s_i(0)|',
      inputs: [
        input('Gyros', rig.array.gyros.length, 'count'),
        input('h of one', each.value, 'angularMomentum'),
      ],
      source: 'array law; a counter-rotating pair sums to zero',
    },
  ];
}

function fallFigures(compiled: CompiledRig): readonly Figure[] {
  const fall = fallOf(compiled);
  const stiffness = input('Roll stiffness', fall.stiffness, 'stiffness');
  const inertia = input('Roll inertia about the pivot', fall.inertia, 'inertia');
  if (fall.kind === 'swings') {
    return [
      {
        id: 'naturalPeriod',
        label: 'Natural roll period',
        value: fall.period,
        dimension: 'time',
        formula: 'T = 2π √(I / k)',
        inputs: [stiffness, inertia],
        source: 'small motion about rest, first principles',
      },
      ...floatFigures(compiled),
    ];
  }
  const doubling: Figure = {
    id: 'doublingTime',
    label: 'Time for a lean to double',
    value: Math.LN2 / fall.rate,
    dimension: 'time',
    formula: 'ln 2 / √(−k / I)',
    inputs: [stiffness, inertia],
    source: 'small motion about a pivot, first principles',
  };
  if (fall.kind === 'topples') return [doubling, ...floatFigures(compiled)];
  return [
    {
      id: 'tippingAngle',
      label: 'Lean at which it tips off its feet',
      value: fall.angle,
      dimension: 'angle',
      formula: 'atan(b / z)',
      inputs: [
        input('Centre to edge of support', fall.edge, 'length'),
        input('Centre height', compiled.whole.com[2], 'length'),
      ],
      source: 'statics',
    },
    doubling,
  ];
}

function floatFigures({ floating, whole }: CompiledRig): readonly Figure[] {
  if (!floating) return [];
  const { flotation } = floating;
  return [
    {
      id: 'draught',
      label: 'Draught',
      value: flotation.draught,
      dimension: 'length',
      formula: 'ρ L A(z) = m',
      inputs: [input('Mass', whole.mass, 'mass'), input('Volume', flotation.volume, 'volume')],
      source: 'Archimedes; section cut at the waterline',
    },
    {
      id: 'metacentricHeight',
      label: 'Metacentric height GM',
      value: flotation.GM,
      dimension: 'length',
      formula: 'GM = KB + BM − KG',
      inputs: [
        input('KB', flotation.KB, 'length'),
        input('BM', flotation.BM, 'length'),
        input('KG', whole.com[2], 'length'),
      ],
      source: 'Derrett & Barrass, Ship Stability for Masters and Mates',
    },
  ];
}

/** Ballast that brings the centre of mass over the middle line. */
export interface TrimBallast {
  readonly mass: number;
  readonly position: readonly [number, number, number];
  /** m, how far off the middle the centre stands after it; 0 when the box reaches far enough. */
  readonly offsetLeft: number;
}

/**
 * Least ballast, and where in a box it goes, that cancels the sideways offset of the centre of mass:
 * as far out on the light side as the box allows, as low and as near the centre lengthwise as it allows.
 *
 * @param box    corners of where ballast may go, m, body frame
 * @param most   kg, heaviest ballast allowed
 *
 * Source: moments about the middle line.
 */
export function trimBallast(
  compiled: Pick<CompiledRig, 'whole'>,
  box: { readonly low: readonly [number, number, number]; readonly high: readonly [number, number, number] },
  most: number,
): TrimBallast {
  const { mass, com } = compiled.whole;
  const moment = mass * com[1];
  const y = moment > 0 ? box.low[1] : box.high[1];
  const x = Math.min(Math.max(com[0], box.low[0]), box.high[0]);
  const lever = moment > 0 ? -y : y;
  const needed = moment === 0 ? 0 : lever > 0 ? Math.abs(moment) / lever : most;
  const ballast = lever > 0 || moment === 0 ? Math.min(needed, most) : 0;
  return {
    mass: ballast,
    position: [x, y, box.low[2]],
    offsetLeft: (moment + ballast * y) / (mass + ballast),
  };
}
