import { useState } from 'react';
import { reduceCurve } from '../../../workers';
import { Choice } from '../../fields/Choice';
import type { LinkSnapshot } from '../../link/linkSession';
import { BenchPlot } from './BenchPlot';
import { linkSession } from './linkDesk';

/** Readings drawn at most: some seconds of a fast device, more of a slow one. */
const MOST_ROWS = 10_000;
const PIXELS = 320;
const CLOCKS = ['t', 'time', 'time_s'];

/** The last readings of one column as they come in. */
export function LivePlot({ shown }: { readonly shown: LinkSnapshot }) {
  const [chosen, setChosen] = useState<string>();
  const recording = linkSession()?.recording;
  const clock = shown.names.find((name) => CLOCKS.includes(name));
  const columns = shown.names.filter((name) => name !== clock && name !== 'n');
  const column = chosen && columns.includes(chosen) ? chosen : columns[0];
  if (!recording || column === undefined || shown.rows < 2) {
    return <p className="waiting">Nothing has come yet.</p>;
  }
  const from = Math.max(0, shown.rows - MOST_ROWS);
  const values = recording.read(column, from) ?? new Float64Array(0);
  const time = (clock && recording.read(clock, from)) || values.map((_, i) => from + i);
  const last = Math.min(time.length, values.length) - 1;
  return (
    <>
      <Choice
        label="Show"
        options={columns.map((value) => ({ value, label: value }))}
        value={column}
        onChange={setChosen}
      />
      <BenchPlot
        title={column}
        unit=""
        acrossUnit={clock ? 's' : ''}
        height={150}
        curves={[
          {
            label: 'live',
            look: 'measured',
            ...reduceCurve({ time, values }, time[0] as number, time[last] as number, PIXELS),
          },
        ]}
      />
    </>
  );
}
