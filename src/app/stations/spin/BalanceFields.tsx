import { BALANCE_GRADES } from '../../../core/physics';
import { Choice } from '../../fields/Choice';
import { writeToLikeGyros } from '../../fields/likeGyros';
import { RigNumber } from '../../fields/RigFields';
import { writeAt } from '../../fields/rigPath';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';

/** Balance grade: those in common use by name, any other as a number. */
export function BalanceFields({ gyro }: { readonly gyro: number }) {
  const grade = useDocument((document) => document.rig.array.gyros[gyro]?.wheel.balanceGrade);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  const path = ['array', 'gyros', gyro, 'wheel', 'balanceGrade'] as const;
  const choose = (next: number): void =>
    edit(`Balance grade G ${next}`, (rig) =>
      isEachOnItsOwn
        ? writeAt(rig, path, next)
        : writeToLikeGyros(rig, gyro, ['wheel', 'balanceGrade'], next),
    );
  return (
    <Group title="Balance grade">
      <Choice<number>
        label="Grade in use for"
        options={BALANCE_GRADES.map(({ grade: value, use }) => ({ value, label: `G ${value} · ${use}` }))}
        value={BALANCE_GRADES.find((known) => known.grade === grade)?.grade}
        isReadOnly={isReadOnly}
        onChange={choose}
      />
      <RigNumber path={path} />
    </Group>
  );
}
