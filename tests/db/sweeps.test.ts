/** Sweeps through quote, launch, cap, batches and archive: whole cycles, one price, the same bytes whatever the batches. */
import { readFile } from 'node:fs/promises';
import { unzipSync } from 'fflate';
import { afterEach, beforeAll, describe, expect, it } from 'vitest';
import { Batch, Job, Quote } from '@db/models/jobs.ts';
import { verifyArchive } from '@/archives/verify/verify-archive.ts';
import { createQuote } from '@/server/jobs/create-quote.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { archiveFileName, jobFile } from '@/server/jobs/job-folder.ts';
import { readSweepResults } from '@/server/jobs/read-sweep-results.ts';
import { readStatistics } from '@/server/jobs/read-statistics.ts';
import {
  inProcessExecutor,
  launch,
  makeBench,
  quote,
  quoteRequest,
  replan,
  startJobs,
  value,
  whenOver,
  type Bench,
} from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let stop = async (): Promise<void> => undefined;
let bench: Bench;
beforeAll(async () => {
  setExecutor(inProcessExecutor());
  bench = await makeBench();
});
afterEach(async () => {
  await stop();
  stop = async () => undefined;
});

const sweep = {
  kind: 'grid' as const,
  axes: [
    { target: { kind: 'parameter' as const, id: 'birth' }, values: [5, 20] },
    {
      target: { kind: 'initial_count' as const, id: 'X' },
      spacing: { from: 0, to: 20, count: 2, scale: 'linear' as const },
    },
  ],
};
async function run(jobId: string): Promise<Job> {
  stop = await startJobs(inProcessExecutor());
  return whenOver(jobId);
}
const archiveOf = (job: Job): string => jobFile(job.id, archiveFileName(job.archiveRevision));

