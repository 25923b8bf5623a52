import type { Ledger, LedgerLineName } from '../planning';
import type { Refusal, Rig } from '../rig';
import type { Figure } from '../units';
import type { Motion } from './motion';

/** What the user can switch off to see what it is good for. */
export interface Switches {
  /** Off: the gimbals stay locked and the wheels do nothing for the body. */
  readonly isArrayOn: boolean;
  /** Off: the gimbals rest at zero instead of following the planned tilt. */
  readonly isPlanOn: boolean;
  /** Off: nothing answers what the sensor sees. */
  readonly isFeedbackOn: boolean;
}

/** A change that would make an impossible plan possible, proven by another solve. */
export interface Cure {
  /** Such as `Make the feet 12 mm wider`. */
  readonly sentence: string;
  /** The rig with the cure applied, ready to become the document. */
  readonly rig: Rig;
}

/** The plan's curves over its own instants (`nodes` of them), for ribbon and export. */
export interface PlanCourse {
  /** nodes, s. */
  readonly time: Float64Array;
  readonly gyros: number;
  /** nodes x gyros, rad; rad/s; rad/s^2. */
  readonly tilt: Float64Array;
  readonly tiltRate: Float64Array;
  /** nodes, N*m: what is left over about the middle of the support (or from outside), and what the array gives, roll. */
  readonly demand: Float64Array;
  readonly torque: Float64Array;
  /** nodes, N*m*s, momentum held in roll, and the most the tilt limits allow. */
  readonly momentum: Float64Array;
  readonly momentumLimit: Float64Array;
  /** nodes, m, across the body: planned centre of pressure between the edges of the support; empty when it floats. */
  readonly centreOfPressure: Float64Array;
  readonly supportRight: Float64Array;
  readonly supportLeft: Float64Array;
  /** Blocks along the ribbon: gait phases and disturbances. */
  readonly blocks: readonly RibbonBlock[];
}

export interface RibbonBlock {
  readonly kind: 'phase' | 'event';
  readonly label: string;
  readonly from: number;
  readonly to: number;
  /** Which row the block lies in: one per foot, then one for events. */
  readonly row: number;
  /** For an event: its place in the rig's sequence. */
  readonly index?: number;
}

export type PlanView =
  | {
      readonly kind: 'planned';
      readonly course: PlanCourse;
      readonly solveSeconds: number;
      readonly iterations: number;
    }
  | {
      readonly kind: 'impossible';
      readonly line: LedgerLineName;
      /** What forbids it and by how much, in words with units. */
      readonly sentence: string;
      readonly cures: readonly Cure[];
      /** The demand and support, still worth looking at. */
      readonly course: PlanCourse;
    }
  | { readonly kind: 'unplanned'; readonly sentence: string };

/** Everything a change of the rig brings to the screen, made in one go off the main thread. */
export type Evaluation =
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] }
  | {
      readonly kind: 'evaluated';
      /** Mass, centre, inertia, momentum, how it falls. */
      readonly weigh: readonly Figure[];
      /** m, body frame; inertia about the centre, kg*m^2, row-major 3 x 3. */
      readonly mass: number;
      readonly centreOfMass: readonly [number, number, number];
      readonly inertia: readonly number[];
      readonly plan: PlanView;
      readonly ledger: Ledger;
      readonly motion: Motion;
      /** Whether the body was still standing at the end of the preview, and if not, when it went over. */
      readonly outcome: { readonly kind: 'holds' } | { readonly kind: 'falls'; readonly at: number };
    };
