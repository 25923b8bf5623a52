import { needsEllipse, scaleOfTorque } from './momentumPlanBounds';
import type { LimitName, MomentumPlanProblem } from './momentumPlanProblem';
import { createStageSizes, type StageSizes } from './solver';

/**
 * What the shared scalar w of the program stands for.
 * 'plan': there is none. 'momentum': every array's momentum is w times its own. Any other: that one limit
 * is let out by w, in its own unit (see relaxationUnit).
 */
export type PlanMode =
  | 'plan'
  | 'momentum'
  | 'tilt rate'
  | 'torque'
  | 'servo torque'
  | 'centre of pressure'
  | 'lean';

/** Where one axis keeps its variables in the stage vector z = (controls, states), and in what scale. */
export interface AxisLayout {
  readonly control: number;
  /** momentum over `momentumScale`, and the control of the interval before */
  readonly momentum: number;
  readonly previous: number;
  /** lean over `leanScale` and lean rate over `leanRateScale`; -1 on firm footing */
  readonly lean: number;
  readonly leanRate: number;
  readonly momentumScale: number;
  /** N m for a control of one: momentum rate at which the tilt rate limit is met at rest position */
  readonly torqueScale: number;
  /** whether the tilt rate has rows: left out where other limits imply it */
  readonly hasEllipse: boolean;
  readonly leanScale: number;
  readonly leanRateScale: number;
}

export interface PlanLayout {
  readonly mode: PlanMode;
  readonly key: string;
  readonly sizes: StageSizes;
  readonly axes: readonly AxisLayout[];
  /** rows: which limit each row belongs to */
  readonly rowLimit: readonly LimitName[];
}

/** Rows of one axis at one node, in the order in which they are written. */
export interface RowPlan {
  readonly momentum: number;
  readonly pressure: number;
  readonly torque: number;
  readonly servo: number;
  readonly lean: number;
  readonly cones: number;
}

/** Rows of axis i at node k; a cyclic plan has none at node N, which is node 0 again. */
export function countRows(
  problem: MomentumPlanProblem,
  mode: PlanMode,
  hasEllipse: boolean,
  i: number,
  k: number,
): RowPlan {
  const { array, support } = problem.axes[i];
  const isInterval = k < problem.intervals;
  const isNode = isInterval || problem.ends.kind === 'given';
  const isFirm = support.kind === 'firm';
  return {
    momentum: isNode ? 2 : 0,
    // two are enough when the bounds of both ends can be folded together
    pressure: isFirm && isInterval ? (mode === 'centre of pressure' ? 4 : 2) : 0,
    torque: isInterval && array.torque < Infinity ? 2 : 0,
    servo: isNode && array.servo ? 2 : 0,
    lean: isNode && !isFirm ? 4 : 0,
    cones: isInterval && hasEllipse ? 2 : 0,
  };
}

function layOutAxis(problem: MomentumPlanProblem, mode: PlanMode, i: number, firstState: number): AxisLayout {
  const { array, support } = problem.axes[i];
  const isLean = support.kind === 'lean';
  const momentum = firstState + (isLean ? 2 : 0);
  let leanScale = 1;
  let leanRateScale = 1;
  if (isLean) {
    leanScale = Math.max(Math.abs(support.leanMin), Math.abs(support.leanMax));
    const natural = Math.sqrt(Math.abs(support.stiffness) / support.inertia);
    leanRateScale = leanScale * Math.max(natural, 1 / (problem.step * problem.intervals));
  }
  return {
    control: i,
    momentum,
    previous: momentum + 1,
    lean: isLean ? firstState : -1,
    leanRate: isLean ? firstState + 1 : -1,
    momentumScale: array.momentum,
    torqueScale: scaleOfTorque(problem.axes[i]),
    hasEllipse:
      array.kind === 'gimballed' && (mode !== 'plan' || needsEllipse(problem.axes[i], problem.intervals)),
    leanScale,
    leanRateScale,
  };
}

/** Boundary rows: all states of a cyclic plan, or every given figure of the ends. */
export function countBoundaryRows(problem: MomentumPlanProblem): number {
  const { ends } = problem;
  let count = 0;
  problem.axes.forEach((axis, i) => {
    const states = axis.support.kind === 'lean' ? 4 : 2;
    if (ends.kind === 'cyclic') count += states;
    else count += states + (ends.end[i] ? states - 1 : 0);
  });
  return count;
}

const layoutKey = (problem: MomentumPlanProblem, mode: PlanMode, layouts: readonly AxisLayout[]): string =>
  [
    mode,
    problem.intervals,
    problem.ends.kind,
    ...problem.axes.map(({ support, array }, i) => {
      const isPinned = problem.ends.kind === 'given' && problem.ends.end[i] !== null;
      const hasTorque = array.torque < Infinity;
      return `${support.kind} ${layouts[i].hasEllipse} ${hasTorque} ${array.servo !== null} ${isPinned}`;
    }),
  ].join('|');

/**
 * Lays the plan out as stages, or hands back `previous` when it fits already (scales may have changed, so
 * its axes are always new).
 */
export function layOutPlan(
  problem: MomentumPlanProblem,
  mode: PlanMode,
  previous: PlanLayout | null,
): PlanLayout {
  const { intervals, axes } = problem;
  const axisLayouts: AxisLayout[] = [];
  let next = axes.length;
  for (let i = 0; i < axes.length; i++) {
    axisLayouts.push(layOutAxis(problem, mode, i, next));
    next += axes[i].support.kind === 'lean' ? 4 : 2;
  }
  const key = layoutKey(problem, mode, axisLayouts);
  if (previous && previous.key === key) return { ...previous, axes: axisLayouts };
  const linearRows: number[] = [];
  const cones: number[][] = [];
  const rowLimit: LimitName[] = [];
  for (let k = 0; k <= intervals; k++) {
    let linear = 0;
    let coneCount = 0;
    for (let i = 0; i < axes.length; i++) {
      const rows = countRows(problem, mode, axisLayouts[i].hasEllipse, i, k);
      linear += rows.momentum + rows.pressure + rows.torque + rows.servo + rows.lean;
      coneCount += rows.cones;
      for (let r = 0; r < rows.momentum; r++) rowLimit.push('momentum');
      for (let r = 0; r < rows.pressure; r++) rowLimit.push('centre of pressure');
      for (let r = 0; r < rows.torque; r++) rowLimit.push('torque');
      for (let r = 0; r < rows.servo; r++) rowLimit.push('servo torque');
      for (let r = 0; r < rows.lean; r++) rowLimit.push('lean');
    }
    for (let r = 0; r < 3 * coneCount; r++) rowLimit.push('tilt rate');
    linearRows.push(linear);
    cones.push(new Array<number>(coneCount).fill(3));
  }
  const sizes = createStageSizes({
    stages: intervals,
    states: next - axes.length,
    controls: axes.length,
    boundaryRows: countBoundaryRows(problem),
    shared: mode === 'plan' ? 0 : 1,
    linearRows,
    cones,
  });
  return { mode, key, sizes, axes: axisLayouts, rowLimit };
}
