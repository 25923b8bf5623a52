import { useMemo } from 'react';
import { balanceWheel } from '../../../core/bench';
import { Choice } from '../../fields/Choice';
import { Toggle } from '../../fields/Toggle';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { BalanceAnswer } from './BalanceAnswer';
import { BenchNumber } from './BenchNumber';
import {
  BALANCE_INFO,
  type BalanceForm,
  buildBalanceSheet,
  isFilled,
  planesOf,
  useBalanceForm,
} from './balanceForm';
import { useBenchGyro } from './benchGyro';
import { useIdentifying } from './identifying';
import { ReadingFields } from './ReadingFields';

/** Balancing at the bench: readings typed or from a log, the answer in grams at an angle. */
export function BalancePanel() {
  const form = useBalanceForm();
  const usual = useUsualWheel();
  const outcome = useMemo(
    () => (isFilled(form) ? balanceWheel(buildBalanceSheet(form, usual)) : undefined),
    [form, usual],
  );
  return (
    <>
      <Choice
        label="Method"
        options={[
          { value: 'onePlane', label: 'one plane' },
          { value: 'twoPlanes', label: 'two' },
          { value: 'fourRun', label: 'four runs' },
        ]}
        value={form.method}
        onChange={(method) => form.set({ method })}
      />
      <p className="aside">
        {form.method === 'fourRun'
          ? 'Amplitude alone, no mark: one run bare, three with the same weight at three angles.'
          : `One run bare, then one with a trial weight${form.method === 'twoPlanes' ? ' in each plane' : ''}, all at the same speed. Angles count from the mark in the direction of rotation.`}
      </p>
      {form.method === 'fourRun' ? <FourRunFields form={form} /> : <InfluenceFields form={form} />}
      <WheelFields form={form} usual={usual} />
      {outcome ? (
        <BalanceAnswer outcome={outcome} form={form} />
      ) : (
        <p className="aside">The answer stands here once every amplitude is above zero.</p>
      )}
    </>
  );
}

function useUsualWheel(): { readonly mass: number; readonly speed: number } {
  const gyro = useBenchGyro();
  const speed = useDocument((document) => document.rig.array.gyros[gyro]?.speed) ?? 500;
  const mass = useIdentifying((state) => state.givens?.wheelMass[gyro]) ?? 1;
  return useMemo(() => ({ mass, speed }), [mass, speed]);
}

function InfluenceFields({ form }: { readonly form: BalanceForm }) {
  const planes = planesOf(form.method);
  const sensors = planes === 1 ? [0] : [0, 1];
  return (
    <>
      <Group title="Bare">
        {sensors.map((s) => (
          <ReadingFields
            key={s}
            sensor={planes === 1 ? undefined : s}
            reading={form.initial[s]}
            onChange={(reading) => form.set({ initial: form.initial.with(s, reading) })}
          />
        ))}
      </Group>
      {sensors.map((p) => {
        const trial = form.trials[p];
        if (!trial) return null;
        const set = (change: Partial<typeof trial>): void =>
          form.set({ trials: form.trials.with(p, { ...trial, ...change }) });
        return (
          <Group key={p} title={planes === 1 ? 'With a trial weight' : `Weight in plane ${p + 1}`}>
            <BenchNumber
              info={BALANCE_INFO.weight}
              symbol="g"
              value={trial.weight.mass}
              onChange={(mass) => set({ weight: { ...trial.weight, mass } })}
            />
            <BenchNumber
              info={BALANCE_INFO.weightAngle}
              value={trial.weight.angle}
              onChange={(angle) => set({ weight: { ...trial.weight, angle } })}
            />
            {sensors.map((s) => (
              <ReadingFields
                key={s}
                sensor={planes === 1 ? undefined : s}
                reading={trial.readings[s]}
                onChange={(reading) => set({ readings: trial.readings.with(s, reading) })}
              />
            ))}
          </Group>
        );
      })}
      <BenchNumber
        info={BALANCE_INFO.readingError}
        value={form.readingError}
        onChange={(readingError) => form.set({ readingError })}
      />
    </>
  );
}

function FourRunFields({ form }: { readonly form: BalanceForm }) {
  return (
    <Group title="Amplitudes">
      <BenchNumber
        info={{ ...BALANCE_INFO.amplitude, label: 'Bare' }}
        value={form.fourBare}
        onChange={(fourBare) => form.set({ fourBare })}
      />
      <BenchNumber
        info={BALANCE_INFO.weight}
        symbol="g"
        value={form.fourMass}
        onChange={(fourMass) => form.set({ fourMass })}
      />
      {form.fourRuns.map((run, k) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: the runs are told apart by their place
        <div key={k} className="balance-run">
          <BenchNumber
            info={{ ...BALANCE_INFO.weightAngle, label: `Run ${k + 1}: weight at` }}
            value={run.angle}
            onChange={(angle) => form.set({ fourRuns: form.fourRuns.with(k, { ...run, angle }) })}
          />
          <BenchNumber
            info={{ ...BALANCE_INFO.amplitude, label: `Run ${k + 1}: amplitude` }}
            value={run.amplitude}
            onChange={(amplitude) => form.set({ fourRuns: form.fourRuns.with(k, { ...run, amplitude }) })}
          />
        </div>
      ))}
    </Group>
  );
}

interface WheelFieldsProps {
  readonly form: BalanceForm;
  readonly usual: { readonly mass: number; readonly speed: number };
}

function WheelFields({ form, usual }: WheelFieldsProps) {
  return (
    <Group title="Wheel and holes">
      <BenchNumber
        info={BALANCE_INFO.wheelMass}
        value={form.wheelMass ?? usual.mass}
        onChange={(wheelMass) => form.set({ wheelMass })}
      />
      <BenchNumber
        info={{ ...BALANCE_INFO.speed, label: 'Speed it is graded at' }}
        value={form.speed ?? usual.speed}
        onChange={(speed) => form.set({ speed })}
      />
      <BenchNumber
        info={BALANCE_INFO.radius}
        value={form.radius}
        onChange={(radius) => form.set({ radius })}
      />
      <Toggle
        label="Split over holes"
        hint={form.hasHoles ? 'only where there is a hole' : 'weight at any angle'}
        isOn={form.hasHoles}
        onChange={(hasHoles) => form.set({ hasHoles })}
      />
      {form.hasHoles && (
        <>
          <Choice
            label="Way"
            options={[
              { value: 'add', label: 'screw weights in' },
              { value: 'drill', label: 'drill out' },
            ]}
            value={form.way}
            onChange={(way) => form.set({ way })}
          />
          {(['holes', 'firstHole', 'most', 'step'] as const).map((name) => (
            <BenchNumber
              key={name}
              info={BALANCE_INFO[name]}
              symbol={BALANCE_INFO[name].dimension === 'mass' ? 'g' : undefined}
              value={form[name]}
              onChange={(value) => form.set({ [name]: value })}
            />
          ))}
        </>
      )}
    </Group>
  );
}
