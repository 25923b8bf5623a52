import { RigFields } from '../../fields/RigFields';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';

/** How the body meets the world: its feet and the footing, or the water. */
export function GroundFields() {
  const body = useDocument((document) => document.rig.body.kind);
  return (
    <>
      {body === 'legged' && (
        <Group title="Foot">
          <RigFields path={['body', 'foot']} />
        </Group>
      )}
      <Group title="Footing">
        <RigFields path={['footing']} label="Stands on" />
      </Group>
    </>
  );
}
