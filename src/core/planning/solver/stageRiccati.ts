import type { PackedRows } from './packedRows';
import type { StageProblem } from './stageProblem';
import type { StageSizes } from './stageSizes';

/**
 * Factorised Newton system of a stage-structured program: the backward Riccati recursion, with the
 * boundary multipliers and the shared scalars carried along as parameters theta of the value function
 *
 *   V_k(x, theta) = x' P_k x / 2 + x' Q_k theta + theta' T theta / 2 + ...
 *
 * so that a periodic end or a shared scalar costs a few more columns and no second factorisation.
 * Eliminating the controls of a stage is a partial LDL' of its (u, x, theta) matrix.
 *
 * Source: Rao, Wright and Rawlings, J. Optim. Theory Appl. 99 (1998); Frison and Jorgensen, CDC 2013.
 */
export interface StageFactor {
  /** (N+1) x states x states */
  readonly valueHessian: Float64Array;
  /** (N+1) x states x border */
  readonly valueBorder: Float64Array;
  /** (N+1) x controls x (width + border): pivots on the diagonal, multipliers to the right */
  readonly eliminated: Float64Array;
  /** states x (states + border): the same for the first state */
  readonly first: Float64Array;
  /** border x border and its row order */
  readonly borderMatrix: Float64Array;
  readonly borderOrder: Int32Array;
  /** (width + border)^2 */
  readonly block: Float64Array;
  /** states x width */
  readonly product: Float64Array;
  /** N x controls, (N+1) x states: right-hand sides on their way */
  readonly controlRight: Float64Array;
  readonly valueGradient: Float64Array;
  readonly column: Float64Array;
  readonly borderRight: Float64Array;
}

export function createStageFactor(sizes: StageSizes): StageFactor {
  const { stages, states, controls, width, border } = sizes;
  return {
    valueHessian: new Float64Array((stages + 1) * states * states),
    valueBorder: new Float64Array((stages + 1) * states * border),
    eliminated: new Float64Array((stages + 1) * controls * (width + border)),
    first: new Float64Array(states * (states + border)),
    borderMatrix: new Float64Array(border * border),
    borderOrder: new Int32Array(border),
    block: new Float64Array((width + border) * (width + border)),
    product: new Float64Array(states * width),
    controlRight: new Float64Array(stages * controls),
    valueGradient: new Float64Array((stages + 1) * states),
    column: new Float64Array(width + border),
    borderRight: new Float64Array(border),
  };
}

/** Adds H_k + rows' rows, and the shared columns of it, to the upper triangle of the stage block. */
function fillBlock(
  problem: StageProblem,
  packed: PackedRows,
  value: Float64Array,
  scaledShared: Float64Array,
  regularise: number,
  k: number,
  f: StageFactor,
): void {
  const { width, border, shared, boundaryRows, rowStart } = problem.sizes;
  const m = f.block;
  const total = width + border;
  const h = problem.hessian;
  const base = k * width * width;
  for (let a = 0; a < width; a++) {
    for (let b = a; b < width; b++) m[a * total + b] = h[base + a * width + b];
    m[a * total + a] += regularise;
    for (let b = width; b < total; b++) m[a * total + b] = 0;
  }
  const t = f.borderMatrix;
  const end = rowStart[k + 1];
  const { start, local } = packed;
  for (let r = rowStart[k]; r < end; r++) {
    const last = start[r + 1];
    for (let i = start[r]; i < last; i++) {
      const g = value[i];
      const at = local[i] * total;
      for (let j = i; j < last; j++) m[at + local[j]] += g * value[j];
      for (let j = 0; j < shared; j++) {
        m[at + width + boundaryRows + j] += g * scaledShared[r * shared + j];
      }
    }
    for (let i = 0; i < shared; i++) {
      const g = scaledShared[r * shared + i];
      if (g === 0) continue;
      for (let j = 0; j < shared; j++) {
        t[(boundaryRows + i) * border + boundaryRows + j] += g * scaledShared[r * shared + j];
      }
    }
  }
}

