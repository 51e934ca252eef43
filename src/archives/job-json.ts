/** job.json: all that is needed to repeat the job, and the digest that a repetition must reach. */
import { pointsOf } from '@/domain/jobs/sweep.ts';
import type { ArchiveSubject, Results } from './subject.ts';

/** No times, no ids of ours, no money. `verify` reads it by verify/job-file.ts. */
export function jobJson({ job, model, version }: ArchiveSubject, { ensemble }: Results, resultsDigest: string): string {
  const { inputs, ending } = job;
  const content = {
    format: 'burette-job-1',
    model: { name: model.name, version: version.number, contentHash: version.contentHash, file: 'model.json' },
    method: inputs.method,
    ...(inputs.epsilon === undefined ? {} : { epsilon: inputs.epsilon }),
    kernel: ensemble.kernel,
    engineVersion: ensemble.engineVersion,
    seed: job.seed,
    horizon: inputs.horizon,
    gridIntervals: inputs.gridIntervals,
    overrides: inputs.overrides,
    keptTraces: inputs.keptTraces,
    passages: inputs.passages ?? [],
    ...(inputs.correlations ? { correlations: inputs.correlations } : {}),
    eventBudgetPerReplicate: inputs.eventBudgetPerReplicate,
    points: pointsOf(inputs),
    ...(inputs.sweep ? { sweep: inputs.sweep } : {}),
    replicates: ensemble.replicates,
    replicatesAskedFor: job.replicatesPlanned,
    events: job.events,
    ended: { state: ending?.state, reason: ending?.reason, failure: ending?.failure ?? null },
    resultsDigest,
    resultsDigestOf:
      'SHA-256 of the lines "<sha256>  <path>\\n" of the files under results/, sorted by path in byte order',
  };
  return `${JSON.stringify(content, null, 2)}\n`;
}
