/** Makes the rig's body, sets it on the ground as its gait begins, and pins it there where its footing is a pin. */
import { type Body, Quaternion, Vec3, type World } from 'cannon-es';
import type { CompiledRig } from '../core/physics';
import { GroundPin } from './groundPin';
import { type FreeGimbal, RigBody } from './rigBody';
import type { RigLoop } from './rigLoop';
import { depthBelowOrigin, isPinned, rigShapes } from './rigShapes';

export interface RigStart {
  readonly compiled: CompiledRig;
  /** Roll and its rate at the start, rad and rad/s: about the line a pinned rig turns on, else about its foot. */
  readonly lean?: number;
  readonly leanRate?: number;
}

/** Adds the rig of a loop to a world, upright on its floor but for the lean asked for. */
export function placeRig(setting: RigStart, loop: RigLoop, world: World, floor: Body, step: number): RigBody {
  const { compiled, lean = 0, leanRate = 0 } = setting;
  const { rig, model } = compiled;
  const { legs } = loop.setting.gait;
  const base = new Float64Array(16);
  const feet = new Float64Array(3 * legs);
  loop.placeLegs(0, base, feet);
  const body = new RigBody(
    { model, shapes: rigShapes(compiled), free: freeGimbals(compiled), base, feet },
    world.gravity,
  );
  loop.startTilts(body);
  const turn = new Quaternion();
  turn.setFromAxisAngle(new Vec3(1, 0, 0), lean);
  const tilted = floor.quaternion.mult(turn);
  const pivot = pivotOf(compiled, lean);
  const lift = depthBelowOrigin(compiled);
  const [px, py, pz] = pivot;
  const from = turn.vmult(new Vec3(px, py, pz));
  const [sx, sy] = loop.startPlace();
  const origin = floor.quaternion.vmult(new Vec3(sx - from.x + px, sy - from.y + py, pz - from.z + lift));
  const [vx, vy, vz] = loop.startVelocity();
  const spin = tilted.vmult(new Vec3(leanRate, 0, 0));
  const swing = spin.cross(tilted.vmult(new Vec3(-px, -py, -pz)));
  const walk = floor.quaternion.vmult(new Vec3(vx, vy, vz));
  body.place(
    [origin.x, origin.y, origin.z],
    [tilted.w, tilted.x, tilted.y, tilted.z],
    [walk.x + swing.x, walk.y + swing.y, walk.z + swing.z],
    [leanRate, 0, 0],
    loop.speeds(),
  );
  world.addBody(body);
  if (isPinned(rig)) {
    const at = new Vec3(px, py, pz + lift);
    const { contactEquationStiffness } = world.defaultContactMaterial;
    const isLine = rig.footing.kind === 'edge';
    world.addConstraint(new GroundPin(body, floor, pivot, at, isLine, contactEquationStiffness, step));
  }
  return body;
}

/** Point of the body frame the rig leans about at its start, m: the pin, the round's lowest point, or an edge of a foot. */
function pivotOf({ rig, whole }: CompiledRig, lean: number): readonly [number, number, number] {
  switch (rig.footing.kind) {
    case 'edge':
      return [0, rig.footing.offset, 0];
    case 'point':
      return rig.footing.position;
    case 'firm': {
      if (rig.body.kind !== 'legged' || lean === 0) return [0, 0, 0];
      const wide = rig.jobs.gait.kind === 'pattern' ? rig.jobs.gait.stanceWidth : rig.body.hips.width;
      return [0, -Math.sign(lean) * (wide / 2 + rig.body.foot.width / 2), 0];
    }
    case 'rocker':
      return [0, 0, 0];
    case 'float':
      return [0, 0, whole.com[2]];
  }
}

function freeGimbals({ rig }: CompiledRig): readonly (FreeGimbal | null)[] {
  return rig.array.gyros.map(({ drive, gimbal, tilt }) => {
    if (drive.kind !== 'free') return null;
    return {
      stiffness: drive.stiffness,
      damping: drive.damping + gimbal.friction,
      coulomb: 0.7 * gimbal.stiction,
      stiction: gimbal.stiction,
      tiltMin: tilt.min,
      tiltMax: tilt.max,
    };
  });
}
