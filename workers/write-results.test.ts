/** The bundled worker that writes results, in a real thread: the same answer and bytes as when called directly. */
import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startResultsWriter, type ResultsWriter } from '@/server/jobs/results-writer.ts';
import { makeArchive } from '@tests/factories/archives.ts';
import { workerOutputs } from '../astro.integration.mjs';

let folder = '';
let writer: ResultsWriter;
beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'burette-worker-'));
  writer = startResultsWriter({ workerFile: path.join(workerOutputs.development, 'write-results.mjs') });
});
afterAll(async () => {
  await writer.close();
  await rm(folder, { recursive: true, force: true });
});

describe('the worker that writes results', () => {
  it('writes what the function writes, again and again', async () => {
    const { task, answer } = await makeArchive({ folder, replicates: 300, batchSizes: [120] });
    const expected = await readFile(task.archiveFile);
    for (const name of ['first.zip', 'second.zip']) {
      const archiveFile = path.join(folder, name);
      expect(await writer.write({ ...task, archiveFile })).toEqual(answer);
      expect(await readFile(archiveFile)).toEqual(expected);
    }
  });

  it('stops when it is closed, and says so to who waits', async () => {
    const closing = startResultsWriter({ workerFile: path.join(workerOutputs.development, 'write-results.mjs') });
    const { task } = await makeArchive({ folder, replicates: 300 });
    const writing = closing.write({ ...task, archiveFile: path.join(folder, 'stopped.zip') });
    const refused = expect(writing).rejects.toThrow();
    await closing.close();
    await refused;
  });
});
