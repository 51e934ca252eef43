/** Looks whether a job's precision target is met by its present prefix; ends the job if so, else lets the prefix go on. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Job } from '@db/models/jobs.ts';
import { isPrecise, type PrecisionTarget } from '@/domain/jobs/precision.ts';
import type { EnsembleSummary } from '@/engine/ensemble.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { asSummary, momentsAt } from '@/engine/statistics/statistics-of.ts';
import { advancePrefix, type Advance } from './advance-prefix.ts';
import { endJob } from './end-job.ts';
import { prefixEnsemble } from './prefix-ensemble.ts';

/** Looking again after a crash finds the same: the prefix decides, and nothing joins it before the look is over. */
export async function lookAtPrecision(jobId: string, replicates: number): Promise<Advance> {
  const job = (await Job.findByPk(jobId))!;
  const target = job.inputs.stopping!;
  const { points, replicates: present } = await prefixEnsemble(job);
  const precise = present === replicates && points.every(({ summary }) => isPrecise(target, seenBy(summary, target)));
  return inWriteTransaction(async () => {
    await job.reload();
    if (precise && !job.ending && job.replicatesDone === replicates)
      await endJob(job, {
        state: 'done',
        reason: 'precision_reached',
        detail:
          `The mean of ${target.observable} is known as well as was asked for after ${replicates.toLocaleString('en')} replicates` +
          `${points.length > 1 ? ' at every point' : ''}. ` +
          'The interval is nominal, since it was looked at more than once.',
        failure: null,
      });
    return advancePrefix(job, replicates);
  });
}

function seenBy(ensemble: EnsembleSummary, { observable, gridPoint }: PrecisionTarget) {
  const summary = asSummary(ensemble);
  const { mean, meanStandardError } = momentsAt(summary, summary.observables.indexOf(observable), gridPoint);
  const commonest = Math.max(...distributionOf(summary, observable, gridPoint).counts);
  return { replicates: summary.replicates, mean, standardError: meanStandardError, commonest };
}
