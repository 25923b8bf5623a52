import { useFrame } from '@react-three/fiber';
import { useRef } from 'react';
import { BoxGeometry, EdgesGeometry, type Group, type LineSegments } from 'three';
import { hipPositions, restFeet } from '../../core/physics';
import type { Rig } from '../../core/rig';
import { type Point, rigBox, roadWheelPlaces, sectionOutline, stanceWidth, torsoCentre } from './bodyPlaces';
import { useGeometry } from './Inked';
import { segmentsGeometry } from './shapes';
import { useStage } from './stageFrame';

/** Edges of a box with its middle at a point, as pairs of points. */
function boxEdges(size: Point, at: Point): number[] {
  const box = new BoxGeometry(...size);
  const edges = new EdgesGeometry(box.translate(...at));
  const points = Array.from(edges.getAttribute('position').array);
  box.dispose();
  edges.dispose();
  return points;
}

/** The body standing as it should, in a few lines. */
function uprightLines(rig: Rig): number[] {
  const { body } = rig;
  switch (body.kind) {
    case 'legged': {
      const { length, width, height } = body.torso;
      const soles = restFeet(body, stanceWidth(rig));
      const legs = hipPositions(body).flatMap((hip, leg) => [...hip, ...soles[leg]]);
      return [...boxEdges([length, width, height], torsoCentre(body)), ...legs];
    }
    case 'hull': {
      const outline = sectionOutline(body.section);
      const half = body.length / 2;
      const rings = [-half, half].flatMap((x) =>
        outline.slice(1).flatMap((point, i) => [x, ...outline[i], x, ...point]),
      );
      return [...rings, ...outline.flatMap(([y, z]) => [-half, y, z, half, y, z])];
    }
    case 'inline': {
      const { length, width, height, centreHeight } = body.frame;
      const forks = roadWheelPlaces(body).flatMap((place) => [place[0], 0, 0, place[0], 0, centreHeight]);
      return [...boxEdges([length, width, height], [0, 0, centreHeight]), ...forks];
    }
  }
}

/** Where the body would stand if it had not gone over; seen only once it has. */
export function Ghost() {
  const { rig, frame, palette } = useStage();
  const group = useRef<Group>(null);
  const lines = useRef<LineSegments>(null);
  const geometry = useGeometry(() => segmentsGeometry(uprightLines(rig)), [rig]);
  const keel = rigBox(rig).min[2];
  useFrame(() => {
    if (!group.current) return;
    const { pose, water } = frame.instant;
    group.current.visible = frame.hasFallen;
    // Upright on the ground below where it lies; a hull keeps the height it floats at.
    group.current.position.set(pose[0], pose[1], Number.isFinite(water) ? pose[2] : -Math.min(0, keel));
  });
  return (
    <group ref={group} visible={false}>
      <lineSegments ref={lines} geometry={geometry}>
        <lineBasicMaterial color={palette.fail} transparent opacity={0.8} />
      </lineSegments>
    </group>
  );
}
