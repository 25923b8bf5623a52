import { discretiseLean } from './leanStep';
import { boundControl, type ControlForm, freeControl } from './momentumPlanBounds';
import { type AxisLayout, countRows, type PlanLayout } from './momentumPlanLayout';
import type { FirmSupport, LeanSupport, MomentumPlanProblem } from './momentumPlanProblem';
import {
  addIdleRow,
  addRow,
  addSquare,
  addTerm,
  clearForm,
  createWriter,
  formOfControl,
  type Writer,
} from './momentumPlanWriter';
import type { StageProblem } from './solver';

/** The pass before, about which the servo rows are linearised; each is axes x (N + 1). */
export interface PreviousPass {
  /** over the momentum scale: sine of the tilt */
  readonly momentum: readonly Float64Array[];
  /** over the torque scale: controls of the intervals that start and that end at the node */
  readonly control: readonly Float64Array[];
  readonly before: readonly Float64Array[];
  /** rad/s */
  readonly leanRate: readonly Float64Array[];
}

/** Reference time of the weight on change of torque, s. */
const changeTime = 0.1;
/** Weight left on the plan's own objective when the shared scalar is what is made small. */
const faintWeight = 1e-9;

function writeDynamics(
  problem: MomentumPlanProblem,
  w: Writer,
  layout: AxisLayout,
  control: ControlForm,
  i: number,
  k: number,
  lean: ReturnType<typeof discretiseLean> | null,
): void {
  const { sizes, dynamics, drift } = w.problem;
  const { width, states, controls } = sizes;
  const first = (k * states - controls) * width;
  const momentumRow = first + layout.momentum * width;
  const previousRow = first + layout.previous * width;
  const gain = (layout.torqueScale * problem.step) / layout.momentumScale;
  dynamics[momentumRow + layout.momentum] = 1;
  dynamics[momentumRow + layout.control] = gain * control.slope;
  drift[k * states + layout.momentum - controls] = gain * control.constant;
  dynamics[previousRow + layout.control] = control.slope;
  drift[k * states + layout.previous - controls] = control.constant;
  if (!lean) return;
  const { demand } = problem.axes[i].support as LeanSupport;
  const d0 = demand[k];
  const d1 = demand[(k + 1) % demand.length];
  const scales = [layout.leanScale, layout.leanRateScale];
  for (let a = 0; a < 2; a++) {
    const at = first + (layout.lean + a) * width;
    for (let b = 0; b < 2; b++) {
      dynamics[at + layout.lean + b] = (lean.state[a * 2 + b] * scales[b]) / scales[a];
    }
    // torque of the array on the body is minus the rate of its momentum
    dynamics[at + layout.control] = (-lean.held[a] * layout.torqueScale) / scales[a];
    drift[k * states + layout.lean + a - controls] =
      (lean.held[a] * d0 + lean.ramp[a] * (d1 - d0)) / scales[a];
  }
}

function writeObjective(
  problem: MomentumPlanProblem,
  w: Writer,
  layout: AxisLayout,
  control: ControlForm,
  i: number,
  k: number,
  widest: number,
  faint: number,
): void {
  const { support } = problem.axes[i];
  const weights = problem.weights;
  const isInterval = k < problem.intervals;
  if (isInterval || problem.ends.kind === 'given') {
    clearForm(w);
    addTerm(w, layout.momentum, 1);
    addSquare(w, k, faint * weights.momentum);
    if (layout.lean >= 0) {
      clearForm(w);
      addTerm(w, layout.lean, 1);
      addSquare(w, k, faint * weights.lean);
    }
    // change of torque; after the last interval of a sequence it falls back to nothing
    clearForm(w);
    if (isInterval) formOfControl(w, layout, control, changeTime / problem.step);
    addTerm(w, layout.previous, -changeTime / problem.step);
    addSquare(w, k, faint * weights.change);
  }
  if (!isInterval) return;
  clearForm(w);
  formOfControl(w, layout, control, 1);
  addSquare(w, k, faint * weights.torque);
  if (control.slope === 0) {
    clearForm(w);
    addTerm(w, layout.control, 1);
    addSquare(w, k, 1);
  }
  if (support.kind === 'firm' && widest > 0) {
    const next = (k + 1) % support.ask.length;
    const force = (support.verticalForce[k] + support.verticalForce[next]) / 2;
    if (force <= 0) return;
    const ask = (support.ask[k] + support.ask[next]) / 2;
    clearForm(w);
    formOfControl(w, layout, control, layout.torqueScale / force / widest);
    w.offset += (ask / force - (support.pressureMin[k] + support.pressureMax[k]) / 2) / widest;
    addSquare(w, k, faint * weights.pressure);
  }
}

