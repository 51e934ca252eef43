/** Removes what a crash left behind: half-written files, and batch files of jobs whose results stand. */
import { readdir, rm } from 'node:fs/promises';
import path from 'node:path';
import { Job } from '@db/models/jobs.ts';
import { isFinal } from '@/domain/jobs/job-state.ts';
import { jobFolder, jobsFolder, removeOutdatedFiles, unfinished } from './job-folder.ts';

/** At boot, before anything is written. Returns how many files and folders went. */
export async function sweepFiles(): Promise<number> {
  let swept = 0;
  for (const jobId of await names(jobsFolder())) {
    const folders = [jobFolder(jobId), path.join(jobFolder(jobId), 'batches')];
    for (const folder of folders)
      for (const name of await names(folder)) {
        if (!name.endsWith(unfinished)) continue;
        await rm(path.join(folder, name), { force: true });
        swept++;
      }
    if (!(await names(jobFolder(jobId))).includes('batches')) continue;
    const job = await Job.findByPk(jobId);
    if (!job || !isFinal(job.state)) continue;
    await removeOutdatedFiles(jobId, job.archiveRevision);
    swept++;
  }
  return swept;
}

/** Empty where there is no such folder. */
const names = (folder: string): Promise<string[]> => readdir(folder).catch(() => []);
