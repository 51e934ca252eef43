/** The engine's task for a range of a job's replicates: the one place that says what of a job's inputs shapes a replicate. */
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchTask } from '@/engine/ensemble.ts';

export function jobTask(options: {
  inputs: Pick<
    JobInputs,
    'horizon' | 'gridIntervals' | 'epsilon' | 'keptTraces' | 'passages' | 'eventBudgetPerReplicate'
  >;
  seed: string;
  network: ResolvedNetwork;
  point: number;
  firstReplicate: number;
  replicateCount: number;
}): BatchTask {
  const { inputs, ...range } = options;
  const { horizon, gridIntervals, epsilon, keptTraces, eventBudgetPerReplicate } = inputs;
  const indexOf = (id: string) => range.network.observables.findIndex((observable) => observable.id === id);
  const passages = (inputs.passages ?? []).map((passage) => ({ ...passage, observable: indexOf(passage.observable) }));
  return {
    ...range,
    horizon,
    gridIntervals,
    keptTraces,
    passages,
    eventBudgetPerReplicate,
    ...(epsilon === undefined ? {} : { epsilon }),
    purpose: 'job',
    eventBudgetPerBatch: null,
    blocks: true,
  };
}