describe('a sweep', () => {
  it('is quoted for all of its points, and its points are pinned', async () => {
    const one = await quote(bench, { replicates: 100 });
    const all = await quote(bench, { replicates: 100, sweep });
    expect(all.points).toBe(4);
    expect(all.sweep?.values).toEqual([
      [5, 0],
      [5, 20],
      [20, 0],
      [20, 20],
    ]);
    // Events of birth and death over 10 from x0: 10·a + x0·(1 − e^−10) deaths … in all about 2·10·a − a + x0 each.
    const expected = [5, 5, 20, 20].reduce((sum, birth, i) => sum + 19 * birth + (i % 2) * 20, 0) * 100;
    expect(((all.microcredits.expected / one.microcreditsPerMillionEvents) * 1e6) / expected).toBeCloseTo(1, 1);
    expect((await Quote.findByPk(all.id))?.inputs.sweep?.values).toHaveLength(4);
  });

  it('gives the same results whatever the batches, and an archive that can be checked', async () => {
    const ask = { replicates: 300, sweep, gridIntervals: 5, outputs: { keptTraces: 2 } };
    const first = await launch(bench, ask);
    const other = await launch(bench, ask);
    await replan(other.id, 7);
    const done = await run(first.id);
    expect(done).toMatchObject({ state: 'done', replicatesDone: 300 });
    const again = await whenOver(other.id);
    expect(again.resultsDigest).toBe(done.resultsDigest);
    expect(again.chargedMicrocredits).toBe(done.chargedMicrocredits);
    const report = await verifyArchive({ file: archiveOf(done), choose: (blocks) => [...Array(blocks).keys()] });
    expect(report).toMatchObject({ problems: [], blocks: 8 });
    const files = unzipSync(await readFile(archiveOf(done)));
    expect(Buffer.from(files['results/points.csv']!).toString()).toContain('3,20,20');
    const actor = bench.actors.viewer;
    const means = await Promise.all(
      [0, 1, 2, 3].map(async (point) => {
        const statistics = value(await readStatistics({ actor, team: bench.team.slug, job: first.id, point }));
        return statistics.observables[0]!.mean.at(-1)!;
      }),
    );
    expect(means[3]!).toBeGreaterThan(2 * means[1]!);
    expect(await readStatistics({ actor, team: bench.team.slug, job: first.id, point: 4 })).toMatchObject({
      ok: false,
      code: 'invalid_input',
    });
  });

  // Immigration and death from 0 (Bailey 1964, chapter 8, from memory): Poisson with mean b(1 − e^−t), so P(no arrival by t) = e^−bt.
  // Ten checks at 4.4 standard errors: a false alarm in about 9,000 runs.
  it('tells one statistic at every point, with intervals that fit the closed forms', async () => {
    const births = [0.5, 2];
    const job = await launch(bench, {
      replicates: 2_000,
      gridIntervals: 4,
      sweep: {
        kind: 'list',
        targets: [{ kind: 'parameter', id: 'birth' }],
        values: births.map((birth) => [birth]),
      },
      outputs: { passages: [{ observable: 'X', risesTo: 1 }] },
    });
    expect((await run(job.id)).replicatesDone).toBe(2_000);
    const read = (query: Omit<Parameters<typeof readSweepResults>[0], 'actor' | 'team' | 'job'>) =>
      readSweepResults({ actor: bench.actors.viewer, team: bench.team.slug, job: job.id, ...query });
    const mean = (birth: number) => birth * (1 - Math.exp(-2.5));
    const exact = {
      mean,
      sd: (birth: number) => Math.sqrt(mean(birth)),
      fano: () => 1,
      cv: (birth: number) => 1 / Math.sqrt(mean(birth)),
      passed: (birth: number) => 1 - Math.exp(-10 * birth),
    };
    for (const statistic of ['mean', 'sd', 'fano', 'cv', 'passed'] as const) {
      const answer = value(await read({ statistic, observable: 'X', time: 2.5, passage: 0 }));
      expect(answer).toMatchObject({ replicates: 2_000, statistic });
      for (const [point, birth] of births.entries()) {
        const { value: found, lower, upper } = answer.values[point]!;
        const standardError = (upper! - lower!) / (2 * 1.96);
        expect(Math.abs(found - exact[statistic](birth)), `${statistic} at ${birth}`).toBeLessThan(4.4 * standardError);
      }
    }
    expect(await read({ statistic: 'mean', observable: 'Y', passage: 0 })).toMatchObject({ code: 'invalid_input' });
    expect(await read({ statistic: 'passed', passage: 1 })).toMatchObject({ code: 'invalid_input' });
  });

  it('stops at its cap after whole cycles: every point has equally many, and the next cycle would not have fitted', async () => {
    const asked = { replicates: 400, sweep };
    const { microcredits } = await quote(bench, asked);
    const job = await launch(bench, asked, Math.round(microcredits.expected * 0.6));
    await replan(job.id, 23);
    const done = await run(job.id);
    expect(done.state).toBe('stopped_at_cap');
    expect(done.replicatesDone).toBeGreaterThan(200);
    expect(done.replicatesDone).toBeLessThan(280);
    expect(done.chargedMicrocredits).toBeLessThanOrEqual(done.capMicrocredits);
    const files = unzipSync(await readFile(archiveOf(done)));
    const rows = Buffer.from(files['results/events.csv']!).toString().trim().split('\n').slice(1);
    const counts = new Map<string, number>();
    for (const row of rows) counts.set(row.split(',')[0]!, (counts.get(row.split(',')[0]!) ?? 0) + 1);
    expect([...counts.values()]).toEqual([1, 1, 1, 1].map(() => done.replicatesDone));
    // A whole cycle more, as the engine gives it, is over the cap.
    const longer = await launch(bench, asked);
    const whole = await run(longer.id);
    const all = unzipSync(await readFile(archiveOf(whole)));
    const next = Buffer.from(all['results/events.csv']!)
      .toString()
      .trim()
      .split('\n')
      .slice(1)
      .map((row) => row.split(',').map(Number))
      .filter(([, replicate]) => replicate === done.replicatesDone)
      .reduce((sum, [, , events]) => sum + events!, 0);
    const batches = await Batch.findAll({ where: { jobId: done.id, state: 'joined' } });
    expect(batches.reduce((sum, { events }) => sum + events, 0)).toBe(done.events);
    expect(done.events + next).toBeGreaterThan(done.capMicrocredits);
  });

  it('is refused with its point and reason where it does not fit the model', async () => {
    const refused = async (asked: Parameters<typeof quoteRequest>[1]) => {
      const answer = await createQuote({
        actor: bench.actors.modeller,
        team: bench.team.slug,
        request: quoteRequest(bench, asked),
      });
      return answer.ok ? null : { code: answer.code, path: answer.errors?.[0]?.path, fault: answer.errors?.[0]?.code };
    };
    const list = (id: string, values: number[], kind: 'parameter' | 'initial_count' = 'parameter') => ({
      sweep: { kind: 'list' as const, targets: [{ kind, id }], values: values.map((each) => [each]) },
    });
    expect(await refused(list('brith', [1]))).toEqual({
      code: 'invalid_input',
      path: 'sweep.points[0]',
      fault: 'unknown_parameter',
    });
    expect(await refused(list('X', [1, 2.5], 'initial_count'))).toMatchObject({ path: 'sweep.points[1]' });
    expect(await refused(list('death', [1, 1]))).toMatchObject({ fault: 'repeated_point' });
    expect(await refused(list('death', [1, -1]))).toMatchObject({ code: 'invalid_network' });
    expect(await refused({ ...list('death', [1, 2, 3]), replicates: 9_000_000 })).toMatchObject({ path: 'replicates' });
    expect(
      await refused({
        ...list(
          'death',
          Array.from({ length: 900 }, (_, i) => i + 1),
        ),
        gridIntervals: 5_000,
      }),
    ).toMatchObject({ fault: 'too_many_cells' });
  });
});
