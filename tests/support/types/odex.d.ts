/** The part of the library's interface that the tests use; its own sources do not pass strict checks. */
export class Solver {
  constructor(dimension: number);
  absoluteTolerance: number;
  relativeTolerance: number;
  maxSteps: number;
  denseOutput: boolean;
  solve(
    derivative: (x: number, y: number[]) => number[],
    from: number,
    start: number[],
    to: number,
    callback?: unknown,
  ): { readonly y: number[]; readonly nStep: number };
  grid(step: number, at: (x: number, y: number[]) => unknown): unknown;
}
