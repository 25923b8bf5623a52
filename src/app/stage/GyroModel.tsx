import { useFrame } from '@react-three/fiber';
import { useMemo, useRef } from 'react';
import {
  BoxGeometry,
  Color,
  ConeGeometry,
  CylinderGeometry,
  type Group,
  Matrix4,
  Quaternion,
  Vector3,
} from 'three';
import type { Gyro } from '../../core/rig';
import { prefersStillness } from '../state/looks';
import type { Selection } from '../state/session';
import { stream } from '../state/stream';
import { wheelExtent } from './bodyPlaces';
import { Inked, useGeometry } from './Inked';
import { BEARINGS_STAND } from './Mounts';
import { Protractor } from './Protractor';
import { gimbalFrame } from './partEdits';
import { arcTube, frameGeometry } from './shapes';
import { useStage } from './stageFrame';
import { wheelGeometry } from './wheelShape';

/**
 * Wheels are shown turning this much slower than they do, so that the eye can follow the mark on them. Their
 * angle is a picture only: nothing is worked out from it.
 */
export const SHOWN_SLOWER = 200;

const STANDING_SENSE = 5.2;

export function Gyros() {
  const { rig } = useStage();
  return rig.array.gyros.map((gyro, index) => (
    // biome-ignore lint/suspicious/noArrayIndexKey: gyros are known by their place in the list.
    <GyroModel key={index} gyro={gyro} index={index} />
  ));
}

/** Turns the frame's own axes (x along the spin axis at rest, y square to both, z along the gimbal axis) into the body's. */
function gimbalAttitude(gyro: Gyro): Quaternion {
  const { g, s, t } = gimbalFrame(gyro);
  const basis = new Matrix4().makeBasis(new Vector3(...s), new Vector3(...t), new Vector3(...g));
  return new Quaternion().setFromRotationMatrix(basis);
}

function GyroModel({ gyro, index }: { readonly gyro: Gyro; readonly index: number }) {
  const { frame } = useStage();
  const tilted = useRef<Group>(null);
  const attitude = useMemo(() => gimbalAttitude(gyro), [gyro]);
  const size = wheelExtent(gyro.wheel.parts);
  const part = { kind: 'gyro', index } as const;

  useFrame(() => {
    if (tilted.current) tilted.current.rotation.z = frame.instant.tilt[index] ?? 0;
  });

  return (
    <group position={[...gyro.position]} quaternion={attitude}>
      <group ref={tilted}>
        <GimbalFrame radius={size.radius} half={Math.max(size.above, -size.below)} part={part} />
        <SpinningWheel gyro={gyro} part={part} />
      </group>
      <Bearings radius={size.radius} part={part} />
      {gyro.drive.kind !== 'locked' && <Protractor gyro={gyro} index={index} radius={size.radius} />}
    </group>
  );
}

/** Half sizes of the gimbal frame about a wheel, along the spin and the gimbal axis, in m. */
const frameHalves = (radius: number, half: number): readonly [spin: number, gimbal: number] => [
  half + 0.26 * radius,
  1.12 * radius,
];

interface FrameProps {
  readonly radius: number;
  readonly half: number;
  readonly part: Selection;
}

function GimbalFrame({ radius, half, part }: FrameProps) {
  const { palette } = useStage();
  const [x, z] = frameHalves(radius, half);
  // Built in x-y, then stood up so that it lies in the plane of spin axis and gimbal axis.
  const frame = useGeometry(
    () => frameGeometry(x, z, 0.09 * radius, 0.2 * radius).rotateX(Math.PI / 2),
    [x, z, radius],
  );
  const axle = useGeometry(
    () => new CylinderGeometry(0.045 * radius, 0.045 * radius, 2 * x, 8).rotateZ(Math.PI / 2),
    [x, radius],
  );
  return (
    <>
      <Inked geometry={frame} colour={palette.gimbal} part={part} />
      <Inked geometry={axle} colour={palette.soft} part={part} edgeAngle={0} />
    </>
  );
}

