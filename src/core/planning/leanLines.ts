import type { LedgerLine } from './ledger';
import { input, lineOf } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { PlanSetting } from './rigPlan';

/** Lean of a body that is free to lean, against the lean its straight-line model is planned with. O(instants). */
export function leanLines(setting: PlanSetting, schedules: readonly AxisSchedule[]): readonly LedgerLine[] {
  if (setting.kind !== 'lean') return [];
  const { problem, time, axes } = setting;
  return schedules.flatMap((schedule, a): readonly LedgerLine[] => {
    const support = problem.axes[a]?.support;
    if (support?.kind !== 'lean') return [];
    const isRoll = axes[a]?.axis === 'roll';
    return [
      lineOf({
        name: isRoll ? 'lean' : 'pitchLean',
        label: isRoll ? 'Lean in roll' : 'Lean in pitch',
        dimension: 'angle',
        time,
        ask: schedule.lean.map(Math.abs),
        have: schedule.lean.map((lean) => (lean >= 0 ? support.leanMax : -support.leanMin)),
        askFormula: '|φ|, I φ″ = k φ − d φ′ + moment + torque',
        haveFormula: 'largest lean planned with',
        inputs: [
          input('Inertia about the pivot I', support.inertia, 'inertia'),
          input('Toppling stiffness k (negative rights)', support.stiffness, 'stiffness'),
          input('Damping d', support.damping, 'damping'),
        ],
        source: 'small motion of a rigid body on a line, first principles; the limit is our own choice',
      }),
    ];
  });
}
