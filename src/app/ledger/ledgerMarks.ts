import type { LedgerLine, LedgerLineName } from '../../core/planning';
import type { MarkedQuantity } from '../styles/quantityMarks';

/** Which of the four marked quantities a ledger line is about; the others are drawn in ink. */
const LINE_QUANTITY: Readonly<Partial<Record<LedgerLineName, MarkedQuantity>>> = {
  rollTorque: 'torque',
  pitchTorque: 'torque',
  momentum: 'momentum',
  yawLeak: 'leak',
};

export const quantityOf = (line: LedgerLineName): MarkedQuantity | undefined => LINE_QUANTITY[line];

export const fails = (line: LedgerLine): boolean => line.spare < 0;

/** The spare as a bare percentage, a minus sign where it fails. */
export function sparePercent(spare: number): string {
  if (spare === Number.NEGATIVE_INFINITY) return '−∞';
  const percent = Math.abs(spare) * 100;
  const text = percent >= 999.5 ? '>999' : percent < 9.95 ? percent.toFixed(1) : percent.toFixed(0);
  return `${spare < 0 ? '−' : ''}${text} %`;
}

/** The spare in words: `12 % spare`, `short by 8 %`, `nothing to give`. */
export function spareWords(spare: number): string {
  if (spare === Number.NEGATIVE_INFINITY) return 'nothing to give';
  const percent = Math.abs(spare) * 100;
  const text = percent >= 1000 ? 'over 1000' : percent < 9.95 ? percent.toFixed(1) : percent.toFixed(0);
  return spare < 0 ? `short by ${text} %` : `${text} % spare`;
}
