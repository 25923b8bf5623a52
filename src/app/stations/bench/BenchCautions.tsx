import { Cautions } from '../spin/Cautions';
import { useIdentifying } from './identifying';
import '../spin/spin.css';

/** What a wheel or a gimbal at the bench can do to a hand, as the rig calls for it. */
export function BenchCautions() {
  const cautions = useIdentifying((state) => state.givens?.cautions);
  return cautions ? <Cautions cautions={cautions} /> : null;
}
