/** Tells a team's webhooks how a job ended, in the transaction that ends it. A cancelled job is its canceller's news. */
import type { Job } from '@db/models/jobs.ts';
import type { WebhookKind } from '@/domain/webhooks/webhook-kinds.ts';
import { queueWebhook } from '../webhooks/queue-webhook.ts';

const kinds: Partial<Record<Job['state'], WebhookKind>> = {
  done: 'job_finished',
  stopped_at_cap: 'job_stopped_at_cap',
  failed: 'job_failed',
};

export async function queueJobWebhook(job: Job): Promise<void> {
  const kind = kinds[job.state];
  if (!kind) return;
  const { id, name, state, replicatesPlanned, replicatesDone, events, chargedMicrocredits, finishedAt } = job;
  await queueWebhook({
    teamId: job.teamId,
    kind,
    // An extended job ends again.
    occasion: `job:${id}:${job.archiveRevision}:${finishedAt}`,
    data: { job: { id, name, state, replicatesPlanned, replicatesDone, events, chargedMicrocredits, finishedAt } },
  });
}
