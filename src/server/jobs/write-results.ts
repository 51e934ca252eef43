/** Has the results of a job's delivered prefix written: the prefix as one file, and the archive. */
import { Op } from 'sequelize';
import { Batch, Segment, type Job } from '@db/models/jobs.ts';
import { ModelVersion, NetworkModel } from '@db/models/models.ts';
import type { ArchiveSubject } from '@/archives/subject.ts';
import type { WriteResultsAnswer } from '@/archives/write-results.ts';
import { archiveFileName, jobFile, mergedFileName, writeDurably } from './job-folder.ts';
import { provenanceJson } from './provenance-json.ts';
import { resultsWriter } from './results-writer.ts';
import { storedBatch } from './stored-batch.ts';

/** What the job's row says of its results. */
export interface WrittenResults {
  archiveRevision: number;
  prefixSha256: string;
  resultsDigest: string;
  archiveSha256: string;
  archiveBytes: number;
}

export async function writeResults(job: Job, finishedAt: string): Promise<WrittenResults> {
  const revision = job.archiveRevision + 1;
  const { earlier, batches } = await storedParts(job);
  const task = { ...(await describe(job, revision, finishedAt)), replicates: job.replicatesDone };
  const files = [
    ...(earlier ? [earlier] : []),
    ...batches.map((batch) => ({ file: jobFile(job.id, batch.file!), sha256: batch.fileSha256 ?? null })),
  ];
  let answer: WriteResultsAnswer | null = null;
  await writeDurably(jobFile(job.id, mergedFileName(revision)), (prefixFile) =>
    writeDurably(jobFile(job.id, archiveFileName(revision)), async (archiveFile) => {
      const write = () => resultsWriter().write({ ...task, batches: files, prefixFile, archiveFile });
      answer = await write();
      if (answer.kind === 'written') return;
      for (const place of answer.places) {
        const batch = batches[earlier ? place - 1 : place];
        if (!batch) throw new Error(`The stored results of ${job.id} are missing or damaged.`);
        await storedBatch(job, batch);
      }
      // A batch that is computed again has the same bytes.
      answer = await write();
    }),
  );
  return { archiveRevision: revision, ...writtenOf(answer!) };
}

function writtenOf(answer: WriteResultsAnswer): Omit<WrittenResults, 'archiveRevision'> {
  if (answer.kind !== 'written') throw new Error('Batches came out damaged twice.');
  const { prefixSha256, resultsDigest, archiveSha256, archiveBytes } = answer;
  return { prefixSha256, resultsDigest, archiveSha256, archiveBytes };
}

/** The file of an earlier revision's prefix, if there is one, and the batches that joined after it. */
async function storedParts(job: Job) {
  const latest = await Segment.findOne({ where: { jobId: job.id }, order: [['ordinal', 'DESC']] });
  const extended = job.archiveRevision > 0;
  const batches = await Batch.findAll({
    where: {
      jobId: job.id,
      state: 'joined',
      completeReplicates: { [Op.gt]: 0 },
      firstReplicate: { [Op.gte]: extended ? latest!.firstReplicate : 0 },
    },
    order: [['ordinal', 'ASC']],
  });
  const file = jobFile(job.id, mergedFileName(job.archiveRevision));
  return { earlier: extended ? { file, sha256: job.prefixSha256 ?? null } : null, batches };
}

async function describe(job: Job, revision: number, finishedAt: string) {
  const [model, version, segments, batches] = await Promise.all([
    NetworkModel.findByPk(job.modelId),
    ModelVersion.findByPk(job.modelVersionId),
    Segment.findAll({ where: { jobId: job.id }, order: [['ordinal', 'ASC']] }),
    Batch.findAll({ where: { jobId: job.id }, order: [['ordinal', 'ASC']] }),
  ]);
  const { name, seed, inputs, ending, events, replicatesPlanned } = job;
  const { number, contentHash, document } = version!;
  const subject: ArchiveSubject = {
    job: { name, seed, inputs, ending: ending ?? null, events, replicatesPlanned },
    model: { name: model!.name },
    version: { number, contentHash, document },
    revision,
    finishedAt,
  };
  return { subject, provenance: provenanceJson({ job, segments, batches, revision, finishedAt }) };
}
