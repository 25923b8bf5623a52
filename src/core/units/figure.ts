import type { Dimension } from './quantities';

/** A value that went into a figure. */
export interface FigureInput {
  readonly label: string;
  /** SI. */
  readonly value: number;
  readonly dimension: Dimension;
}

/**
 * A number as every screen and sheet shows it: it can be opened to see the formula it came from, the inputs
 * that went in, and where the formula is published. `value` is computed from the same inputs, never typed.
 */
export interface Figure {
  /** Stable name within its screen, such as `rimStress`. */
  readonly id: string;
  readonly label: string;
  /** SI. */
  readonly value: number;
  readonly dimension: Dimension;
  /** In plain mathematical notation, such as `σ = ρ v²`. */
  readonly formula: string;
  readonly inputs: readonly FigureInput[];
  /** Published source, `common practice`, `from memory`, or `first principles`. */
  readonly source: string;
}