/** What the gimbal turns in: a bearing block at each end of its axis. They stay with the body. */
function Bearings({ radius, part }: { readonly radius: number; readonly part: Selection }) {
  const { palette } = useStage();
  const block = useGeometry(() => new BoxGeometry(0.26 * radius, 0.26 * radius, 0.12 * radius), [radius]);
  return [1, -1].map((side) => (
    <group key={side} position={[0, 0, side * BEARINGS_STAND * radius]}>
      <Inked geometry={block} colour={palette.soft} part={part} />
    </group>
  ));
}

function SpinningWheel({ gyro, part }: { readonly gyro: Gyro; readonly part: Selection }) {
  const { palette, isLowQuality } = useStage();
  const wheel = useRef<Group>(null);
  const seen = useRef(stream.seconds);
  const segments = isLowQuality ? 32 : 56;
  const geometry = useGeometry(() => wheelGeometry(gyro.wheel.parts, segments), [gyro.wheel.parts, segments]);
  const { radius, above } = wheelExtent(gyro.wheel.parts);
  // The spin axis need not be square to the gimbal axis: lean it within the plane of the two.
  const lean = useMemo(() => {
    const { g, s } = gimbalFrame(gyro);
    const [x, y, z] = gyro.spinAxis;
    const size = Math.hypot(x, y, z) || 1;
    const alongG = (x * g[0] + y * g[1] + z * g[2]) / size;
    const alongS = (x * s[0] + y * s[1] + z * s[2]) / size;
    return new Quaternion().setFromUnitVectors(
      new Vector3(0, 0, 1),
      new Vector3(alongS, 0, alongG).normalize(),
    );
  }, [gyro]);
  useFrame(() => {
    const passed = stream.seconds - seen.current;
    seen.current = stream.seconds;
    if (!wheel.current || !stream.isPlaying || prefersStillness() || passed < 0) return;
    wheel.current.rotation.z += (gyro.sense * gyro.speed * passed) / SHOWN_SLOWER;
  });
  return (
    <group quaternion={lean}>
      <group ref={wheel}>
        <Inked geometry={geometry} colour={WHITE} part={part} edgeAngle={0} hasVertexColours isShiny />
      </group>
      {(gyro.speed > 0 || gyro.spin.kind === 'actuated') && (
        <SpinSense
          radius={radius}
          height={above + 0.4 * radius}
          sense={gyro.sense}
          colour={palette.marks.momentum}
        />
      )}
    </group>
  );
}

/** The wheel's own colours are in its geometry. */
const WHITE = new Color('#ffffff');

interface SenseProps {
  readonly radius: number;
  readonly height: number;
  readonly sense: number;
  readonly colour: Color;
}

/** The spin axis as momentum's own double arrow, and round it the sense of the spin. */
function SpinSense({ radius, height, sense, colour }: SenseProps) {
  const round = 0.3 * radius;
  const tube = 0.028 * radius;
  const arc = useGeometry(() => arcTube(round, tube, STANDING_SENSE, 26).geometry, [round, tube]);
  const head = useGeometry(() => new ConeGeometry(0.085 * radius, 0.2 * radius, 10), [radius]);
  const shaft = useGeometry(() => new CylinderGeometry(tube, tube, 1, 8).rotateX(Math.PI / 2), [tube]);
  const tip = useGeometry(
    () => new ConeGeometry(0.1 * radius, 0.22 * radius, 12).rotateX(Math.PI / 2),
    [radius],
  );
  const reach = height + 0.45 * radius;
  const material = <meshBasicMaterial color={colour} />;
  return (
    // Turned over for a wheel that spins the other way: axis and arc are one right-handed sign.
    <group rotation={[sense < 0 ? Math.PI : 0, 0, 0]}>
      <mesh geometry={shaft} position={[0, 0, reach / 2]} scale={[1, 1, reach]}>
        {material}
      </mesh>
      <mesh geometry={tip} position={[0, 0, reach]}>
        {material}
      </mesh>
      <mesh geometry={tip} position={[0, 0, reach + 0.17 * radius]}>
        {material}
      </mesh>
      <group position={[0, 0, height]}>
        <mesh geometry={arc}>{material}</mesh>
        <group rotation={[0, 0, STANDING_SENSE]}>
          <mesh geometry={head} position={[round, 0.06 * radius, 0]}>
            {material}
          </mesh>
        </group>
      </group>
    </group>
  );
}
