/** The ensemble of a job's complete prefix, merged batch by batch and kept for the next question. */
import { Op } from 'sequelize';
import { Batch, Job } from '@db/models/jobs.ts';
import { addBatch, emptyEnsemble, type Ensemble } from '@/archives/ensemble.ts';
import { loadBatch } from './batch-file.ts';
import { mergedFileName } from './job-folder.ts';
import { storedBatch } from './stored-batch.ts';

export type PrefixEnsemble = Ensemble;

interface Kept {
  ensemble: PrefixEnsemble;
  /** Batches up to and with this one are merged. */
  lastOrdinal: number;
  /** The job's archive when this was read; a later one replaces the batches' files. */
  revision: number;
  queue: Promise<unknown>;
}

/** Ensembles kept in memory: those of the jobs asked about last. */
const keptMost = 4;
const kept = new Map<string, Kept>();

const empty = (): Kept => ({
  ensemble: emptyEnsemble(),
  lastOrdinal: -1,
  revision: 0,
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
  if (entry.revision !== job.archiveRevision && entry.ensemble.replicates < job.replicatesDone) {
    entry.ensemble = emptyEnsemble();
    entry.lastOrdinal = -1;
  }
  entry.revision = job.archiveRevision;
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
      addBatch(ensemble, await storedBatch(job, batch));
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
  addBatch(ensemble, merged);
}
