import { RigNumber } from '../../fields/RigFields';
import { Group } from '../../sheet/Group';
import { Refusals } from '../../sheet/Refusals';
import { SwitchFields } from '../../sheet/SwitchFields';
import { useDocument } from '../../state/document';
import { Fold } from './Fold';
import { GaitFields } from './GaitFields';
import { HoldingFold } from './HoldingFold';
import { PlanState } from './PlanState';
import { SequenceFields } from './SequenceFields';
import { SizeFold } from './SizeFold';
import { TradeFold } from './TradeFold';
import { WavesFold } from './WavesFold';
import './plan.css';

/** How must the gimbals tilt? The gait or the run of disturbances, whether there is a plan, and what would do. */
export function PlanSheet() {
  const isLegged = useDocument((document) => document.rig.body.kind === 'legged');
  const isFirm = useDocument((document) => document.rig.footing.kind === 'firm');
  return (
    <>
      <PlanState />
      <Refusals />
      <SequenceFields />
      <Group title="Run">
        <RigNumber path={['jobs', 'duration']} />
      </Group>
      <GaitFields />
      {isLegged && (
        <Fold title="Foot">
          <RigNumber path={['body', 'foot', 'width']} />
          <RigNumber path={['body', 'foot', 'length']} />
          {isFirm && <RigNumber path={['footing', 'margin']} />}
        </Fold>
      )}
      <Fold title="See what each does" isOpenAtFirst>
        <SwitchFields />
      </Fold>
      <SizeFold />
      <TradeFold />
      <HoldingFold />
      <WavesFold />
    </>
  );
}
