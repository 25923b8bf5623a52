import { RigFields, RigNumber } from '../../fields/RigFields';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';

/** The body by its kind: torso and legs, hull, or frame and road wheels. */
export function BodyFields() {
  const body = useDocument((document) => document.rig.body);
  switch (body.kind) {
    case 'legged':
      return (
        <>
          <Group title="Torso">
            <RigFields path={['body', 'torso']} />
          </Group>
          <Group title="Hips">
            <RigNumber path={['body', 'hips', 'width']} />
            {body.legs > 2 && <RigNumber path={['body', 'hips', 'pitch']} />}
            <RigNumber path={['body', 'hips', 'height']} />
          </Group>
          <Group title="Legs">
            <RigFields path={['body', 'legs']} />
            <RigFields path={['body', 'thigh']} />
            <RigFields path={['body', 'shank']} />
          </Group>
        </>
      );
    case 'hull':
      return (
        <>
          <Group title="Hull">
            <RigFields path={['body', 'section']} />
            <RigFields path={['body', 'length']} />
            <RigFields path={['body', 'shellMass']} />
          </Group>
          <Group title="Keel">
            <RigFields path={['body', 'keel']} />
          </Group>
        </>
      );
    case 'inline':
      return (
        <>
          <Group title="Frame">
            <RigFields path={['body', 'wheelbase']} />
            <RigFields path={['body', 'frame']} />
          </Group>
          <Group title="Road wheels">
            <RigFields path={['body', 'tyre']} />
          </Group>
        </>
      );
  }
}
