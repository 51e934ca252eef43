/**
 * The history of an archive: when, where and in which pieces it was computed. None of it
 * shapes a number under results/, and none of it is money: the archive goes to the client.
 */
import { arch, cpus, platform } from 'node:os';
import type { Batch, Job, Segment } from '@db/models/jobs.ts';

export function provenanceJson(options: {
  job: Job;
  segments: Segment[];
  batches: Batch[];
  revision: number;
  finishedAt: string;
}): string {
  const { job, segments, batches, revision, finishedAt } = options;
  const provenance = {
    format: 'burette-provenance-1',
    jobId: job.id,
    modelVersionId: job.modelVersionId,
    revision,
    launchedAt: job.createdAt,
    startedAt: job.startedAt,
    finishedAt,
    segments: segments.map((segment) => ({
      quoteId: segment.quoteId,
      firstReplicate: segment.firstReplicate,
      replicates: segment.replicateCount,
      events: segment.events,
    })),
    batches: batches.map((batch) => ({
      firstReplicate: batch.firstReplicate,
      replicatesPlanned: batch.replicateCount,
      replicatesDelivered: batch.state === 'joined' ? batch.completeReplicates : 0,
      events: batch.state === 'joined' ? batch.events : 0,
      absorbedEvents: batch.absorbedEvents,
      workerSeconds: batch.seconds,
    })),
    machine: {
      platform: platform(),
      architecture: arch(),
      processor: cpus()[0]?.model ?? null,
      node: process.version,
    },
  };
  return `${JSON.stringify(provenance, null, 2)}\n`;
}
