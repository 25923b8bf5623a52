import { useFrame, useThree } from '@react-three/fiber';
import { useEffect, useMemo, useRef } from 'react';
import type { Group } from 'three';
import { useDocument } from '../state/document';
import { useSession } from '../state/session';
import { stream } from '../state/stream';
import { useYard } from '../yard/liveYard';
import { BalanceMarks } from './BalanceMarks';
import { Ghost } from './Ghost';
import { Ground } from './Ground';
import { Gyros } from './GyroModel';
import { Handles } from './Handles';
import { HullModel } from './HullModel';
import { InlineModel } from './InlineModel';
import { LayoutMarks } from './LayoutMarks';
import { LeggedTrunk, Legs } from './LeggedModel';
import { Mounts } from './Mounts';
import { Payloads } from './Payloads';
import type { Palette } from './palette';
import { selectTapped } from './picking';
import { QuantityArrows } from './QuantityArrows';
import { createSetting, StageContext, useShown, useStage } from './stageFrame';
import { type ViewAsk, Viewpoint } from './Viewpoint';
import { Water } from './Water';
import { Pushable, Sloped, YardThings } from './YardThings';

interface SceneProps {
  readonly palette: Palette;
  readonly ask: ViewAsk;
}

/** Everything inside the canvas. */
export function Scene({ palette, ask }: SceneProps) {
  const rig = useDocument((state) => state.rig);
  const quality = useSession((state) => state.quality);
  const shown = useShown();
  const setting = useMemo(
    () => createSetting(rig, shown, palette, quality === 'low'),
    [rig, shown, palette, quality],
  );
  const invalidate = useThree((state) => state.invalidate);
  useEffect(() => stream.onFrame(() => invalidate()), [invalidate]);
  const selection = useSession((state) => state.selection);
  // biome-ignore lint/correctness/useExhaustiveDependencies: each of these changes what is drawn by refs.
  useEffect(() => invalidate(), [invalidate, setting, selection]);
  return (
    <StageContext value={setting}>
      <Light />
      <FrameReader />
      <Viewpoint ask={ask} />
      {/* The stage is z up, the renderer y up: turned once, here. */}
      <group rotation={[-Math.PI / 2, 0, 0]}>
        <Sloped>
          <Ground />
        </Sloped>
        <Water />
        <Ghost />
        <RigModel />
        <BalanceMarks />
        <YardThings />
      </group>
    </StageContext>
  );
}

function Light() {
  const { palette } = useStage();
  const dim = palette.isDark ? 0.8 : 1;
  return (
    <>
      <color attach="background" args={[palette.page]} />
      <hemisphereLight args={['#ffffff', palette.isDark ? '#5b6468' : '#d8d3c6', 2.3 * dim]} />
      <directionalLight position={[3, 6, 2]} intensity={1.25 * dim} />
    </>
  );
}

/** Reads the playhead once for each frame, before anything draws by it. */
function FrameReader() {
  const { frame } = useStage();
  useFrame(() => frame.read(), -1);
  return null;
}

/** The body and all that moves with it, in the body frame. */
function RigModel() {
  const { rig, frame } = useStage();
  const group = useRef<Group>(null);
  useFrame(() => {
    const { pose } = frame.instant;
    group.current?.position.set(pose[0], pose[1], pose[2]);
    group.current?.quaternion.set(pose[4], pose[5], pose[6], pose[3]);
  }, -0.6);
  const { body } = rig;
  const isInYard = useYard((yard) => yard.isOpen);
  return (
    <group ref={group}>
      <Pushable>
        {/* biome-ignore lint/a11y/noStaticElementInteractions: a group of the scene, no element of the page. */}
        <group onClick={selectTapped}>
          {body.kind === 'legged' && (
            <>
              <LeggedTrunk body={body} />
              <Legs body={body} />
            </>
          )}
          {body.kind === 'hull' && <HullModel body={body} />}
          {body.kind === 'inline' && <InlineModel body={body} />}
          <Payloads />
          <Mounts />
          <Gyros />
        </group>
      </Pushable>
      <QuantityArrows />
      <LayoutMarks />
      {!isInYard && <Handles />}
    </group>
  );
}
