/**
 * Runs the same range of replicates at each of a job's points, in whole cycles: what counts of a range is the replicates that
 * are complete at every point, so that all points have equally many. A job without a sweep has one point.
 */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchResult, BatchTask, KernelName, ModelFailure } from './ensemble.ts';
import { runBatch } from './run-batch.ts';

export interface PointsTask extends Omit<BatchTask, 'network' | 'point'> {
  /** The network at each point, in order. Points that differ in values alone share one compiled kernel. */
  networks: ResolvedNetwork[];
}

/** A failure of the model and, where there are several, at which point. */
export type PointFailure = ModelFailure & { point?: number };

export interface PointsResult {
  firstReplicate: number;
  /** Complete at every point, from `firstReplicate`. */
  replicateCount: number;
  kernel: KernelName;
  /** Of the first replicate that failed; of several points, the first. */
  failure: PointFailure | null;
  /** Point by point, each with `replicateCount` replicates; none when nothing is complete. */
  points: BatchResult[];
}

/**
 * The answer depends on the task alone. A batch budget is shared: what the earlier points left is for the later ones. Throws as
 * `runBatch` does.
 */
export async function runPoints(task: PointsTask): Promise<PointsResult> {
  const { networks, ...shared } = task;
  const points: BatchResult[] = [];
  let replicateCount = task.replicateCount;
  let failure: PointFailure | null = null;
  let budget = task.eventBudgetPerBatch;
  for (const [point, network] of networks.entries()) {
    // Once a replicate has failed nothing behind it counts; it may still fail earlier at a later point.
    if (replicateCount === 0) break;
    const result = await runBatch({ ...shared, network, point, replicateCount, eventBudgetPerBatch: budget });
    points.push(result);
    if (budget !== null) budget = Math.max(0, budget - total(result.eventsPerReplicate));
    if (result.replicateCount === replicateCount) continue;
    replicateCount = result.replicateCount;
    failure = result.failure && (networks.length > 1 ? { ...result.failure, point } : result.failure);
  }
  const { kernel } = points[0]!;
  const answer = { firstReplicate: task.firstReplicate, replicateCount, kernel, failure };
  if (replicateCount === 0) return { ...answer, points: [] };
  // Sums cannot be cut, so points with more replicates are run again; being deterministic they give the same ones.
  for (const [point, result] of points.entries())
    if (result.replicateCount > replicateCount)
      points[point] = await runBatch({
        ...shared,
        network: networks[point]!,
        point,
        replicateCount,
        eventBudgetPerBatch: null,
      });
  return { ...answer, points };
}

const total = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0);

/** Events of each complete replicate over all points: what a cycle costs. */
export function eventsPerCycle(points: { eventsPerReplicate: Float64Array }[]): Float64Array {
  const [first, ...others] = points.map(({ eventsPerReplicate }) => eventsPerReplicate);
  const sums = Float64Array.from(first ?? []);
  for (const events of others) for (let i = 0; i < sums.length; i++) sums[i]! += events[i]!;
  return sums;
}
