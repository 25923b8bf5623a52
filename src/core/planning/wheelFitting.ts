/** A wheel remade to store a momentum: hub kept, web drawn out to a new rim, as light as its width and speed let it be. */
import { partProperties, wheelStress } from '../physics';
import type { Gyro, MaterialName, Power, Wheel, WheelPart } from '../rig';
import { lightestRim, safeRimSpeed } from './rimGeometry';

/** What the user picks of the wheel; what is left undefined is worked out. */
export interface WheelAsk {
  /** m */
  readonly radius: number;
  readonly width: number;
  readonly material: MaterialName;
  /** m/s; undefined: as fast as stress and motor let it. */
  readonly rimSpeed: number | undefined;
}

/** `thinnest rim`: rim, web and hub as thin as they are made store more already, so the wheel is run slower. */
export type RimSpeedLimit = 'as asked' | 'stress' | 'motor' | 'thinnest rim';

export type WheelFit =
  | {
      readonly kind: 'fitted';
      readonly wheel: Wheel;
      /** rad/s, m/s, kg; what held the rim speed where it is; spare of stress at that speed. */
      readonly speed: number;
      readonly rimSpeed: number;
      readonly mass: number;
      readonly limit: RimSpeedLimit;
      readonly stressSpare: number;
    }
  | { readonly kind: 'too small'; readonly sentence: string };

/** Share of the motor's no-load speed on the nominal battery that a wheel is run at, common practice. */
const MOTOR_SHARE = 0.9;
const DEFAULT_WEB = 0.003;
const DEFAULT_HUB = 0.008;
/** m, common practice for a turned rim. */
const THINNEST_RIM = 0.0005;
const PASSES = 40;

/** Speed that the motor holds, rad/s. */
const motorSpeed = (gyro: Gyro, power: Power): number =>
  MOTOR_SHARE * gyro.motor.velocityConstant * power.cells * power.cellVoltage;

/**
 * Fits a wheel to a gyro.
 *
 * @param momentum  N*m*s the whole wheel must store
 *
 * O(passes x parts).
 */
export function fitWheel(gyro: Gyro, power: Power, momentum: number, ask: WheelAsk): WheelFit {
  const motor = motorSpeed(gyro, power) * ask.radius;
  const wanted = ask.rimSpeed ?? Number.POSITIVE_INFINITY;
  const thinRing = safeRimSpeed(ask.material);
  let rimSpeed = Math.min(wanted, motor, thinRing);
  let limit: RimSpeedLimit = rimSpeed === wanted ? 'as asked' : rimSpeed === motor ? 'motor' : 'stress';
  // The web may be stressed more than the rim: slow down until the whole wheel is within its safe speed.
  for (let pass = 0; pass < PASSES; pass++) {
    const parts = partsFor(gyro, momentum, ask, rimSpeed);
    if (typeof parts === 'string') return { kind: 'too small', sentence: parts };
    const speed = rimSpeed / ask.radius;
    const outcome = wheelStress(parts, speed);
    if (outcome.kind !== 'stressed') {
      return {
        kind: 'too small',
        sentence: 'The rim leaves no room for hub and web; choose a larger radius.',
      };
    }
    const { spare, safeSpeed } = outcome.stress;
    if (spare >= 0) {
      const mass = parts.reduce((sum, part) => sum + partProperties(part).mass, 0);
      const name = `Rim of ${ask.material}, ${(2000 * ask.radius).toFixed(0)} mm`;
      const wheel: Wheel = { ...gyro.wheel, name, parts };
      const stored = speed * parts.reduce((sum, part) => sum + partProperties(part).spinInertia, 0);
      const slower = momentum / stored;
      if (slower < 1 - 1e-6) {
        return {
          kind: 'fitted',
          wheel,
          speed: speed * slower,
          rimSpeed: rimSpeed * slower,
          mass,
          limit: 'thinnest rim',
          stressSpare: 1 - (1 - spare) * slower * slower,
        };
      }
      return { kind: 'fitted', wheel, speed, rimSpeed, mass, limit, stressSpare: spare };
    }
    rimSpeed = Math.min(0.999 * rimSpeed, safeSpeed * ask.radius);
    limit = 'stress';
  }
  return {
    kind: 'too small',
    sentence: 'No rim speed was found at which the whole wheel is within its safe stress.',
  };
}

/** Hub, web and rim that store a momentum; or why there is no such wheel. */
function partsFor(gyro: Gyro, momentum: number, ask: WheelAsk, rimSpeed: number): WheelPart[] | string {
  const speed = rimSpeed / ask.radius;
  const hubs = gyro.wheel.parts.filter((part) => part.kind === 'hub');
  const old = gyro.wheel.parts.find((part) => part.kind === 'disc');
  const hubRadius = hubs.reduce((most, hub) => Math.max(most, hub.radius), 0) || DEFAULT_HUB;
  const webThickness = Math.min(ask.width, old?.kind === 'disc' ? old.thickness : DEFAULT_WEB);
  const webOf = (radius: number): WheelPart => ({
    kind: 'disc',
    radius,
    bore: hubs.length > 0 ? hubRadius : 0.003,
    thickness: webThickness,
    material: old?.kind === 'disc' ? old.material : ask.material,
    offset: 0,
  });
  const hubInertia = hubs.reduce((sum, hub) => sum + partProperties(hub).spinInertia, 0);
  const short = (most: number): string =>
    `A rim of ${(1000 * ask.radius).toFixed(1)} mm radius and ${(1000 * ask.width).toFixed(1)} mm width at ${rimSpeed.toFixed(1)} m/s stores at most ${most.toPrecision(3)} N·m·s; ${momentum.toPrecision(3)} N·m·s is needed. Choose a larger radius or width, or a denser material.`;
  const rimOf = (web: number) =>
    lightestRim({
      momentum: Math.max(0, momentum - (hubInertia + web) * speed),
      radius: ask.radius,
      width: ask.width,
      material: ask.material,
      rimSpeed,
    });
  if (!(ask.radius > 1.2 * hubRadius))
    return `The radius must be more than ${(1200 * hubRadius).toFixed(1)} mm, 1.2 times that of the hub.`;
  let inner = 0.8 * ask.radius;
  for (let pass = 0; pass < 60; pass++) {
    const rim = rimOf(inner > 1.1 * hubRadius ? partProperties(webOf(inner)).spinInertia : 0);
    if (rim.kind === 'too small') return short(rim.most);
    const next = Math.min(rim.innerRadius, ask.radius - THINNEST_RIM);
    if (next <= 1.1 * hubRadius)
      return 'The rim would reach in to the hub; choose a larger radius or width, or a denser material.';
    if (Math.abs(next - inner) < 1e-12) break;
    inner = next;
  }
  return [
    {
      kind: 'rim',
      outerRadius: ask.radius,
      innerRadius: inner,
      width: ask.width,
      material: ask.material,
      offset: 0,
    },
    webOf(inner),
    ...hubs,
  ];
}
