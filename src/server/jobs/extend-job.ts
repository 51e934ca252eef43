/** Adds the replicates of a quote to a finished job, under a charge segment of its own. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { Quote } from '@db/models/jobs.ts';
import { ModelVersion } from '@db/models/models.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { continuesSample } from '@/domain/jobs/job-inputs.ts';
import { stepJob } from '@/domain/jobs/job-state.ts';
import { pointsOf } from '@/domain/jobs/sweep.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { checkNothingOwed } from '../billing/check-nothing-owed.ts';
import { authorise } from '../teams/authorise.ts';
import { findJob } from './find-job.ts';
import { announceJobChange, wakeDispatcher } from './job-changes.ts';
import { capOf, checkOpenJobs, findOpenQuote, openSegment } from './open-segment.ts';
import { presentJob } from './present-job.ts';
import type { Job } from '@db/models/jobs.ts';

export async function extendJob(options: {
  actor: Actor;
  team: string;
  job: string;
  quoteId: string;
  capMicrocredits?: number | undefined;
}): Promise<Result<{ job: JobDocument }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:launch' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  if (userId === null) return refuse('forbidden', 'Jobs are extended by people.');
  return inWriteTransaction(async () => {
    const nothingOwed = await checkNothingOwed(team.id);
    if (!nothingOwed.ok) return nothingOwed;
    const found = await findJob({ teamId: team.id, job: options.job });
    if (!found.ok) return found;
    const job = found.value;
    const quote = await findOpenQuote({ teamId: team.id, quoteId: options.quoteId });
    if (!quote.ok) return quote;
    const fits = checkContinues(job, quote.value);
    if (!fits.ok) return fits;
    const open = await checkOpenJobs(team.id);
    if (!open.ok) return open;
    const cap = capOf(quote.value, options.capMicrocredits);
    if (!cap.ok) return cap;

    const { document } = (await ModelVersion.findByPk(job.modelVersionId))!;
    await job.update({
      state: 'queued',
      ending: null,
      lane: quote.value.inputs.lane,
      replicatesPlanned: job.replicatesDone + quote.value.inputs.replicates,
      expectedMicrocredits: job.chargedMicrocredits + quote.value.expectedMicrocredits,
      capMicrocredits: job.capMicrocredits + cap.value,
      heldMicrocredits: cap.value,
      finishedAt: null,
    });
    const segment = await openSegment({
      job,
      quote: quote.value,
      userId,
      tokenId: options.actor.kind === 'token' ? options.actor.tokenId : null,
      capMicrocredits: cap.value,
      firstReplicate: job.replicatesDone,
      gridPoints: job.inputs.gridIntervals + 1,
      observables: document.species.length + (document.observables?.length ?? 0),
    });
    if (!segment.ok) return segment;
    afterCommit(() => {
      announceJobChange(job.id);
      wakeDispatcher(job.id);
    });
    return accept({ job: await presentJob(job) });
  });
}

/** More replicates of the very same sample: model version, inputs and seed equal, and the engine that made the first ones. */
function checkContinues(job: Job, quote: Quote): Result<null> {
  const step = stepJob(job.state, 'queued');
  if (!step.ok) {
    return job.state === 'failed'
      ? refuse(
          'job_not_finished',
          'A job whose model failed cannot be extended: the next replicate is the one that failed.',
        )
      : refuse('job_not_finished', 'Extend a job once it has finished.');
  }
  if (job.engineVersion !== engineVersion)
    return refuse(
      'invalid_input',
      `This job ran on engine ${job.engineVersion}, which is no longer in service; its sample cannot be continued exactly. Launch a new job.`,
    );
  if (quote.modelVersionId !== job.modelVersionId || !continuesSample(job.inputs, quote.inputs))
    return refuse(
      'invalid_input',
      'This quote is for other inputs. Quote the same model version, overrides, points, horizon, grid, method with its ε, traces and seed; only replicates and lane may differ.',
      { errors: [{ path: 'quoteId', code: 'other_inputs', message: 'The quote does not continue this job.' }] },
    );
  if ((job.replicatesDone + quote.inputs.replicates) * pointsOf(job.inputs) > limits.replicatesPerJob)
    return refuse(
      'invalid_input',
      `A job has at most ${limits.replicatesPerJob.toLocaleString('en')} replicates over all points.`,
    );
  return accept(null);
}
