import type { QuantityInfo } from '../../../core/rig';
import { NumberField } from '../../fields/NumberField';
import { BRAKE_INFO, FACTOR_INFO, PRELOAD_INFO, useSpinChoices } from './spinChoices';

type Choice = 'factor' | 'preload' | 'brakeCurrent';

const INFO: Readonly<Record<Choice, QuantityInfo>> = {
  factor: FACTOR_INFO,
  preload: PRELOAD_INFO,
  brakeCurrent: BRAKE_INFO,
};

/** A number the station asks for and the rig does not hold. `usual` stands while none was chosen; `most` caps it. */
export function ChoiceField({
  choice,
  usual,
  most,
}: {
  readonly choice: Choice;
  readonly usual: number;
  readonly most?: number;
}) {
  const value = useSpinChoices((state) => state[choice]) ?? usual;
  const choose = useSpinChoices((state) => state.choose);
  const info = most === undefined ? INFO[choice] : { ...INFO[choice], max: most };
  return (
    <NumberField info={info} value={Math.min(info.max, value)} onChange={(si) => choose({ [choice]: si })} />
  );
}
