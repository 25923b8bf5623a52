/** Whether the legs are long enough for a gait, and which figure of it to change when they are not. */
import { legReach } from '../physics';
import type { Gait, LeggedBody, PatternGait, Refusal } from '../rig';
import { formatQuantity } from '../units';
import { bodyStateAt } from './bodyMotion';
import { footStateAt } from './footMotion';
import type { CompiledGait } from './gait';

/** Share of its length a leg may be stretched to: a straight knee cannot follow a moving hip. */
export const MOST_STRETCH = 0.999;

/** Instants of a cycle at which reach is looked at: at least so many, and within each span of a foot from two to eight. */
const LEAST_INSTANTS = 240;
const SPAN_INSTANTS = 4000;

interface WorstReach {
  readonly leg: number;
  readonly time: number;
  /** m, hip to sole: the longest there is, or the shortest. */
  readonly longest: number;
  readonly shortest: number;
}

/** Even instants of a cycle, and instants within each span: keyframes may lie close together. */
function instantsOf(gait: CompiledGait): number[] {
  const times = Array.from({ length: LEAST_INSTANTS }, (_, i) => (i * gait.period) / LEAST_INSTANTS);
  const spans = gait.feet[0]?.spans ?? [];
  const each = Math.max(2, Math.min(8, Math.floor(SPAN_INSTANTS / spans.length)));
  for (const { from, to } of spans) {
    for (let i = 0; i < each; i++) times.push(from + (i * (to - from)) / each);
  }
  return times;
}

/** Longest and shortest distance of any foot from its hip over a cycle, m. */
export function reachOf(gait: CompiledGait): WorstReach {
  const body = new Float64Array(9);
  const foot = new Float64Array(9);
  let worst: WorstReach = { leg: 0, time: 0, longest: 0, shortest: Infinity };
  for (const time of instantsOf(gait)) {
    bodyStateAt(gait.body, time, body);
    gait.hips.forEach((hip, leg) => {
      footStateAt(gait.feet[leg] as (typeof gait.feet)[number], time, foot);
      let squared = 0;
      for (let axis = 0; axis < 3; axis++) {
        const reach = (foot[axis] as number) - (body[axis] as number) - (hip[axis] as number);
        squared += reach * reach;
      }
      const distance = Math.sqrt(squared);
      if (distance > worst.longest) worst = { ...worst, leg, time, longest: distance };
      if (distance < worst.shortest) worst = { ...worst, shortest: distance };
    });
  }
  return worst;
}

const isReachable = (body: LeggedBody, gait: CompiledGait): boolean => {
  const { longest, shortest } = reachOf(gait);
  const least = Math.abs(body.thigh.length - body.shank.length) / MOST_STRETCH;
  return longest <= MOST_STRETCH * legReach(body) && shortest >= least;
};

const FIELDS = ['stepLength', 'sway', 'stanceWidth', 'stepHeight'] as const;

/**
 * Refuses a gait that takes a foot out of its leg's reach, naming the field to change and how far it may go.
 *
 * @param compile  makes a changed pattern ready, to find out how far the field may go
 */
export function refuseReach(
  body: LeggedBody,
  gait: Gait,
  compiled: CompiledGait,
  compile: (changed: PatternGait) => CompiledGait,
): readonly Refusal[] {
  if (isReachable(body, compiled)) return [];
  const { leg, time, longest, shortest } = reachOf(compiled);
  const length = (value: number) => formatQuantity(value, 'length', 'mm');
  const reach = legReach(body);
  const least = Math.abs(body.thigh.length - body.shank.length);
  const what =
    longest > MOST_STRETCH * reach
      ? `takes the ${compiled.labels[leg]?.toLowerCase()} foot ${length(longest)} from its hip at ${formatQuantity(time, 'time')}, and the leg reaches ${length(MOST_STRETCH * reach)}`
      : `brings a foot within ${length(shortest)} of its hip, and thigh and shank fold to ${length(least)}`;
  if (gait.kind === 'pattern') {
    for (const field of FIELDS) {
      const neutral = field === 'stanceWidth' ? body.hips.width : 0;
      const at = (share: number): PatternGait => ({
        ...gait,
        [field]: neutral + share * (gait[field] - neutral),
      });
      if (!isReachable(body, compile(at(0)))) continue;
      let good = 0;
      let bad = 1;
      for (let i = 0; i < 30; i++) {
        const middle = (good + bad) / 2;
        if (isReachable(body, compile(at(middle)))) good = middle;
        else bad = middle;
      }
      const bound = at(good)[field];
      const [low, high] = bound < neutral ? [bound, neutral] : [neutral, bound];
      return [
        {
          field: `jobs.gait.${field}`,
          sentence: `jobs.gait.${field}: ${length(gait[field])} ${what}; with the rest as it is, from ${length(low)} to ${length(high)} is within reach.`,
        },
      ];
    }
  }
  const field = gait.kind === 'keyframes' ? 'jobs.gait.feet' : 'body.hips.height';
  const value = gait.kind === 'keyframes' ? 'this run of keyframes' : length(body.hips.height);
  return [
    {
      field,
      sentence: `${field}: ${value} ${what}; keep every foot from ${length(least)} to ${length(MOST_STRETCH * reach)} from its hip.`,
    },
  ];
}
