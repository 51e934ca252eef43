/** Groups of replicates by the composition-rejection kernel. */
import type { GroupRunner, PointTask } from '../replicate-group.ts';
import { compiledKernel } from './compile-kernel.ts';
import { compositionRejectionModule } from './composition-rejection.ts';
import { groupTables } from './group-layout.ts';
import { KernelRunner, structureKey } from './kernel-runner.ts';

export async function compositionRejectionRunner(task: PointTask): Promise<GroupRunner> {
  const { layout, write } = groupTables(task.prepared);
  const kernel = await compiledKernel(`composition-rejection ${structureKey(task)}`, () =>
    compositionRejectionModule(task.prepared, layout),
  );
  return new KernelRunner(kernel, task, { end: layout.end, write });
}
