/** The rig's picture as SVG, drawn from its own surfaces without a graphics card: for sheets written headless. */
import { cross3, dot3, type Mat3, rotate3, unit3, type Vec3 } from '../physics';
import type { Rig } from '../rig';
import { type ModelNode, modelRig, type Tint } from './rigModel';
import { escapeXml } from './text';

const SIZE = 460;
const EDGE = 14;

/** Seen from the front left and above. */
const SIGHT: Vec3 = unit3([1, 0.75, 0.5]);
const LIGHT: Vec3 = unit3([0.5, 0.9, 1.2]);

const COLOURS: Readonly<Record<Tint, readonly [number, number, number]>> = {
  body: [205, 208, 200],
  leg: [95, 104, 112],
  keel: [88, 94, 100],
  tyre: [60, 62, 66],
  payload: [196, 178, 128],
  gimbal: [78, 104, 158],
  metal: [176, 182, 186],
  heavy: [112, 112, 118],
  plastic: [216, 206, 176],
};

interface Face {
  /** Towards the eye. */
  readonly depth: number;
  readonly points: readonly (readonly [number, number])[];
  readonly fill: string;
}

const times = (a: Mat3, b: Mat3): Mat3 => {
  const column = (k: 0 | 1 | 2): Vec3 => rotate3(a, [b[k], b[k + 3] as number, b[k + 6] as number]);
  const [x, y, z] = [column(0), column(1), column(2)];
  return [x[0], y[0], z[0], x[1], y[1], z[1], x[2], y[2], z[2]];
};

const plus = (a: Vec3, b: Vec3): Vec3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
const minus = (a: Vec3, b: Vec3): Vec3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];

function collectFaces(node: ModelNode, turn: Mat3, place: Vec3, right: Vec3, up: Vec3, faces: Face[]): void {
  const at = plus(place, rotate3(turn, node.place));
  const turned = times(turn, node.turn);
  for (const { mesh, tint } of node.shapes) {
    const corner = (i: number): Vec3 => {
      const k = 3 * mesh.triangles[i]!;
      return plus(at, rotate3(turned, [mesh.positions[k]!, mesh.positions[k + 1]!, mesh.positions[k + 2]!]));
    };
    for (let i = 0; i < mesh.triangles.length; i += 3) {
      const [a, b, c] = [corner(i), corner(i + 1), corner(i + 2)];
      const normal = cross3(minus(b, a), minus(c, a));
      if (dot3(normal, SIGHT) <= 0) continue;
      const lit = 0.62 + 0.38 * Math.max(0, dot3(unit3(normal), LIGHT));
      faces.push({
        depth: dot3(plus(plus(a, b), c), SIGHT),
        points: [a, b, c].map((p): readonly [number, number] => [dot3(p, right), -dot3(p, up)]),
        fill: `#${COLOURS[tint]
          .map((part) =>
            Math.round(part * lit)
              .toString(16)
              .padStart(2, '0'),
          )
          .join('')}`,
      });
    }
  }
  for (const child of node.children) collectFaces(child, turned, at, right, up, faces);
}

/**
 * The rig at rest in parallel projection from the front left and above, farther faces drawn first.
 *
 * O(triangles log triangles); some hundred kilobytes. Faces that pass through one another may overlap wrongly.
 */
export function drawRig(rig: Rig): string {
  const right = unit3(cross3([0, 0, 1], SIGHT));
  const up = cross3(SIGHT, right);
  const faces: Face[] = [];
  collectFaces(modelRig(rig, 2e-3), [1, 0, 0, 0, 1, 0, 0, 0, 1], [0, 0, 0], right, up, faces);
  faces.sort((a, b) => a.depth - b.depth);
  let [left, top, far, low] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const { points } of faces) {
    for (const [x, y] of points) {
      left = Math.min(left, x);
      far = Math.max(far, x);
      top = Math.min(top, y);
      low = Math.max(low, y);
    }
  }
  const scale = (SIZE - 2 * EDGE) / Math.max(far - left, low - top, 1e-9);
  const width = Math.ceil((far - left) * scale + 2 * EDGE);
  const height = Math.ceil((low - top) * scale + 2 * EDGE);
  const place = ([x, y]: readonly [number, number]): string =>
    `${((x - left) * scale + EDGE).toFixed(1)} ${((y - top) * scale + EDGE).toFixed(1)}`;
  const paths = faces.map(
    ({ points, fill }) => `<path d="M${points.map(place).join('L')}Z" fill="${fill}" stroke="${fill}"/>`,
  );
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}" viewBox="0 0 ${width} ${height}" role="img" aria-label="${escapeXml(rig.name)}" stroke-width="1" stroke-linejoin="round">`,
    ...paths,
    '</svg>',
    '',
  ].join('\n');
}
