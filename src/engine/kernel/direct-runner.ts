/** Groups of replicates by the generated kernels of the direct method. */
import type { GroupRunner, PointTask } from '../replicate-group.ts';
import { compiledKernel } from './compile-kernel.ts';
import { directScalarModule } from './direct-scalar.ts';
import { directSimdModule } from './direct-simd.ts';
import { hasTriggers } from './emit-changes.ts';
import { KernelRunner, noTables, structureKey, type KernelTables } from './kernel-runner.ts';
import { changeTable, laneLayout, largestLaneChange, largestLaneCount } from './lane-layout.ts';

export async function directScalarRunner(task: PointTask): Promise<GroupRunner> {
  const kernel = await compiledKernel(`direct-scalar ${structureKey(task)}`, () => directScalarModule(task.prepared));
  return new KernelRunner(kernel, task, noTables(task));
}

export async function directSimdRunner(task: PointTask): Promise<GroupRunner> {
  if (!lanesSuit(task)) return directScalarRunner(task);
  const kernel = await compiledKernel(`direct-simd ${structureKey(task)}`, () => directSimdModule(task.prepared));
  return new KernelRunner(kernel, task, laneTables(task));
}

/** Whether lanes can run the point at all; otherwise the scalar kernel does, with the same bytes. */
function lanesSuit({ prepared, constants, initialState }: PointTask): boolean {
  if (hasTriggers(prepared) || prepared.passages.length > 0) return false;
  const smallSteps = prepared.reactions.every(({ changes }) =>
    changes.every(({ count }) => Math.abs(count) <= largestLaneChange),
  );
  const smallCounts = prepared.changing.every((species) => initialState[species]! <= largestLaneCount);
  const positive = prepared.reactions.every(({ law }) => {
    if (law.kind === 'expression') return true;
    const { factor } = law;
    const value = factor.kind === 'number' ? factor.value : factor.kind === 'constant' ? constants[factor.slot]! : 0;
    return !(value < 0 || Object.is(value, -0));
  });
  return prepared.reactions.length > 0 && smallSteps && smallCounts && positive;
}

/** The table of changes from which lanes take those of the chosen reaction. */
function laneTables({ prepared }: PointTask): KernelTables {
  const { changes, end } = laneLayout(prepared);
  return {
    end,
    write({ buffer }) {
      const table = changeTable(prepared);
      new Float64Array(buffer, changes, table.length).set(table);
    },
  };
}
