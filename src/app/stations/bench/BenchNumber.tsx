import { NumberField, type NumberFieldProps } from '../../fields/NumberField';

/** A number of the bench's own, which the rig does not hold and undo does not reach. */
export const BenchNumber = (props: Pick<NumberFieldProps, 'info' | 'value' | 'symbol' | 'onChange'>) => (
  <NumberField {...props} />
);
