import { createContext, useContext, useSyncExternalStore } from 'react';
import type { Rig } from '../../core/rig';
import { type Evaluated, stream } from '../state/stream';
import { readYard, useYard } from '../yard/liveYard';
import { motionScales, type QuantityScales } from './arrowScale';
import { type Box, boxDiagonal, rigBox } from './bodyPlaces';
import { isDragging } from './dragging';
import { rotateInto } from './legPose';
import { createInstant, type Instant, leanOf, readInstant } from './motionInstant';
import type { Palette } from './palette';
import { restInstant } from './restInstant';
import { readYardInstant } from './yardInstant';

/** Beyond this lean a body is drawn as fallen, whatever the trial says of the end of its run, rad. */
const FALLEN = 0.9;

/** What is drawn at present; read by everything that draws, once for each frame, outside React. */
export interface StageFrame {
  readonly instant: Instant;
  readonly hasFallen: boolean;
  /** Reads the stream's playhead. */
  readonly read: () => void;
}

/** Whether a motion is of a rig with as many gyros and legs: the rest of it may be a moment old. */
const fits = (rig: Rig, shown: Evaluated): boolean =>
  shown.motion.samples > 0 &&
  shown.motion.gyros === rig.array.gyros.length &&
  shown.motion.legs === (rig.body.kind === 'legged' ? rig.body.legs : 0);

/** Where body and feet stood when nothing was being dragged. */
const held = { pose: new Float64Array(7), feet: new Float64Array(0) };

/**
 * What is dragged must not walk, or fall, away from under the hand: while it is, body and feet stay put and the
 * centre of mass goes to where the changed rig has it in the body. Returns whether they were held.
 */
function holdWhileDragging(instant: Instant, centreOfMass: readonly [number, number, number]): boolean {
  const { pose, feet } = instant;
  if (held.feet.length !== feet.length) held.feet = new Float64Array(feet.length);
  else if (isDragging()) {
    pose.set(held.pose);
    feet.set(held.feet);
    rotateInto(pose, ...centreOfMass, instant.centreOfMass);
    for (let axis = 0; axis < 3; axis++) instant.centreOfMass[axis] += pose[axis];
    instant.centreOfPressure.fill(Number.NaN);
    return true;
  }
  held.pose.set(pose);
  held.feet.set(feet);
  return false;
}

/** A reader of the instants of one motion for one rig; at rest while there is no motion that fits the rig. */
export function createStageFrame(rig: Rig, shown: Evaluated | undefined): StageFrame {
  const rest = restInstant(rig);
  if (!shown || !fits(rig, shown)) {
    if (shown) rest.centreOfMass.set(shown.centreOfMass);
    return { instant: rest, hasFallen: false, read: () => undefined };
  }
  const { motion, outcome } = shown;
  const instant = createInstant(motion.gyros, motion.legs);
  const frame = {
    instant,
    hasFallen: false,
    read: (): void => {
      const { opened } = useYard.getState();
      const live = opened && readYard();
      if (live && opened.layout.gyros === motion.gyros && opened.layout.legs === motion.legs) {
        readYardInstant(opened.layout, live.before, live.after, live.share, instant);
        frame.hasFallen = Number.isFinite(live.after[opened.layout.toppledAt]);
        return;
      }
      readInstant(motion, stream.seconds, instant);
      const isHeld = holdWhileDragging(instant, shown.centreOfMass);
      frame.hasFallen =
        (!isHeld && outcome.kind === 'falls' && stream.seconds >= outcome.at) ||
        leanOf(instant.pose) > FALLEN;
    },
  };
  frame.read();
  return frame;
}

export interface StageSetting {
  readonly rig: Rig;
  readonly frame: StageFrame;
  readonly palette: Palette;
  readonly isLowQuality: boolean;
  /** Box about the rig at rest, body frame, and its diagonal, m. */
  readonly box: Box;
  readonly size: number;
  readonly scales: QuantityScales;
}

/** Vertical field of view of the whole picture, degrees: narrow, so that true proportions look true. */
export const FIELD_OF_VIEW = 30;

/** Longest arc of an arrow, rad; straight arrows scale it to metres. */
export const LONGEST_ARC = 2.2;

const NO_SCALE = { full: 1, longest: LONGEST_ARC };

export function createSetting(
  rig: Rig,
  shown: Evaluated | undefined,
  palette: Palette,
  isLowQuality: boolean,
): StageSetting {
  const box = rigBox(rig);
  const scales = shown ? motionScales(shown.motion, LONGEST_ARC) : { momentum: NO_SCALE, torque: NO_SCALE };
  return {
    rig,
    frame: createStageFrame(rig, shown),
    palette,
    isLowQuality,
    box,
    size: boxDiagonal(box),
    scales,
  };
}

export const StageContext = createContext<StageSetting | undefined>(undefined);

export function useStage(): StageSetting {
  const setting = useContext(StageContext);
  if (!setting) throw new Error('A part of the stage was mounted outside it.');
  return setting;
}

/** The newest evaluation that gave results. */
export const useShown = (): Evaluated | undefined =>
  useSyncExternalStore(stream.onEvaluation, () => stream.shown);

const readPlaying = (): boolean => stream.isPlaying;
export const useIsPlaying = (): boolean => useSyncExternalStore(stream.onTransport, readPlaying);
