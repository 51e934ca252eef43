/** The engine's task for a range of a job's replicates at all points: the one place that says what of a job's inputs shapes a replicate. */
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { PointsTask } from '@/engine/run-points.ts';
import { pairsOf } from '@/engine/statistics/cross-statistics.ts';

/** All pairs of the observables of these ids, in the order asked for. */
export const correlatedPairs = ({ observables }: ResolvedNetwork, ids: string[]): [number, number][] =>
  pairsOf(ids.map((id) => observables.findIndex((observable) => observable.id === id)));

export function jobTask(options: {
  inputs: Pick<
    JobInputs,
    'horizon' | 'gridIntervals' | 'epsilon' | 'keptTraces' | 'passages' | 'correlations' | 'eventBudgetPerReplicate'
  >;
  seed: string;
  /** At each of the job's points. */
  networks: ResolvedNetwork[];
  firstReplicate: number;
  replicateCount: number;
}): PointsTask {
  const { inputs, ...range } = options;
  const { horizon, gridIntervals, epsilon, keptTraces, eventBudgetPerReplicate } = inputs;
  const indexOf = (id: string) => range.networks[0]!.observables.findIndex((observable) => observable.id === id);
  const passages = (inputs.passages ?? []).map((passage) => ({ ...passage, observable: indexOf(passage.observable) }));
  return {
    ...range,
    horizon,
    gridIntervals,
    keptTraces,
    passages,
    ...(inputs.correlations ? { pairs: correlatedPairs(range.networks[0]!, inputs.correlations) } : {}),
    eventBudgetPerReplicate,
    ...(epsilon === undefined ? {} : { epsilon }),
    purpose: 'job',
    eventBudgetPerBatch: null,
    blocks: true,
  };
}
