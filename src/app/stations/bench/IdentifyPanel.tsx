import { Choice } from '../../fields/Choice';
import { GyroChoice } from '../../fields/GyroChoice';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { BenchNumber } from './BenchNumber';
import { useFindings } from './benchFindings';
import { useBenchGyro } from './benchGyro';
import { useBenchLog } from './benchLog';
import { FitReport } from './FitReport';
import {
  GIVEN_INFO,
  KIND_RECIPES,
  KIND_WORDS,
  KINDS,
  SURE_INFO,
  useIdentifyForm,
  usualGiven,
  wantedGivens,
} from './identifyForm';
import { breakOffFit, identify, useIdentifying } from './identifying';

const OF_A_GYRO: readonly string[] = ['pendulum', 'coastDown', 'spinUp', 'servoStep', 'servoSweep'];

/** What a log says of the rig's numbers: kind, what must be known besides, the fit, and each result into the rig. */
export function IdentifyPanel() {
  const form = useIdentifyForm();
  const result = useFindings((state) => state.fits[form.kind]);
  const running = useIdentifying((state) => state.running);
  const log = useBenchLog((state) => state.log);
  const gyros = useDocument((document) => document.rig.array.gyros.length);
  const gyro = useBenchGyro();
  const needsLog = !(form.kind === 'pendulum' && form.period === 'typed');
  const canFit = !needsLog || log?.mapped !== undefined;
  return (
    <>
      <Choice
        label="From"
        options={KINDS.map((value) => ({ value, label: KIND_WORDS[value] }))}
        value={form.kind}
        onChange={(kind) => form.set({ kind })}
      />
      <p className="aside">{KIND_RECIPES[form.kind]}</p>
      {gyros > 1 && OF_A_GYRO.includes(form.kind) && <GyroChoice />}
      <GivenFields />
      {needsLog && (
        <p className="aside">
          {log?.mapped
            ? `From ${log.file}, ${log.cut.from.toFixed(2)} s to ${log.cut.to.toFixed(2)} s.`
            : 'No log is open: open one under Log.'}
        </p>
      )}
      {running ? (
        <div className="bench-reading" role="status">
          <p>Fitting: {KIND_WORDS[running].toLowerCase()}…</p>
          <progress aria-label="Fitting" />
          <button type="button" onClick={breakOffFit}>
            Break off
          </button>
        </div>
      ) : (
        <button
          type="button"
          className="wide strong bench-go"
          disabled={!canFit}
          onClick={() => void identify(gyro)}
        >
          Identify
        </button>
      )}
      {result && !running && <FitReport key={form.kind} result={result} />}
    </>
  );
}

const KNOWN_WORDS = { nothing: 'nothing', stiffness: 'stiffness', inertia: 'inertia' } as const;

function GivenFields() {
  const form = useIdentifyForm();
  const rig = useDocument((document) => document.rig);
  const givens = useIdentifying((state) => state.givens);
  const gyro = useBenchGyro();
  const wanted = wantedGivens(form, rig.footing.kind === 'float');
  const canKnow: readonly (keyof typeof KNOWN_WORDS)[] =
    form.kind === 'decay' ? ['nothing', 'stiffness', 'inertia'] : ['nothing', 'stiffness'];
  return (
    <>
      {(form.kind === 'decay' || form.kind === 'toppling') && (
        <Choice
          label="Known besides the log"
          options={canKnow.map((value) => ({ value, label: KNOWN_WORDS[value] }))}
          value={canKnow.includes(form.known) ? form.known : 'nothing'}
          onChange={(known) => form.set({ known })}
        />
      )}
      {form.kind === 'decay' && (
        <Choice
          label="It rights itself with"
          options={[
            { value: 'linear', label: 'the angle' },
            { value: 'sine', label: 'its sine' },
          ]}
          value={form.restoring}
          onChange={(restoring) => form.set({ restoring })}
        />
      )}
      {form.kind === 'pendulum' && <PendulumChoices />}
      {wanted.length > 0 && (
        <Group title="Given">
          {wanted.map((name) => (
            <BenchNumber
              key={name}
              info={GIVEN_INFO[name]}
              value={form.typed[name] ?? usualGiven(name, form, rig, givens, gyro)}
              onChange={(value) => form.set({ typed: { ...form.typed, [name]: value } })}
            />
          ))}
          <BenchNumber info={SURE_INFO} value={form.sure} onChange={(sure) => form.set({ sure })} />
          {Object.keys(form.typed).length > 0 && (
            <button type="button" className="quiet" onClick={() => form.set({ typed: {} })}>
              As the rig has them
            </button>
          )}
        </Group>
      )}
    </>
  );
}

function PendulumChoices() {
  const form = useIdentifyForm();
  return (
    <>
      <Choice
        label="What hangs"
        options={[
          { value: 'wheelSpinInertia', label: 'the wheel' },
          { value: 'bodyInertia', label: 'the body' },
        ]}
        value={form.hung}
        onChange={(hung) => form.set({ hung })}
      />
      <Choice
        label="Threads"
        options={[
          { value: 'bifilar', label: 'two' },
          { value: 'trifilar', label: 'three' },
        ]}
        value={form.threads}
        onChange={(threads) => form.set({ threads })}
      />
      <Choice
        label="Period from"
        options={[
          { value: 'log', label: 'the log' },
          { value: 'typed', label: 'a stopwatch' },
        ]}
        value={form.period}
        onChange={(period) => form.set({ period })}
      />
      {form.period === 'typed' && (
        <label className="bench-text">
          Readings, s
          <input
            value={form.totals}
            placeholder="15.2 15.3 15.2"
            autoComplete="off"
            onChange={(event) => form.set({ totals: event.target.value })}
          />
        </label>
      )}
    </>
  );
}
