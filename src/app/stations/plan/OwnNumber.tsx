import type { Dimension } from '../../../core/units';
import { NumberField } from '../../fields/NumberField';

interface OwnNumberProps {
  readonly label: string;
  readonly dimension: Dimension;
  readonly min: number;
  readonly max: number;
  readonly value: number;
  readonly onChange: (value: number) => void;
}

/** A number asked of the planner and not part of the rig. */
export const OwnNumber = ({ label, dimension, min, max, value, onChange }: OwnNumberProps) => (
  <NumberField info={{ label, dimension, min, max }} value={value} onChange={onChange} />
);
