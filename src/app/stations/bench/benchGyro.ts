import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';

/** The gyro whose numbers stand for all that are alike. */
export function useBenchGyro(): number {
  const selected = useSession((session) => (session.selection.kind === 'gyro' ? session.selection.index : 0));
  const count = useDocument((document) => document.rig.array.gyros.length);
  return Math.min(selected, Math.max(0, count - 1));
}

/** The gyros a result is put into: all, or the one that is looked at on its own. */
export function useReachedGyros(): readonly number[] | undefined {
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  const gyro = useBenchGyro();
  return isEachOnItsOwn ? [gyro] : undefined;
}
