/** Where a job's batches are stored, each with a checksum kept in the database. */
import { writeFile } from 'node:fs/promises';
import { encodeBatch, readBatchFile, sha256Hex, type BatchContent } from '@/archives/batch-file.ts';
import { jobFile, writeDurably } from './job-folder.ts';

export type { BatchContent };

/** Stores a batch durably under `name` in the job's folder; answers its SHA-256. */
export async function storeBatch(options: { jobId: string; name: string; content: BatchContent }): Promise<string> {
  const bytes = encodeBatch(options.content);
  await writeDurably(jobFile(options.jobId, options.name), (temporary) => writeFile(temporary, bytes));
  return sha256Hex(bytes);
}

/** The stored batch, or null when the file is missing or is not the one whose SHA-256 was recorded. */
export const loadBatch = (options: {
  jobId: string;
  name: string;
  sha256: string | null;
}): Promise<BatchContent | null> => readBatchFile(jobFile(options.jobId, options.name), options.sha256);