/** Adds F' P F and F' Q of the next stage to the stage block. */
function addCostToGo(problem: StageProblem, k: number, f: StageFactor): void {
  const { states, width, border } = problem.sizes;
  const m = f.block;
  const total = width + border;
  const dyn = problem.dynamics;
  const at = k * states * width;
  const p = f.valueHessian;
  const pAt = (k + 1) * states * states;
  const q = f.valueBorder;
  const qAt = (k + 1) * states * border;
  const pf = f.product;
  for (let i = 0; i < states; i++) {
    for (let b = 0; b < width; b++) {
      let sum = 0;
      for (let j = 0; j < states; j++) sum += p[pAt + i * states + j] * dyn[at + j * width + b];
      pf[i * width + b] = sum;
    }
  }
  for (let i = 0; i < states; i++) {
    for (let a = 0; a < width; a++) {
      const fa = dyn[at + i * width + a];
      if (fa === 0) continue;
      const row = a * total;
      for (let b = a; b < width; b++) m[row + b] += fa * pf[i * width + b];
      for (let b = 0; b < border; b++) m[row + width + b] += fa * q[qAt + i * border + b];
    }
  }
}

/** Partial LDL' of the stage block over its controls; false when a pivot is not positive. */
function eliminateControls(sizes: StageSizes, k: number, f: StageFactor): boolean {
  const { controls, width, border } = sizes;
  const m = f.block;
  const total = width + border;
  const t = f.borderMatrix;
  const e = f.eliminated;
  for (let j = 0; j < controls; j++) {
    const row = j * total;
    const store = (k * controls + j) * total;
    const d = m[row + j];
    if (!(d > 0 && d < Infinity)) return false;
    const inverse = 1 / d;
    e[store + j] = inverse;
    for (let a = j + 1; a < total; a++) e[store + a] = m[row + a] * inverse;
    for (let a = j + 1; a < width; a++) {
      const l = e[store + a];
      if (l === 0) continue;
      for (let b = a; b < total; b++) m[a * total + b] -= l * m[row + b];
    }
    for (let a = 0; a < border; a++) {
      const l = e[store + width + a];
      if (l === 0) continue;
      for (let b = 0; b < border; b++) t[a * border + b] -= l * m[row + width + b];
    }
  }
  return true;
}

/** LDL' of the first state's value Hessian, its share of the border taken off. */
function eliminateFirst(sizes: StageSizes, f: StageFactor): boolean {
  const { states, border } = sizes;
  const total = states + border;
  const w = f.first;
  for (let i = 0; i < states; i++) {
    for (let j = 0; j < states; j++) w[i * total + j] = f.valueHessian[i * states + j];
    for (let j = 0; j < border; j++) w[i * total + states + j] = f.valueBorder[i * border + j];
  }
  const t = f.borderMatrix;
  for (let j = 0; j < states; j++) {
    const d = w[j * total + j];
    if (!(d > 0 && d < Infinity)) return false;
    const inverse = 1 / d;
    for (let a = j + 1; a < total; a++) {
      const l = w[j * total + a] * inverse;
      if (l === 0) continue;
      if (a < states) {
        for (let b = a; b < total; b++) w[a * total + b] -= l * w[j * total + b];
      } else {
        const row = (a - states) * border;
        for (let b = 0; b < border; b++) t[row + b] -= l * w[j * total + states + b];
      }
    }
    w[j * total + j] = inverse;
    for (let a = j + 1; a < total; a++) w[j * total + a] *= inverse;
  }
  return true;
}

/** LU with row exchanges of the small border matrix (indefinite: boundary rows negative, shared positive). */
function factorBorder(border: number, f: StageFactor): boolean {
  const t = f.borderMatrix;
  const order = f.borderOrder;
  for (let j = 0; j < border; j++) {
    let pivot = j;
    for (let i = j + 1; i < border; i++) {
      if (Math.abs(t[i * border + j]) > Math.abs(t[pivot * border + j])) pivot = i;
    }
    order[j] = pivot;
    if (pivot !== j) {
      for (let c = 0; c < border; c++) {
        const keep = t[j * border + c];
        t[j * border + c] = t[pivot * border + c];
        t[pivot * border + c] = keep;
      }
    }
    const d = t[j * border + j];
    if (!(Math.abs(d) > 0 && Math.abs(d) < Infinity)) return false;
    for (let i = j + 1; i < border; i++) {
      const l = t[i * border + j] / d;
      t[i * border + j] = l;
      for (let c = j + 1; c < border; c++) t[i * border + c] -= l * t[j * border + c];
    }
  }
  return true;
}

/** Whether a boundary row pins the first state alone. */
function pinsStart(problem: StageProblem, b: number): boolean {
  const { states } = problem.sizes;
  for (let i = 0; i < states; i++) if (problem.boundaryEnd[b * states + i] !== 0) return false;
  return true;
}

/**
 * Adds the square of every boundary row on the first state alone to the stage block. The row holds at the
 * solution, so nothing changes but the pivots: a pinned state without cost of its own would leave them at
 * the size of the regularisation.
 */
