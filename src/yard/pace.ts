/**
 * How many fixed steps are due as real time passes. The yard's own clock only ever counts steps; this decides when
 * they are taken, and lets a machine that is too slow fall behind the clock on the wall rather than skip.
 */
export class Pace {
  private waiting = 0;

  /**
   * @param step  s, of the yard
   * @param most  s of backlog kept; more is let go, and the yard runs slower than the wall
   */
  constructor(
    private readonly step: number,
    private readonly most: number,
  ) {}

  /** Whole steps due after `elapsed` more seconds; what is left of a step is kept. */
  stepsDue(elapsed: number): number {
    this.waiting = Math.min(this.most, this.waiting + Math.max(0, elapsed));
    const steps = Math.floor(this.waiting / this.step + 1e-9);
    this.waiting -= steps * this.step;
    return steps;
  }
}
