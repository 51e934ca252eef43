/** Batch tasks for tests, with everything but the network defaulted. */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchTask } from '@/engine/ensemble.ts';
import type { PointsTask } from '@/engine/run-points.ts';

export const batchTask = (network: ResolvedNetwork, given: Partial<BatchTask> = {}): BatchTask => ({
  network,
  horizon: 10,
  gridIntervals: 10,
  seed: '20261201',
  purpose: 'job',
  point: 0,
  firstReplicate: 0,
  replicateCount: 100,
  keptTraces: 0,
  eventBudgetPerReplicate: null,
  eventBudgetPerBatch: null,
  ...given,
});

/** The same range at several points, or at the only one. */
export function pointsTask(networks: ResolvedNetwork[], given: Partial<BatchTask> = {}): PointsTask {
  const { network: _, point: __, ...shared } = batchTask(networks[0]!, given);
  return { ...shared, networks };
}