function addPinnedSquares(problem: StageProblem, f: StageFactor): void {
  const { states, controls, width, border, boundaryRows } = problem.sizes;
  const total = width + border;
  const start = problem.boundaryStart;
  for (let b = 0; b < boundaryRows; b++) {
    if (!pinsStart(problem, b)) continue;
    for (let i = 0; i < states; i++) {
      for (let j = i; j < states; j++) {
        f.block[(controls + i) * total + controls + j] += start[b * states + i] * start[b * states + j];
      }
    }
  }
}

/**
 * Factorises the Newton system with H_k + rows' rows on the stages.
 *
 * @param packed       inequality rows
 * @param value        their entries divided by the cone scaling
 * @param scaledShared rows x shared, the same for the shared columns
 * @param regularise   added to every stage diagonal; keeps directions without cost or limit bounded
 * @param f            factor, overwritten
 * @returns false when a pivot is not positive
 *
 * O(N width^3), allocates nothing.
 */
export function factorStages(
  problem: StageProblem,
  packed: PackedRows,
  value: Float64Array,
  scaledShared: Float64Array,
  regularise: number,
  f: StageFactor,
): boolean {
  const sizes = problem.sizes;
  const { stages, states, controls, width, border, shared, boundaryRows } = sizes;
  const total = width + border;
  const m = f.block;
  f.borderMatrix.fill(0);
  for (let b = 0; b < boundaryRows; b++) f.borderMatrix[b * border + b] = -regularise;
  for (let j = 0; j < shared; j++) {
    f.borderMatrix[(boundaryRows + j) * (border + 1)] = problem.sharedHessian[j] + regularise;
  }
  for (let k = stages; k >= 0; k--) {
    fillBlock(problem, packed, value, scaledShared, regularise, k, f);
    if (k < stages) {
      addCostToGo(problem, k, f);
    } else {
      for (let b = 0; b < boundaryRows; b++) {
        for (let i = 0; i < states; i++) {
          m[(controls + i) * total + width + b] += problem.boundaryEnd[b * states + i];
        }
      }
    }
    if (k === 0) {
      addPinnedSquares(problem, f);
      for (let b = 0; b < boundaryRows; b++) {
        for (let i = 0; i < states; i++) {
          m[(controls + i) * total + width + b] += problem.boundaryStart[b * states + i];
        }
      }
    }
    if (k < stages && !eliminateControls(sizes, k, f)) return false;
    const pAt = k * states * states;
    const qAt = k * states * border;
    for (let i = 0; i < states; i++) {
      const row = (controls + i) * total;
      for (let j = i; j < states; j++) {
        const value = m[row + controls + j];
        f.valueHessian[pAt + i * states + j] = value;
        f.valueHessian[pAt + j * states + i] = value;
      }
      for (let b = 0; b < border; b++) f.valueBorder[qAt + i * border + b] = m[row + width + b];
    }
  }
  return eliminateFirst(sizes, f) && factorBorder(border, f);
}

/** Backward sweep of one right-hand side; leaves p_k, the eliminated controls and the border's share. */
function sweepBack(
  problem: StageProblem,
  f: StageFactor,
  right: Float64Array,
  rightBorder: Float64Array,
  residual: Float64Array,
): void {
  const { stages, states, controls, width, border, boundaryRows } = problem.sizes;
  const total = width + border;
  const p = f.valueGradient;
  const g = f.column;
  const t = f.borderRight;
  const dyn = problem.dynamics;
  const P = f.valueHessian;
  const Q = f.valueBorder;
  const e = f.eliminated;
  for (let b = 0; b < border; b++) t[b] = rightBorder[b];
  for (let i = 0; i < states; i++) p[stages * states + i] = right[stages * width + controls + i];
  for (let k = stages - 1; k >= 0; k--) {
    const next = (k + 1) * states;
    for (let a = 0; a < width; a++) g[a] = right[k * width + a];
    for (let i = 0; i < states; i++) {
      let sum = p[next + i];
      for (let j = 0; j < states; j++) sum += P[(next + i) * states + j] * residual[k * states + j];
      const row = (k * states + i) * width;
      for (let a = 0; a < width; a++) g[a] += dyn[row + a] * sum;
      const c = residual[k * states + i];
      for (let b = 0; b < border; b++) t[b] += Q[(next + i) * border + b] * c;
    }
    for (let j = 0; j < controls; j++) {
      const store = (k * controls + j) * total;
      const gj = g[j];
      f.controlRight[k * controls + j] = gj * e[store + j];
      for (let a = j + 1; a < width; a++) g[a] -= e[store + a] * gj;
      for (let b = 0; b < border; b++) t[b] -= e[store + width + b] * gj;
    }
    for (let i = 0; i < states; i++) p[k * states + i] = g[controls + i];
  }
  for (let b = 0; b < boundaryRows; b++) {
    if (!pinsStart(problem, b)) continue;
    for (let i = 0; i < states; i++) p[i] += problem.boundaryStart[b * states + i] * rightBorder[b];
  }
}

