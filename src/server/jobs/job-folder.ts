/** Where the files of a job lie, and how they are written so that a crash leaves the old file or the new one. */
import { mkdir, open, readdir, rename, rm } from 'node:fs/promises';
import path from 'node:path';
import { env } from '../env.ts';

/** Ending of files that are being written. */
export const unfinished = '.tmp';

export const jobsFolder = (): string => path.join(env().BURETTE_DATA_DIR, 'jobs');
export const jobFolder = (jobId: string): string => path.join(jobsFolder(), jobId);
export const jobFile = (jobId: string, name: string): string => path.join(jobFolder(jobId), name);

export const batchFileName = (ordinal: number): string => path.join('batches', `${ordinal}.batch`);
/** The boundary batch run again, shortened to what the cap allows. */
export const cutBatchFileName = (ordinal: number): string => path.join('batches', `${ordinal}-cut.batch`);
/** The whole delivered prefix as one batch. */
export const mergedFileName = (revision: number): string => `prefix-${revision}.batch`;
export const archiveFileName = (revision: number): string => `archive-${revision}.zip`;

/** Writes under a temporary name, flushes, renames, flushes the folder: after it returns, a power cut loses nothing. */
export async function writeDurably(file: string, write: (temporary: string) => Promise<void>): Promise<void> {
  const temporary = file + unfinished;
  await mkdir(path.dirname(file), { recursive: true });
  await write(temporary);
  await flush(temporary);
  await rename(temporary, file);
  await flush(path.dirname(file));
}

async function flush(fileOrFolder: string): Promise<void> {
  const handle = await open(fileOrFolder, 'r');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

/** Removes batch files and older revisions once a revision stands. */
export async function removeOutdatedFiles(jobId: string, revision: number): Promise<void> {
  await rm(jobFile(jobId, 'batches'), { recursive: true, force: true });
  const kept = new Set([mergedFileName(revision), archiveFileName(revision)]);
  const names = await readdir(jobFolder(jobId)).catch(() => []);
  for (const name of names)
    if (/^(prefix|archive)-\d+\./.test(name) && !kept.has(name)) await rm(jobFile(jobId, name), { force: true });
}
