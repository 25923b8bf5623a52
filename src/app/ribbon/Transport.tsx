import { useEffect, useRef } from 'react';
import { useIsLooping, useIsPlaying, useSpeed } from '../state/reading';
import { LOWER_CURVES, type LowerCurves, useSession } from '../state/session';
import { stream } from '../state/stream';

const SPEEDS = [1, 0.5, 0.2, 0.1] as const;

/** Play, loop and speed, and the time at the playhead. */
export function Transport() {
  const isPlaying = useIsPlaying();
  const isLooping = useIsLooping();
  const speed = useSpeed();
  const next = SPEEDS[(SPEEDS.indexOf(speed as (typeof SPEEDS)[number]) + 1) % SPEEDS.length] as number;
  return (
    <div className="transport">
      <button
        type="button"
        className="transport-play"
        aria-label={isPlaying ? 'Pause' : 'Play'}
        onClick={() => (isPlaying ? stream.pause() : stream.play())}
      >
        <svg viewBox="0 0 24 24" width="26" height="26" aria-hidden>
          {isPlaying ? <path d="M6 4h4v16H6zM14 4h4v16h-4z" /> : <path d="M7 3.5 20 12 7 20.5z" />}
        </svg>
      </button>
      <Clock />
      <div className="transport-small">
        <button type="button" aria-pressed={isLooping} onClick={() => stream.setLooping(!isLooping)}>
          Loop
        </button>
        <button
          type="button"
          aria-label={`Speed ${speed} of real time; next ${next}`}
          onClick={() => stream.setSpeed(next)}
        >
          ×{speed}
        </button>
      </div>
      <CurveChoice />
    </div>
  );
}

const CURVE_WORDS: Readonly<Record<LowerCurves, string>> = {
  moment: 'Moment',
  momentum: 'Momentum',
  pressure: 'Pressure',
};

/** What the lower band shows. */
function CurveChoice() {
  const lowerCurves = useSession((session) => session.lowerCurves);
  const showCurves = useSession((session) => session.showCurves);
  return (
    <select
      className="transport-curves"
      aria-label="Lower curves"
      value={lowerCurves}
      onChange={(event) => showCurves(event.target.value as LowerCurves)}
    >
      {LOWER_CURVES.map((curves) => (
        <option key={curves} value={curves}>
          {CURVE_WORDS[curves]}
        </option>
      ))}
    </select>
  );
}

function Clock() {
  const output = useRef<HTMLOutputElement>(null);
  useEffect(() => {
    const write = (): void => {
      if (output.current) output.current.textContent = `${stream.seconds.toFixed(2)} s`;
    };
    write();
    return stream.onFrame(write);
  }, []);
  return <output className="transport-clock" ref={output} aria-live="off" />;
}