function writePressureRows(
  problem: MomentumPlanProblem,
  w: Writer,
  plan: PlanLayout,
  layout: AxisLayout,
  control: ControlForm,
  i: number,
  k: number,
): void {
  const support = problem.axes[i].support as FirmSupport;
  if (plan.mode !== 'centre of pressure') {
    if (control.slope === 0) {
      addIdleRow(w);
      addIdleRow(w);
      return;
    }
    clearForm(w);
    formOfControl(w, layout, control, 1);
    addRow(w, 1, control.most, 0);
    addRow(w, -1, -control.least, 0);
    return;
  }
  for (let end = 0; end < 2; end++) {
    const node = (k + end) % support.ask.length;
    const force = support.verticalForce[node] / layout.torqueScale;
    const ask = support.ask[node] / layout.torqueScale;
    clearForm(w);
    formOfControl(w, layout, control, 1);
    if (control.slope === 0) {
      addIdleRow(w);
      addIdleRow(w);
    } else {
      addRow(w, 1, force * support.pressureMax[k] - ask, force);
      addRow(w, -1, ask - force * support.pressureMin[k], force);
    }
  }
}

/**
 * Servo torque at node k over its limit, to first order about the pass before. With s = sin(tilt), c = cos
 * and K = torque scale over momentum scale, one servo bears
 *
 *   gimbals ( J ( K (control - previous) / (c step) + K^2 control^2 s / c^3 ) - h (body rate + lean rate) c ).
 */
function writeServoRows(
  problem: MomentumPlanProblem,
  w: Writer,
  plan: PlanLayout,
  layout: AxisLayout,
  control: ControlForm,
  i: number,
  k: number,
  pass: PreviousPass | null,
  tightening: number,
): void {
  const { array, bodyRate } = problem.axes[i];
  const servo = array.servo;
  if (!servo) return;
  const isTilting = array.kind === 'gimballed';
  const s = isTilting && pass ? Math.max(-0.999, Math.min(0.999, pass.momentum[i][k])) : 0;
  const c = Math.sqrt(1 - s * s);
  const now = isTilting && pass ? pass.control[i][k] : 0;
  const before = isTilting && pass ? pass.before[i][k] : 0;
  const leanRate = isTilting && pass ? pass.leanRate[i][k] : 0;
  const unit = servo.gimbals / servo.torque;
  const inertia = unit * servo.gimbalInertia;
  const speed = layout.torqueScale / layout.momentumScale;
  const jump = (inertia * speed) / problem.step;
  const smooth = inertia * speed * speed;
  const gyro = -unit * servo.wheelMomentum;
  const body = bodyRate ? bodyRate[k % bodyRate.length] : 0;
  const byControl = jump / c + (2 * smooth * now * s) / c ** 3;
  const byMomentum =
    (jump * (now - before) * s) / c ** 3 +
    smooth * now * now * (1 / c ** 3 + (3 * s * s) / c ** 5) -
    (gyro * (body + leanRate) * s) / c;
  clearForm(w);
  if (k < problem.intervals) formOfControl(w, layout, control, byControl);
  addTerm(w, layout.previous, -jump / c);
  if (layout.lean >= 0) addTerm(w, layout.leanRate, gyro * c * layout.leanRateScale);
  if (byMomentum !== 0) addTerm(w, layout.momentum, byMomentum);
  // value at the pass, less what the first-order terms make of the pass itself; terms linear as they stand cancel
  w.offset += gyro * body * c - byMomentum * s - (smooth * now * now * s) / c ** 3;
  const loosening = plan.mode === 'servo torque' ? 1 / servo.torque : 0;
  addRow(w, 1, tightening, loosening);
  addRow(w, -1, tightening, loosening);
}

