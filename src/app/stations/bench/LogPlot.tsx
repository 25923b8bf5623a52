import { useEffect, useMemo, useState } from 'react';
import type { LogQuantity } from '../../../core/bench';
import type { CurveView } from '../../../workers';
import { useShown } from '../../state/reading';
import { type BenchCurve, BenchPlot } from './BenchPlot';
import { cutLog, logHolder, type OpenLog } from './benchLog';
import { predictionOf } from './prediction';
import { QUANTITY_WORDS, useQuantityUnit } from './quantityWords';

/** Stretches the curve is reduced to: finer than the sheet's pixels on any screen it fits. */
const PIXELS = 700;

/** One quantity of the log over the cut, with what the preview says of it once the two are aligned. */
export function LogPlot({ log, quantity }: { readonly log: OpenLog; readonly quantity: LogQuantity }) {
  const unit = useQuantityUnit(quantity);
  const shown = useShown();
  const [view, setView] = useState<{ readonly of: LogQuantity; readonly curve: CurveView }>();
  const { from, to } = log.cut;

  // biome-ignore lint/correctness/useExhaustiveDependencies: another log or mapping is another curve
  useEffect(() => {
    let isStale = false;
    void logHolder()
      ?.calls.view(quantity, from, to, PIXELS)
      .then((curve) => {
        if (!isStale && curve) setView({ of: quantity, curve });
      });
    return () => {
      isStale = true;
    };
  }, [log.serial, log.mapping, quantity, from, to]);

  const curves = useMemo((): readonly BenchCurve[] => {
    if (view?.of !== quantity) return [];
    const inUnit = (values: Float64Array): Float64Array => values.map((value) => value / unit.toSI);
    const measured: BenchCurve = {
      label: 'log',
      look: 'measured',
      time: view.curve.time,
      values: inUnit(view.curve.values),
    };
    const { shift } = log;
    const predicted = shift === undefined || !shown ? undefined : predictionOf(quantity);
    if (!predicted || shift === undefined) return [measured];
    return [
      measured,
      {
        label: 'preview',
        look: 'predicted',
        time: predicted.time.map((t) => t - shift),
        values: inUnit(predicted.values),
      },
    ];
  }, [view, quantity, unit, log, shown]);

  if (curves.length === 0) return <p className="waiting">Drawing…</p>;
  return (
    <BenchPlot
      title={QUANTITY_WORDS[quantity]}
      unit={unit.symbol}
      curves={curves}
      height={200}
      span={[from, to]}
      onStretch={(start, end) => cutLog({ from: start, to: end })}
    />
  );
}
