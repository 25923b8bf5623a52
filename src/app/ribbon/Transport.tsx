import { useEffect, useRef } from 'react';
import { useIsLooping, useIsPlaying, useSpeed } from '../state/reading';
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
    </div>
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
