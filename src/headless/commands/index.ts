import type { Command } from '../command';
import { balanceCommand } from './balance';
import { fallCommand } from './fall';
import { handoverCommand } from './handover';
import { identifyCommand } from './identify';
import { layoutCommand } from './layout';
import { manyCommand } from './many';
import { planCommand } from './plan';
import { sizeCommand } from './size';
import { spinCommand } from './spin';
import { trialCommand } from './trial';
import { walkCommand } from './walk';
import { weighCommand } from './weigh';

/** Every command, in the order of the job. A new one is a file of its own and a line here. */
export const COMMANDS: readonly Command[] = [
  weighCommand,
  fallCommand,
  layoutCommand,
  spinCommand,
  planCommand,
  sizeCommand,
  trialCommand,
  manyCommand,
  walkCommand,
  identifyCommand,
  balanceCommand,
  handoverCommand,
];