/** Border unknowns and first state from what the backward sweep left. */
function solveEnds(sizes: StageSizes, f: StageFactor, outZ: Float64Array, outBorder: Float64Array): void {
  const { states, controls, border } = sizes;
  const total = states + border;
  const w = f.first;
  const x = f.column;
  const t = f.borderRight;
  for (let i = 0; i < states; i++) x[i] = f.valueGradient[i];
  for (let j = 0; j < states; j++) {
    const xj = x[j];
    for (let a = j + 1; a < states; a++) x[a] -= w[j * total + a] * xj;
    for (let b = 0; b < border; b++) t[b] -= w[j * total + states + b] * xj;
    x[j] = xj * w[j * total + j];
  }
  const lu = f.borderMatrix;
  for (let j = 0; j < border; j++) {
    const pivot = f.borderOrder[j];
    const keep = t[j];
    t[j] = t[pivot];
    t[pivot] = keep;
  }
  for (let j = 0; j < border; j++) {
    for (let i = j + 1; i < border; i++) t[i] -= lu[i * border + j] * t[j];
  }
  for (let i = border - 1; i >= 0; i--) {
    let sum = t[i];
    for (let j = i + 1; j < border; j++) sum -= lu[i * border + j] * t[j];
    t[i] = sum / lu[i * border + i];
  }
  for (let b = 0; b < border; b++) outBorder[b] = -t[b];
  for (let j = states - 1; j >= 0; j--) {
    let sum = -x[j];
    for (let a = j + 1; a < states; a++) sum -= w[j * total + a] * outZ[controls + a];
    for (let b = 0; b < border; b++) sum -= w[j * total + states + b] * outBorder[b];
    outZ[controls + j] = sum;
  }
}

/**
 * Solves the factorised Newton system: minimise dz' M dz / 2 + right' dz subject to
 * dx_{k+1} = F_k dz_k + residual_k and the boundary rows.
 *
 * @param right       (N+1) x width, gradient
 * @param rightBorder border, boundary residuals then gradients of the shared scalars
 * @param residual    N x states, dynamics residual
 * @param outZ        (N+1) x width; may not alias an input
 * @param outDual     N x states
 * @param outBorder   border
 *
 * O(N width^2), allocates nothing.
 */
export function solveStages(
  problem: StageProblem,
  f: StageFactor,
  right: Float64Array,
  rightBorder: Float64Array,
  residual: Float64Array,
  outZ: Float64Array,
  outDual: Float64Array,
  outBorder: Float64Array,
): void {
  const { stages, states, controls, width, border } = problem.sizes;
  const total = width + border;
  const e = f.eliminated;
  const dyn = problem.dynamics;
  const P = f.valueHessian;
  const Q = f.valueBorder;
  sweepBack(problem, f, right, rightBorder, residual);
  solveEnds(problem.sizes, f, outZ, outBorder);
  for (let k = 0; k < stages; k++) {
    const at = k * width;
    for (let j = controls - 1; j >= 0; j--) {
      const store = (k * controls + j) * total;
      let sum = -f.controlRight[k * controls + j];
      for (let a = j + 1; a < width; a++) sum -= e[store + a] * outZ[at + a];
      for (let b = 0; b < border; b++) sum -= e[store + width + b] * outBorder[b];
      outZ[at + j] = sum;
    }
    const next = (k + 1) * width + controls;
    for (let i = 0; i < states; i++) {
      let sum = residual[k * states + i];
      const row = (k * states + i) * width;
      for (let a = 0; a < width; a++) sum += dyn[row + a] * outZ[at + a];
      outZ[next + i] = sum;
    }
    const value = (k + 1) * states;
    for (let i = 0; i < states; i++) {
      let sum = f.valueGradient[value + i];
      for (let j = 0; j < states; j++) sum += P[(value + i) * states + j] * outZ[next + j];
      for (let b = 0; b < border; b++) sum += Q[(value + i) * border + b] * outBorder[b];
      outDual[k * states + i] = sum;
    }
  }
}
