import { useDeferredValue, useMemo } from 'react';
import { type CompiledRig, compileRig } from '../../../core/physics';
import { useDocument } from '../../state/document';

/** The rig on the screen, compiled; undefined while it is refused. A drag may outrun it: what it gives then is a moment old. */
export function useCompiled(): CompiledRig | undefined {
  const rig = useDeferredValue(useDocument((document) => document.rig));
  return useMemo(() => {
    const outcome = compileRig(rig);
    return outcome.kind === 'compiled' ? outcome.compiled : undefined;
  }, [rig]);
}
