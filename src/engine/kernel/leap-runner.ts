/** Groups of replicates by the tau-leaping kernel. */
import type { GroupRunner, PointTask } from '../replicate-group.ts';
import { compiledKernel } from './compile-kernel.ts';
import { KernelRunner, structureKey } from './kernel-runner.ts';
import { leapLayout } from './leap-layout.ts';
import { tauLeapingModule } from './tau-leaping.ts';

export async function tauLeapingRunner(task: PointTask): Promise<GroupRunner> {
  const kernel = await compiledKernel(`tau-leaping ${structureKey(task)}`, () => tauLeapingModule(task.prepared));
  return new KernelRunner(kernel, task, { end: leapLayout(task.prepared).end, write: () => undefined });
}
