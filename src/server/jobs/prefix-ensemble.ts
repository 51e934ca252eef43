/** The ensemble of a job's complete prefix, merged batch by batch and kept for the next question. */
import { Op } from 'sequelize';
import { Batch, Job } from '@db/models/jobs.ts';
import type { EnsembleSummary, Trace } from '@/engine/ensemble.ts';
import { decodeSummary } from '@/engine/statistics/summary.ts';
import { loadBatch, type BatchContent } from './batch-file.ts';
import { mergedFileName } from './job-folder.ts';
import { storedBatch } from './stored-batch.ts';

export interface PrefixEnsemble {
  replicates: number;
  /** Null while no replicate is complete. */
  summary: EnsembleSummary | null;
  /** Events per replicate, in order, in pieces. */
  events: Float64Array[];
  traces: Trace[];
  kernel: string;
  engineVersion: string;
}

interface Kept {
  ensemble: PrefixEnsemble;
  /** Batches up to and with this one are merged. */
  lastOrdinal: number;
  queue: Promise<unknown>;
}

/** Ensembles kept in memory: those of the jobs asked about last. */
const keptMost = 4;
const kept = new Map<string, Kept>();

const empty = (): Kept => ({
  ensemble: { replicates: 0, summary: null, events: [], traces: [], kernel: '', engineVersion: '' },
  lastOrdinal: -1,
  queue: Promise.resolve(),
});

/** The prefix as it stands now. Calls about one job wait for each other; the answer must not be changed. */
export async function prefixEnsemble(job: Job): Promise<PrefixEnsemble> {
  const entry = kept.get(job.id) ?? empty();
  kept.delete(job.id);
  kept.set(job.id, entry);
  for (const [jobId] of kept) if (kept.size > keptMost && jobId !== job.id) kept.delete(jobId);
  const turn = entry.queue.then(() => catchUp(job, entry));
  entry.queue = turn.catch(() => undefined);
  return turn;
}

/** Forgets what is kept of a job (its files were replaced, or a test starts over). */
export const forgetPrefix = (jobId: string): void => void kept.delete(jobId);

async function catchUp(job: Job, entry: Kept): Promise<PrefixEnsemble> {
  const { ensemble } = entry;
  if (ensemble.replicates === 0 && job.archiveRevision > 0) await startFromMerged(job, ensemble);
  const joined = await Batch.findAll({
    where: {
      jobId: job.id,
      state: 'joined',
      ordinal: { [Op.gt]: entry.lastOrdinal },
      firstReplicate: { [Op.gte]: ensemble.replicates },
    },
    order: [['ordinal', 'ASC']],
  });
  for (const batch of joined) {
    if (batch.completeReplicates > 0) {
      add(ensemble, await storedBatch(job, batch));
      // Decoding and merging block the thread; let requests in between.
      await new Promise((resolve) => setImmediate(resolve));
    }
    entry.lastOrdinal = batch.ordinal;
  }
  return ensemble;
}

async function startFromMerged(job: Job, ensemble: PrefixEnsemble): Promise<void> {
  const name = mergedFileName(job.archiveRevision);
  const merged = await loadBatch({ jobId: job.id, name, sha256: job.prefixSha256 ?? null });
  if (!merged) throw new Error(`The stored results of ${job.id} are missing or damaged.`);
  add(ensemble, merged);
}

function add(ensemble: PrefixEnsemble, content: BatchContent): void {
  if (content.firstReplicate !== ensemble.replicates)
    throw new Error(`Replicate ${ensemble.replicates} was expected next, not ${content.firstReplicate}.`);
  const summary = decodeSummary(content.summary);
  if (ensemble.summary) ensemble.summary.merge(summary);
  else ensemble.summary = summary;
  ensemble.replicates += content.replicateCount;
  ensemble.events.push(content.eventsPerReplicate);
  ensemble.traces.push(...content.traces);
  ensemble.kernel = content.kernel;
  ensemble.engineVersion = content.engineVersion;
}

/** The prefix as one batch, for its file. */
export function asBatch(ensemble: PrefixEnsemble): BatchContent {
  if (!ensemble.summary) throw new Error('An empty prefix has no results.');
  const eventsPerReplicate = new Float64Array(ensemble.replicates);
  let at = 0;
  for (const piece of ensemble.events) {
    eventsPerReplicate.set(piece, at);
    at += piece.length;
  }
  return {
    firstReplicate: 0,
    replicateCount: ensemble.replicates,
    kernel: ensemble.kernel,
    engineVersion: ensemble.engineVersion,
    eventsPerReplicate,
    summary: ensemble.summary.encode(),
    traces: ensemble.traces,
    failure: null,
  };
}