function writeLinearRows(
  problem: MomentumPlanProblem,
  w: Writer,
  plan: PlanLayout,
  layout: AxisLayout,
  control: ControlForm,
  i: number,
  k: number,
  previous: PreviousPass | null,
  tightening: number,
): void {
  const { array, support } = problem.axes[i];
  const rows = countRows(problem, plan.mode, layout.hasEllipse, i, k);
  const isScaled = plan.mode === 'momentum';
  if (rows.momentum > 0) {
    const most = array.kind === 'gimballed' ? Math.sin(array.tiltMax) : 1;
    const least = array.kind === 'gimballed' ? -Math.sin(array.tiltMin) : 1;
    clearForm(w);
    addTerm(w, layout.momentum, 1);
    addRow(w, 1, isScaled ? 0 : most, isScaled ? most : 0);
    addRow(w, -1, isScaled ? 0 : least, isScaled ? least : 0);
  }
  if (rows.pressure > 0) writePressureRows(problem, w, plan, layout, control, i, k);
  if (rows.torque > 0) {
    const most = array.torque / layout.torqueScale;
    const loosening = plan.mode === 'torque' ? 1 / layout.torqueScale : 0;
    clearForm(w);
    formOfControl(w, layout, control, 1);
    addRow(w, 1, most, loosening);
    addRow(w, -1, most, loosening);
  }
  if (rows.servo > 0) writeServoRows(problem, w, plan, layout, control, i, k, previous, tightening);
  if (rows.lean > 0) {
    const { leanMin, leanMax } = support as LeanSupport;
    const loosening = plan.mode === 'lean' ? 1 / layout.leanScale : 0;
    // lean is a cubic between nodes to O(step^4), and these are its Bezier control points
    const reach = ((problem.step / 3) * layout.leanRateScale) / layout.leanScale;
    for (const side of [reach, -reach]) {
      clearForm(w);
      addTerm(w, layout.lean, 1);
      addTerm(w, layout.leanRate, side);
      addRow(w, 1, leanMax / layout.leanScale, loosening);
      addRow(w, -1, -leanMin / layout.leanScale, loosening);
    }
  }
}

/** Ellipse of tilt rate at both ends of interval k: |(rate of momentum / r, momentum)| <= momentum at 90 degrees. */
function writeCones(
  problem: MomentumPlanProblem,
  w: Writer,
  plan: PlanLayout,
  layout: AxisLayout,
  control: ControlForm,
): void {
  const gain = (layout.torqueScale * problem.step) / layout.momentumScale;
  const isShared = plan.mode === 'momentum' || plan.mode === 'tilt rate';
  for (let end = 0; end < 2; end++) {
    clearForm(w);
    addRow(w, 1, plan.mode === 'momentum' ? 0 : 1, isShared ? 1 : 0);
    formOfControl(w, layout, control, 1);
    addRow(w, -1, 0, 0);
    clearForm(w);
    addTerm(w, layout.momentum, 1);
    if (end === 1) formOfControl(w, layout, control, gain);
    addRow(w, -1, 0, 0);
  }
}

