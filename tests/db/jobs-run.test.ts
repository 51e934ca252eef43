/** Jobs from launch to archive on a real database, with the engine in this process. */
import { createHash } from 'node:crypto';
import { readFile, writeFile } from 'node:fs/promises';
import { unzipSync } from 'fflate';
import { afterEach, describe, expect, it } from 'vitest';
import { Batch, Job, Segment } from '@db/models/jobs.ts';
import { writeResults } from '@/archives/write-results.ts';
import { chargeMicrocredits } from '@/domain/pricing/price-of.ts';
import { archiveFileName, jobFile } from '@/server/jobs/job-folder.ts';
import { readStatistics } from '@/server/jobs/read-statistics.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import {
  inProcessExecutor,
  launch,
  makeBench,
  replan,
  startJobs,
  value,
  whenOver,
  type Bench,
} from '@tests/support/jobs.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let stop: (() => Promise<void>) | null = null;
afterEach(async () => {
  await stop?.();
  stop = null;
});

const archiveOf = async (job: Job): Promise<Record<string, Uint8Array>> =>
  unzipSync(await readFile(jobFile(job.id, archiveFileName(job.archiveRevision))));

async function run(bench: Bench, replicatesPerBatch: number, capacity: number, more = {}): Promise<Job> {
  setExecutor(inProcessExecutor());
  const { id } = await launch(bench, more);
  await replan(id, replicatesPerBatch);
  stop = await startJobs(inProcessExecutor({ capacity }));
  const job = await whenOver(id);
  await stop();
  stop = null;
  return job;
}

describe('a job that is let run', () => {
  it('delivers all replicates, charges exactly their events, gives back the rest and writes a sound archive', async () => {
    const bench = await makeBench({ credits: 5 });
    const job = await run(bench, 100, 2);
    expect(job).toMatchObject({ state: 'done', replicatesDone: 1_000, heldMicrocredits: 0 });
    const segment = (await Segment.findOne({ where: { jobId: job.id } }))!;
    expect(job.chargedMicrocredits).toBe(chargeMicrocredits(job.events, segment.microcreditsPerMillionEvents));
    const balance = await readBalance(bench.team.id);
    expect(balance).toMatchObject({
      available: 5_000_000 - job.chargedMicrocredits,
      held: 0,
      spent: job.chargedMicrocredits,
    });

    const files = await archiveOf(job);
    const sums = new TextDecoder().decode(files['SHA256SUMS']).trimEnd().split('\n');
    expect(sums.length).toBe(Object.keys(files).length - 1);
    for (const line of sums) {
      const [sum, path] = line.split('  ');
      expect(createHash('sha256').update(files[path!]!).digest('hex')).toBe(sum);
    }
    const listed = JSON.parse(new TextDecoder().decode(files['job.json'])) as { resultsDigest: string };
    expect(listed.resultsDigest).toBe(job.resultsDigest);
    const eventLines = new TextDecoder().decode(files['results/events.csv']).trimEnd().split('\n').slice(1);
    const total = eventLines.reduce((sum, line) => sum + Number(line.split(',')[2]), 0);
    expect(total).toBe(job.events);
  });

  it('gives the same results and the same charge whatever the batches and the number of threads', async () => {
    const bench = await makeBench();
    const runs = [
      await run(bench, 1_000, 1),
      await run(bench, 37, 3),
      await run(bench, 250, 2),
      await run(bench, 999, 4),
    ];
    expect(new Set(runs.map(({ resultsDigest }) => resultsDigest)).size).toBe(1);
    expect(new Set(runs.map(({ chargedMicrocredits }) => chargedMicrocredits)).size).toBe(1);
    expect(new Set(runs.map(({ events }) => events)).size).toBe(1);
  });

  it('writes the results again when the thread that writes them is lost half-way, at once or after a new start', async () => {
    const bench = await makeBench();
    const undisturbed = await run(bench, 250, 2);
    let lost = 0;
    const losing: typeof writeResults = async (task) => {
      await writeFile(task.archiveFile, 'half an archive');
      if (++lost <= 2) throw new Error('The thread was lost.');
      return writeResults(task);
    };
    setExecutor(inProcessExecutor());
    const { id } = await launch(bench);
    stop = await startJobs(inProcessExecutor(), losing);
    const job = await whenOver(id);
    expect(lost).toBe(3);
    expect(job).toMatchObject({ state: 'done', resultsDigest: undisturbed.resultsDigest, archiveRevision: 1 });
    expect(job.chargedMicrocredits).toBe(undisturbed.chargedMicrocredits);
    expect(Object.keys(await archiveOf(job))).toContain('SHA256SUMS');

    await stop();
    const second = await launch(bench);
    let writing = (): void => undefined;
    const reached = new Promise<void>((resolve) => (writing = resolve));
    let close = (): void => undefined;
    const closed = new Promise<never>((_, reject) => (close = () => reject(new Error('The thread was stopped.'))));
    stop = await startJobs(inProcessExecutor(), () => {
      writing();
      return closed;
    });
    await reached;
    const stopping = stop();
    close();
    await stopping;
    expect(await Job.findByPk(second.id)).toMatchObject({ state: 'running', archiveRevision: 0 });
    stop = await startJobs(inProcessExecutor());
    expect(await whenOver(second.id)).toMatchObject({ state: 'done', resultsDigest: undisturbed.resultsDigest });
  });

  it('answers statistics over the replicates delivered', async () => {
    const bench = await makeBench();
    const job = await run(bench, 64, 2);
    const statistics = value(
      await readStatistics({ actor: bench.actors.viewer, team: bench.team.slug, job: job.id, point: 0 }),
    );
    expect(statistics.replicates).toBe(1_000);
    expect(statistics.times).toHaveLength(21);
    expect(statistics.events.total).toBe(job.events);
    const batches = await Batch.findAll({ where: { jobId: job.id } });
    expect(batches.every(({ state }) => state === 'joined')).toBe(true);
  });
});
