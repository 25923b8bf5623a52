import { useMemo } from 'react';
import type { Comparison, Estimate, Patch, TermVerdict } from '../../../core/bench';
import { formatNumber } from '../../../core/units';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { BenchPlot } from './BenchPlot';
import type { FitResult } from './benchFindings';
import { useReachedGyros } from './benchGyro';
import { fitCurves } from './fitCurves';
import { offerPatch } from './patching';
import { PATCH_WORDS } from './patchWords';

/** A fit: its numbers with their intervals, how it lies on the readings, and what it would change in the rig. */
export function FitReport({ result }: { readonly result: FitResult }) {
  const { outcome, from, kind } = result;
  if (outcome.kind === 'refused') {
    return (
      <div className="plan-state" data-state="fails" role="status">
        <h3>
          <b className="word-fails">Cannot be told</b>
        </h3>
        <p>{outcome.sentence}</p>
        <p className="aside">From {from}. The rig is unchanged.</p>
      </div>
    );
  }
  return (
    <>
      <Group title="Found">
        <p className="aside">From {from}. In brackets the 95 % interval.</p>
        <ul className="bench-estimates">
          {outcome.estimates.map((estimate) => (
            <EstimateRow key={estimate.name} estimate={estimate} />
          ))}
        </ul>
        {outcome.remarks.map((remark) => (
          <p key={remark} className="bench-remark">
            {remark}
          </p>
        ))}
      </Group>
      <FitPlots
        comparison={outcome.comparison}
        spread={outcome.residualSpread}
        isAllan={kind === 'stillSensor'}
      />
      <Group title="Into the rig">
        {outcome.patches.length === 0 && <p>Nothing found here is a number of the rig.</p>}
        {outcome.patches.map((patch) => (
          <PatchRow key={patch.quantity} patch={patch} />
        ))}
      </Group>
    </>
  );
}

const VERDICT_WORDS: Readonly<Record<TermVerdict, string>> = {
  seen: 'seen',
  'not-seen': 'not seen: zero lies within',
  'cannot-tell': 'something acts, but which cannot be told',
};

/** An end of the interval to as many digits as its width calls for, so that the two ends can be told apart. */
const showEnd = (end: number, { low, high }: Estimate): string => {
  const width = high - low;
  const places = width > 0 ? Math.floor(Math.log10(Math.abs(end) / width + 1e-12)) : 0;
  return formatNumber(end, Math.min(9, Math.max(2, places + 3)));
};

function EstimateRow({ estimate }: { readonly estimate: Estimate }) {
  const { name, value, low, high, unit, verdict } = estimate;
  return (
    <li>
      <span>{name}</span>
      <b>
        {formatNumber(value, 4)} {unit}
      </b>
      <small>
        [{showEnd(low, estimate)}, {showEnd(high, estimate)}]{verdict && ` ${VERDICT_WORDS[verdict]}`}
      </small>
    </li>
  );
}

interface FitPlotsProps {
  readonly comparison: Comparison;
  readonly spread: number;
  readonly isAllan: boolean;
}

function FitPlots({ comparison, spread, isAllan }: FitPlotsProps) {
  const { fit, residual } = useMemo(() => fitCurves(comparison), [comparison]);
  if (comparison.time.length < 2) return null;
  return (
    <Group title="The fit">
      <BenchPlot
        title={isAllan ? 'Allan deviation' : 'Measured and fitted'}
        unit={comparison.unit}
        curves={fit}
        isLogarithmic={isAllan}
      />
      {!isAllan && (
        <BenchPlot
          title="Residual: measured less fitted"
          unit={comparison.unit}
          curves={residual}
          height={120}
        />
      )}
      <p className="aside">
        {isAllan ? 'Spread of the readings' : 'Spread of the residual'}: {formatNumber(spread, 3)}{' '}
        {comparison.unit}.
      </p>
    </Group>
  );
}

function PatchRow({ patch }: { readonly patch: Patch }) {
  const rig = useDocument((document) => document.rig);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const units = useSession((session) => session.units);
  const gyros = useReachedGyros();
  const offer = useMemo(() => offerPatch(rig, patch, gyros, units), [rig, patch, gyros, units]);
  if (offer.kind === 'none') {
    return (
      <p className="bench-patch">
        <b>{PATCH_WORDS[patch.quantity]}</b> {offer.sentence}
      </p>
    );
  }
  const isIn = offer.before === offer.after;
  return (
    <div className="bench-patch" data-agrees={offer.agrees}>
      <p>
        <b>{offer.label}</b>{' '}
        {isIn
          ? `is ${offer.after} in the rig.`
          : offer.agrees
            ? `${offer.before} in the rig agrees with the log.`
            : `${offer.before} in the rig lies outside what the log allows.`}
      </p>
      <button
        type="button"
        className="wide"
        disabled={isReadOnly || isIn}
        onClick={() => edit(`${offer.label} from a log`, () => offer.rig)}
      >
        {isIn ? `In the rig: ${offer.after}` : `Put ${offer.after} into the rig`}
      </button>
    </div>
  );
}
