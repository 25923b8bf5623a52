import { describe, expect, it } from 'vitest';
import { createInstant } from '../../../src/app/stage/motionInstant';
import { describeInstant } from '../../../src/app/stage/poseSummary';
import { restInstant } from '../../../src/app/stage/restInstant';
import { SKIFF, STRIDER } from '../../../src/core/rig';

describe('describeInstant', () => {
  it('tells lean, tilts and feet of a rig at rest', () => {
    expect(describeInstant(STRIDER, restInstant(STRIDER), 0, undefined)).toBe(
      'Strider at 0 s: roll 0°, pitch 0°. Tilt: Front 0°, Back 0°. Both feet down.',
    );
  });

  it('tells a fall from when it has happened', () => {
    const instant = createInstant(2, 2);
    instant.pose.set([Math.cos(0.5), Math.sin(0.5), 0, 0], 3);
    expect(describeInstant(STRIDER, instant, 1.5, 1.25)).toMatch(
      /roll 57°.*No foot down\. Fell at 1\.25 s\.$/,
    );
    expect(describeInstant(STRIDER, instant, 1.2, 1.25)).not.toMatch(/Fell/);
  });

  it('says nothing of feet where there are none', () => {
    expect(describeInstant(SKIFF, restInstant(SKIFF), 0, undefined)).not.toMatch(/foot|feet/);
  });
});
