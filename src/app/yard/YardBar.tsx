import { useEffect, useMemo, useRef } from 'react';
import { formatQuantity } from '../../core/units';
import { useDocument } from '../state/document';
import { useSession } from '../state/session';
import {
  chooseGround,
  closeYard,
  dropBlock,
  kickRig,
  onYardFrame,
  openYard,
  readYard,
  resetYard,
  useYard,
} from './liveYard';
import { blowsFor, GROUND_NAMES, GROUND_WORDS, type GroundName } from './yardGrounds';
import './yard.css';

/** Room the controls take at the foot of the stage, CSS pixels; agrees with yard.css. */
const CONTROLS_HEIGHT = 76;

/** The switch between the planned motion and the yard and, in the yard, what can be done to the rig there. */
export function YardBar() {
  const isOpen = useYard((yard) => yard.isOpen);
  useRoomForControls(isOpen);
  return (
    <>
      <div className="yard-head">
        <button
          type="button"
          className="yard-switch"
          aria-pressed={isOpen}
          title="Let the rig loose among things it can touch; drag on it to push it"
          onClick={isOpen ? closeYard : openYard}
        >
          Yard
        </button>
        {isOpen && <YardState />}
      </div>
      {isOpen && (
        <section className="yard-controls" aria-label="Yard">
          <div className="yard-row">
            <GroundChooser />
            <Blows />
            <button type="button" onClick={resetYard}>
              Reset
            </button>
          </div>
          <p className="yard-note">
            <span>Drag on the rig to push it. </span>Limits and margins come from plan and trial, not from
            here.
          </p>
        </section>
      )}
    </>
  );
}

function useRoomForControls(isOpen: boolean): void {
  useEffect(() => {
    if (!isOpen) return;
    const setBottom = (bottom: number): void => {
      const { stageInsets, setStageInsets } = useSession.getState();
      setStageInsets({ ...stageInsets, bottom });
    };
    setBottom(CONTROLS_HEIGHT);
    return () => setBottom(0);
  }, [isOpen]);
}

function GroundChooser() {
  const ground = useYard((yard) => yard.ground);
  return (
    <select
      aria-label="Ground"
      value={ground}
      onChange={(event) => chooseGround(event.target.value as GroundName)}
    >
      {GROUND_NAMES.map((name) => (
        <option key={name} value={name}>
          {GROUND_WORDS[name]}
        </option>
      ))}
    </select>
  );
}

/** Kicks from either side and a block from above, their sizes on them. */
function Blows() {
  const rig = useDocument((document) => document.rig);
  const units = useSession((session) => session.units);
  const blows = useMemo(() => blowsFor(rig), [rig]);
  if (!blows) return null;
  const { kick, point, block } = blows;
  const size = formatQuantity(kick, 'impulse', units.impulse, 2);
  const mass = formatQuantity(block.mass, 'mass', units.mass, 2);
  const kickBy = (impulse: number) => () => kickRig([0, impulse, 0], point);
  return (
    <>
      <button type="button" title="A blow to the left, at the height of the centre" onClick={kickBy(kick)}>
        Kick left <small>{size}</small>
      </button>
      <button type="button" title="A blow to the right, at the height of the centre" onClick={kickBy(-kick)}>
        Kick right <small>{size}</small>
      </button>
      <button type="button" title="A block of steel, from above" onClick={() => void dropBlock(block)}>
        Drop block <small>{mass}</small>
      </button>
    </>
  );
}

/** ms: numbers that change faster than this cannot be read. */
const READABLE = 100;
/** rad: the lean is told to this; below it the body only breathes on its contacts. */
const LEAN_STEP = Math.PI / 1800;

/** Time, lean, the finger's force, and whether the rig has gone over; written as frames come, not rendered. */
function YardState() {
  const line = useRef<HTMLOutputElement>(null);
  const opened = useYard((yard) => yard.opened);
  const toppledAt = useYard((yard) => yard.toppledAt);
  const units = useSession((session) => session.units);
  useEffect(() => {
    let last = 0;
    return onYardFrame(() => {
      const now = performance.now();
      const read = readYard();
      if (!line.current || !read || !opened || now - last < READABLE) return;
      last = now;
      const { layout } = opened;
      const force = read.after[layout.fingerForce] as number;
      const leans = Math.round((read.after[layout.lean] as number) / LEAN_STEP) * LEAN_STEP;
      const lean = formatQuantity(leans + 0, 'angle', units.angle, 2);
      const push = force > 0 ? ` · finger ${formatQuantity(force, 'force', units.force, 2)}` : '';
      line.current.textContent = `${(read.after[layout.time] as number).toFixed(1)} s · lean ${lean}${push}`;
    });
  }, [opened, units]);
  return (
    <>
      <output ref={line} aria-live="off">
        Setting up…
      </output>
      {!Number.isNaN(toppledAt) && (
        <strong className="word-fails" role="status">
          Toppled at {toppledAt.toFixed(1)} s
        </strong>
      )}
    </>
  );
}
