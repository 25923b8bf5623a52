import type { PlanSetting } from '../planning';

/** A place between two nodes of a plan's course: kept by its owner and moved, so that a run makes no garbage. */
export class PlanPlace {
  private before = 0;
  private after = 0;
  private share = 0;
  private readonly nodes: number;
  private readonly isCyclic: boolean;
  private readonly interval: number;

  constructor(setting: PlanSetting) {
    this.nodes = setting.course.nodes;
    this.isCyclic = setting.course.isCyclic;
    this.interval = setting.problem.step;
  }

  /** Moves to an instant, s; past its end a run that does not repeat stays at its last node. */
  moveTo(time: number): void {
    const at = time / this.interval;
    const whole = Math.floor(at + 1e-9);
    this.share = Math.max(0, at - whole);
    if (this.isCyclic) {
      this.before = whole % this.nodes;
      this.after = (this.before + 1) % this.nodes;
    } else {
      this.before = Math.min(this.nodes - 1, whole);
      this.after = Math.min(this.nodes - 1, this.before + 1);
    }
  }

  /** Value of a packed column here, on the straight line between nodes. */
  valueOf(values: ArrayLike<number>, stride = 1, offset = 0): number {
    const from = values[this.before * stride + offset] as number;
    return from + this.share * ((values[this.after * stride + offset] as number) - from);
  }

  /** Value of a packed column at the node before: for flags and what holds over an interval. */
  heldValueOf(values: ArrayLike<number>, stride = 1, offset = 0): number {
    return values[Math.min(this.before * stride + offset, values.length - 1)] as number;
  }
}