function writeBoundary(problem: MomentumPlanProblem, plan: PlanLayout, out: StageProblem): void {
  const { states, controls } = out.sizes;
  const { ends } = problem;
  let row = 0;
  if (ends.kind === 'cyclic') {
    for (; row < states; row++) {
      out.boundaryStart[row * states + row] = -1;
      out.boundaryEnd[row * states + row] = 1;
    }
    return;
  }
  plan.axes.forEach((layout, i) => {
    const isLean = layout.lean >= 0;
    const pin = (side: Float64Array, state: number, value: number) => {
      side[row * states + state - controls] = 1;
      out.boundaryValue[row] = value;
      row += 1;
    };
    const start = ends.start[i];
    pin(out.boundaryStart, layout.momentum, start.momentum / layout.momentumScale);
    pin(out.boundaryStart, layout.previous, 0);
    if (isLean) pin(out.boundaryStart, layout.lean, start.lean / layout.leanScale);
    if (isLean) pin(out.boundaryStart, layout.leanRate, start.leanRate / layout.leanRateScale);
    const end = ends.end[i];
    if (!end) return;
    pin(out.boundaryEnd, layout.momentum, end.momentum / layout.momentumScale);
    if (isLean) pin(out.boundaryEnd, layout.lean, end.lean / layout.leanScale);
    if (isLean) pin(out.boundaryEnd, layout.leanRate, end.leanRate / layout.leanRateScale);
  });
}

const halfOfWidest = (support: FirmSupport): number => {
  let widest = 0;
  for (let k = 0; k < support.pressureMin.length; k++) {
    widest = Math.max(widest, (support.pressureMax[k] - support.pressureMin[k]) / 2);
  }
  return widest;
};

/**
 * Writes a plan as a stage program.
 *
 * @param problem    plan to be made, in SI
 * @param plan       its layout
 * @param previous   scaled pass about which servo rows are linearised; null for rest position
 * @param tightening share of the servo torque that may be used, per axis
 * @param out        stage problem of the layout's sizes, overwritten
 * @returns the constant that the program's objective leaves out
 *
 * O(N). Source: momentum theorem; e = 2 h sin(tilt) gives torque = -de/dt and the tilt rate limit as the
 * ellipse (de/dt)^2 / r^2 + e^2 <= (2 h)^2.
 */
export function assemblePlan(
  problem: MomentumPlanProblem,
  plan: PlanLayout,
  previous: PreviousPass | null,
  tightening: readonly number[],
  out: StageProblem,
): number {
  for (const part of [out.hessian, out.gradient, out.dynamics, out.drift, out.rows, out.rowsShared])
    part.fill(0);
  for (const part of [out.bound, out.boundaryStart, out.boundaryEnd, out.boundaryValue]) part.fill(0);
  out.sharedGradient.fill(1);
  const w = createWriter(out);
  const faint = plan.mode === 'plan' ? 1 : faintWeight;
  const widest = problem.axes.map(({ support }) => (support.kind === 'firm' ? halfOfWidest(support) : 0));
  const steps = problem.axes.map(({ support }) =>
    support.kind === 'lean'
      ? discretiseLean(support.inertia, support.stiffness, support.damping, problem.step)
      : null,
  );
  const isFree = plan.mode === 'centre of pressure';
  const controls: ControlForm[] = plan.axes.map(() => freeControl);
  for (let k = 0; k <= problem.intervals; k++) {
    for (let i = 0; i < plan.axes.length; i++) {
      const { support } = problem.axes[i];
      const layout = plan.axes[i];
      if (support.kind === 'firm' && k < problem.intervals) {
        controls[i] = boundControl(support, layout.torqueScale, k, isFree);
      }
      if (k < problem.intervals) writeDynamics(problem, w, layout, controls[i], i, k, steps[i]);
      writeObjective(problem, w, layout, controls[i], i, k, widest[i], faint);
      writeLinearRows(problem, w, plan, layout, controls[i], i, k, previous, tightening[i]);
    }
    if (k === problem.intervals) continue;
    for (let i = 0; i < plan.axes.length; i++) {
      if (plan.axes[i].hasEllipse) writeCones(problem, w, plan, plan.axes[i], controls[i]);
    }
  }
  writeBoundary(problem, plan, out);
  return w.constant;
}
