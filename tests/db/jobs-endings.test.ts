/** How jobs end other than by being let run: the cap, cancelling, the model's failure, our failure, a restart. */
import { mkdir, rm, writeFile } from 'node:fs/promises';
import { afterEach, beforeAll, describe, expect, it } from 'vitest';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Batch, Job, Quote, Segment } from '@db/models/jobs.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import { Mail } from '@db/models/teams.ts';
import { longestPrefix } from '@/domain/jobs/longest-prefix.ts';
import { eventsPerCycle, runPoints } from '@/engine/run-points.ts';
import { asSummary, momentsAt } from '@/engine/statistics/statistics-of.ts';
import { batchTask, networksOfJob } from '@/server/jobs/batch-task.ts';
import { cancelJob } from '@/server/jobs/cancel-job.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { extendJob } from '@/server/jobs/extend-job.ts';
import { batchFileName, jobFile, jobFolder } from '@/server/jobs/job-folder.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { readStatistics } from '@/server/jobs/read-statistics.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import {
  forget,
  inProcessExecutor,
  launch,
  makeBench,
  quote,
  replan,
  startJobs,
  value,
  whenJob,
  whenOver,
  type Bench,
} from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let stop: (() => Promise<void>) | null = null;
const halt = async (): Promise<void> => {
  await stop?.();
  stop = null;
};
beforeAll(() => setExecutor(inProcessExecutor()));
afterEach(halt);

/** Launches with dispatching stopped, so that the plan can be changed first. */
async function prepare(bench: Bench, replicatesPerBatch: number, more = {}, cap?: number): Promise<string> {
  await halt();
  setExecutor(inProcessExecutor());
  const { id } = await launch(bench, more, cap);
  await replan(id, replicatesPerBatch);
  return id;
}

async function letRun(id: string, executor = inProcessExecutor()): Promise<Job> {
  stop = await startJobs(executor);
  const job = await whenOver(id);
  await halt();
  return job;
}

/** Each point of a job, straight from the engine. */
async function pointsOfJob(job: Job, replicateCount: number) {
  const networks = await networksOfJob(job);
  return (await runPoints(batchTask({ job, networks, firstReplicate: 0, replicateCount }))).points;
}

/** Events of each replicate of a job, over all its points. */
const eventsOf = async (job: Job, replicateCount: number): Promise<Float64Array> =>
  eventsPerCycle(await pointsOfJob(job, replicateCount));

/** What must hold of the money of any job that is over. */
async function expectReconciled(bench: Bench, job: Job): Promise<void> {
  const settlements = await LedgerTransaction.findAll({ where: { jobId: job.id, kind: 'settlement' } });
  const spent = settlements.map(({ postings }) => {
    const moved = JSON.parse(postings) as { account: string; amountMicrocredits: number }[];
    return moved.find(({ account }) => account === 'spent')?.amountMicrocredits ?? 0;
  });
  expect(spent.reduce((sum, amount) => sum + amount, 0)).toBe(job.chargedMicrocredits);
  const segments = await Segment.findAll({ where: { jobId: job.id } });
  expect(segments.reduce((sum, { chargedMicrocredits }) => sum + chargedMicrocredits, 0)).toBe(job.chargedMicrocredits);
  expect(job.heldMicrocredits).toBe(0);
  expect((await readBalance(bench.team.id)).held).toBe(0);
}

describe('a job that reaches its cap', () => {
  it('delivers the longest prefix that the cap pays for: the same results as a job of just so many replicates', async () => {
    const bench = await makeBench();
    const { leastCapMicrocredits } = await quote(bench);
    for (const replicatesPerBatch of [1_000, 40, 7]) {
      const cap = leastCapMicrocredits * 6 + 11;
      const capped = await letRun(await prepare(bench, replicatesPerBatch, {}, cap));
      expect(capped.state).toBe('stopped_at_cap');
      const segment = (await Segment.findOne({ where: { jobId: capped.id } }))!;
      const fit = longestPrefix({
        eventsPerReplicate: await eventsOf(capped, 1_000),
        segmentEvents: 0,
        capMicrocredits: cap,
        microcreditsPerMillionEvents: segment.microcreditsPerMillionEvents,
      });
      expect(capped).toMatchObject({ replicatesDone: fit.replicates, events: fit.events });
      expect(capped.chargedMicrocredits).toBeLessThanOrEqual(cap);
      await expectReconciled(bench, capped);

      const whole = await letRun(await prepare(bench, 64, { replicates: fit.replicates }));
      expect(whole.state).toBe('done');
      expect(whole.resultsDigest).toBe(capped.resultsDigest);
      const statistics = value(
        await readStatistics({ actor: bench.actors.viewer, team: bench.team.slug, job: capped.id, point: 0 }),
      );
      expect(statistics.replicates).toBe(fit.replicates);
    }
  });

  it('records what was computed past the cap as absorbed, and charges none of it', async () => {
    const bench = await makeBench();
    const { leastCapMicrocredits } = await quote(bench);
    const job = await letRun(
      await prepare(bench, 10, {}, leastCapMicrocredits * 2),
      inProcessExecutor({ capacity: 4 }),
    );
    expect(job.state).toBe('stopped_at_cap');
    const batches = await Batch.findAll({ where: { jobId: job.id } });
    const delivered = batches.filter(({ state }) => state === 'joined').reduce((sum, { events }) => sum + events, 0);
    expect(delivered).toBe(job.events);
    expect(batches.every(({ state }) => state === 'joined' || state === 'discarded')).toBe(true);
  });
});

describe('a job that is cancelled', () => {
  it('keeps and charges the complete prefix, and gives the rest of the hold back', async () => {
    const bench = await makeBench();
    const id = await prepare(bench, 20);
    stop = await startJobs(inProcessExecutor({ capacity: 1 }));
    await whenJob(id, ({ replicatesDone }) => replicatesDone >= 100);
    value(await cancelJob({ actor: bench.actors.modeller, team: bench.team.slug, job: id }));
    const job = await whenOver(id);
    await halt();
    expect(job.state).toBe('cancelled');
    expect(job.replicatesDone).toBeGreaterThanOrEqual(100);
    expect(job.replicatesDone).toBeLessThan(1_000);
    const prefix = (await eventsOf(job, job.replicatesDone)).reduce((sum, events) => sum + events, 0);
    expect(job.events).toBe(prefix);
    await expectReconciled(bench, job);
    expect(job.archiveSha256).toMatch(/^[0-9a-f]{64}$/);
  });

  it('ends without results when nothing was complete, and a second cancel is refused', async () => {
    const bench = await makeBench();
    const id = await prepare(bench, 100);
    const cancel = () => cancelJob({ actor: bench.actors.modeller, team: bench.team.slug, job: id });
    value(await cancel());
    const job = await letRun(id);
    expect(job).toMatchObject({ state: 'cancelled', replicatesDone: 0, chargedMicrocredits: 0, archiveSha256: null });
    await expectReconciled(bench, job);
    expect(await cancel()).toMatchObject({ ok: false, code: 'job_not_running' });
    const statistics = await readStatistics({ actor: bench.actors.viewer, team: bench.team.slug, job: id, point: 0 });
    expect(statistics).toMatchObject({ ok: false, code: 'results_not_ready' });
  });
});

describe('a job whose model fails', () => {
  it('delivers and charges the replicates before the one that failed, and says where and why', async () => {
    const bench = await makeBench();
    // No replicate fails in a pilot of 200 and some later one does: a budget that the dearest of 5,000 exceeds.
    setExecutor(inProcessExecutor());
    const { id: quoteId, microcredits } = await quote(bench, { replicates: 5_000 });
    const capMicrocredits = 2 * microcredits.high;
    const row = (await Quote.findByPk(quoteId))!;
    const probe = { seed: row.inputs.seed, inputs: row.inputs, modelVersionId: row.modelVersionId } as Job;
    const events = await eventsOf(probe, 5_000);
    const eventBudgetPerReplicate = [...events].sort((a, b) => b - a)[2]!;
    const failing = events.findIndex((value) => value > eventBudgetPerReplicate);
    await inWriteTransaction(() => row.update({ inputs: { ...row.inputs, eventBudgetPerReplicate } }));
    const launched = value(
      await launchJob({ actor: bench.actors.modeller, team: bench.team.slug, quoteId, name: 'Fails', capMicrocredits }),
    ).job;
    await replan(launched.id, 333);
    const job = await letRun(launched.id, inProcessExecutor({ capacity: 3 }));
    expect(job).toMatchObject({ state: 'failed', replicatesDone: failing });
    expect(job.ending).toMatchObject({ reason: 'event_budget', failure: { replicate: failing } });
    expect(job.events).toBe(events.subarray(0, failing).reduce((sum, value) => sum + value, 0));
    await expectReconciled(bench, job);
    const mail = await Mail.findOne({ where: { recipient: bench.people.modeller.email } });
    expect(mail?.subject).toBe('Job failed: Fails');
  });
});

describe('work lost on our side', () => {
  it('is computed again, changes no result and charges nothing twice', async () => {
    const bench = await makeBench();
    const undisturbed = await letRun(await prepare(bench, 50));
    const id = await prepare(bench, 50);
    const lost = new Map<number, number>();
    const executor = inProcessExecutor({
      around: (task, run) => {
        const times = lost.get(task.firstReplicate) ?? 0;
        if (task.firstReplicate % 150 !== 0 || times >= 3) return run();
        lost.set(task.firstReplicate, times + 1);
        return Promise.reject(new Error('the worker went away'));
      },
    });
    const job = await letRun(id, executor);
    expect([...lost.values()]).toEqual(Array(7).fill(3));
    expect(job).toMatchObject({
      state: 'done',
      resultsDigest: undisturbed.resultsDigest,
      chargedMicrocredits: undisturbed.chargedMicrocredits,
    });
    await expectReconciled(bench, job);
  });

  it('gives out the batch that the prefix waits for, however many later ones are in', async () => {
    const bench = await makeBench();
    const id = await prepare(bench, 50);
    let others = 0;
    let enough = (): void => undefined;
    const lookAheadFull = new Promise<void>((resolve) => (enough = resolve));
    let lost = false;
    const executor = inProcessExecutor({
      around: async (task, run) => {
        if (task.firstReplicate === 0 && !lost) {
          lost = true;
          await lookAheadFull;
          throw new Error('the worker went away, late');
        }
        const answer = await run();
        others += 1;
        // With two workers the dispatcher looks six batches ahead: the lost one and five others.
        if (others === 5) enough();
        return answer;
      },
    });
    const job = await letRun(id, executor);
    expect(job).toMatchObject({ state: 'done', replicatesDone: 1_000 });
    await expectReconciled(bench, job);
  });

  it('ends the job as our failure when a batch is lost again and again, with its prefix delivered', async () => {
    const bench = await makeBench();
    const id = await prepare(bench, 100);
    const executor = inProcessExecutor({
      around: (task, run) => (task.firstReplicate === 400 ? Promise.reject(new Error('lost')) : run()),
    });
    const job = await letRun(id, executor);
    expect(job).toMatchObject({ state: 'failed', replicatesDone: 400 });
    expect(job.ending?.reason).toBe('our_failure');
    await expectReconciled(bench, job);
  });

  it('survives stops at any moment: each start goes on, and results and charge are those of an undisturbed job', async () => {
    const bench = await makeBench();
    const undisturbed = await letRun(await prepare(bench, 25));
    const id = await prepare(bench, 25);
    for (const done of [0, 100, 101, 350, 700]) {
      stop = await startJobs(inProcessExecutor());
      await whenJob(id, ({ replicatesDone }) => replicatesDone >= done);
      await halt();
      forget(id);
    }
    const job = await letRun(id);
    expect(job).toMatchObject({
      state: 'done',
      resultsDigest: undisturbed.resultsDigest,
      chargedMicrocredits: undisturbed.chargedMicrocredits,
      events: undisturbed.events,
    });
    await expectReconciled(bench, job);
  });
});

describe('files that go wrong', () => {
  it('are computed again when they were damaged or lost, and the results are the same', async () => {
    const bench = await makeBench();
    const undisturbed = await letRun(await prepare(bench, 50));
    const id = await prepare(bench, 50);
    stop = await startJobs(inProcessExecutor({ capacity: 1 }));
    await whenJob(id, ({ replicatesDone }) => replicatesDone >= 150);
    await halt();
    forget(id);
    await writeFile(jobFile(id, batchFileName(0)), 'not what was computed');
    await rm(jobFile(id, batchFileName(2)));
    const job = await letRun(id);
    expect(job).toMatchObject({
      state: 'done',
      resultsDigest: undisturbed.resultsDigest,
      chargedMicrocredits: undisturbed.chargedMicrocredits,
    });
    await expectReconciled(bench, job);
  });

  it('are written once the disk takes them again, and nothing is charged before', async () => {
    const bench = await makeBench();
    const id = await prepare(bench, 100);
    // A file where the folder should be: every write fails, as on a full disk.
    const obstacle = jobFile(id, 'batches');
    await mkdir(jobFolder(id), { recursive: true });
    await writeFile(obstacle, '');
    let computed = 0;
    let enough = (): void => undefined;
    const severalComputed = new Promise<void>((resolve) => (enough = resolve));
    const executor = inProcessExecutor({
      around: async (_, run) => {
        const answer = await run();
        if (++computed >= 3) enough();
        return answer;
      },
    });
    stop = await startJobs(executor);
    await severalComputed;
    expect((await Job.findByPk(id))!).toMatchObject({ replicatesDone: 0, chargedMicrocredits: 0 });
    await rm(obstacle);
    const job = await whenOver(id);
    await halt();
    expect(job).toMatchObject({ state: 'done', replicatesDone: 1_000 });
    await expectReconciled(bench, job);
  });
});

describe('a job that is extended', () => {
  const extension = { replicates: 500 };

  it('has the results of one job of all its replicates, and pays its second segment on its own', async () => {
    const bench = await makeBench();
    const whole = await letRun(await prepare(bench, 200, { replicates: 1_500 }));
    const id = await prepare(bench, 300);
    await letRun(id);
    const { id: quoteId, microcredits } = await quote(bench, extension);
    const capMicrocredits = 2 * microcredits.high;
    value(await extendJob({ actor: bench.actors.modeller, team: bench.team.slug, job: id, quoteId, capMicrocredits }));
    await replan(id, 77);
    const job = await letRun(id);
    expect(job).toMatchObject({ state: 'done', replicatesDone: 1_500, events: whole.events, archiveRevision: 2 });
    expect(job.resultsDigest).toBe(whole.resultsDigest);
    expect(await Segment.count({ where: { jobId: id } })).toBe(2);
    await expectReconciled(bench, job);
  });

  it('goes on from the prefix of a cancelled job, and refuses a quote for other inputs or a job that runs', async () => {
    const bench = await makeBench();
    const id = await prepare(bench, 50);
    const extend = (quoteId: string) =>
      extendJob({ actor: bench.actors.modeller, team: bench.team.slug, job: id, quoteId, capMicrocredits: 600_000 });
    expect(await extend((await quote(bench, extension)).id)).toMatchObject({ ok: false, code: 'job_not_finished' });
    stop = await startJobs(inProcessExecutor({ capacity: 1 }));
    await whenJob(id, ({ replicatesDone }) => replicatesDone >= 50);
    value(await cancelJob({ actor: bench.actors.modeller, team: bench.team.slug, job: id }));
    const { replicatesDone } = await whenOver(id);
    await halt();
    for (const other of [{ seed: '8' }, { horizon: 11 }, { gridIntervals: 21 }])
      expect(await extend((await quote(bench, { ...extension, ...other })).id)).toMatchObject({
        ok: false,
        code: 'invalid_input',
      });
    value(await extend((await quote(bench, extension)).id));
    const job = await letRun(id);
    expect(job).toMatchObject({ state: 'done', replicatesDone: replicatesDone + 500 });
    await expectReconciled(bench, job);
  });
});

/** What counts of a sweep, however it ends, is whole cycles: the same first replicates of every point. */
describe('a sweep', () => {
  const births = [5, 20, 40];
  const sweepOf = (values: number[]) => ({
    sweep: {
      kind: 'list' as const,
      targets: [{ kind: 'parameter' as const, id: 'birth' }],
      values: values.map((v) => [v]),
    },
  });
  const asked = { ...sweepOf(births), replicates: 300, gridIntervals: 4 };
  const sum = (values: Float64Array): number => values.reduce((total, value) => total + value, 0);

  /** Replicates behind the results of each point. */
  const replicatesByPoint = (bench: Bench, job: Job) =>
    Promise.all(
      births.map(async (_, point) => {
        const read = { actor: bench.actors.viewer, team: bench.team.slug, job: job.id, point };
        return value(await readStatistics(read)).replicates;
      }),
    );

  it('that is cancelled keeps and charges the cycles that are complete', async () => {
    const bench = await makeBench();
    const id = await prepare(bench, 20, asked);
    stop = await startJobs(inProcessExecutor({ capacity: 1 }));
    await whenJob(id, ({ replicatesDone }) => replicatesDone >= 60);
    value(await cancelJob({ actor: bench.actors.modeller, team: bench.team.slug, job: id }));
    const job = await whenOver(id);
    await halt();
    expect(job.state).toBe('cancelled');
    expect(job.replicatesDone % 20).toBe(0);
    expect(job.events).toBe(sum(await eventsOf(job, job.replicatesDone)));
    expect(await replicatesByPoint(bench, job)).toEqual(births.map(() => job.replicatesDone));
    await expectReconciled(bench, job);
  });

  it('whose model fails at one point keeps the cycles before, and names the point', async () => {
    const bench = await makeBench();
    setExecutor(inProcessExecutor());
    const { id: quoteId, microcredits } = await quote(bench, { ...asked, replicates: 2_000 });
    const row = (await Quote.findByPk(quoteId))!;
    const probe = { seed: row.inputs.seed, inputs: row.inputs, modelVersionId: row.modelVersionId } as Job;
    const events = (await pointsOfJob(probe, 2_000)).map(({ eventsPerReplicate }) => eventsPerReplicate);
    // The budget that the third dearest of all replicates just keeps: two fail, and the first of them ends the job.
    const eventBudgetPerReplicate = events.flatMap((each) => [...each]).sort((a, b) => b - a)[2]!;
    const firstOver = events.map((each) => each.findIndex((count) => count > eventBudgetPerReplicate));
    const failing = Math.min(...firstOver.filter((at) => at >= 0));
    expect(failing).toBeGreaterThan(0);
    await inWriteTransaction(() => row.update({ inputs: { ...row.inputs, eventBudgetPerReplicate } }));
    const actor = bench.actors.modeller;
    const cap = { capMicrocredits: 2 * microcredits.high };
    const launched = value(await launchJob({ actor, team: bench.team.slug, quoteId, name: 'Fails', ...cap })).job;
    await replan(launched.id, 111);
    const job = await letRun(launched.id, inProcessExecutor({ capacity: 3 }));
    const point = firstOver.indexOf(failing);
    expect(job).toMatchObject({ state: 'failed', replicatesDone: failing });
    expect(job.ending).toMatchObject({ reason: 'event_budget', failure: { replicate: failing, point } });
    expect(job.ending?.detail).toContain(`Replicate ${failing} at point ${point}`);
    expect(job.events).toBe(events.reduce((total, each) => total + sum(each.subarray(0, failing)), 0));
    expect(await replicatesByPoint(bench, job)).toEqual(births.map(() => failing));
    await expectReconciled(bench, job);
  });

  it('that stops by precision does so at the first look at which every point is precise enough', async () => {
    const bench = await makeBench();
    // Poisson with mean b at equilibrium, so 1.96/√(b·n) of the mean: at 4 % point 0 needs about 480 replicates, the others fewer than 256.
    const stopping = { kind: 'precision' as const, observable: 'X', time: 10, relative: 0.04 };
    // Batches of 64 end at every look.
    const job = await letRun(await prepare(bench, 64, { ...asked, replicates: 4_000, stopping }));
    expect(job.ending).toMatchObject({ state: 'done', reason: 'precision_reached' });
    const halfWidths = async (replicates: number) =>
      (await pointsOfJob(job, replicates)).map(({ summary }) => {
        const { mean, meanStandardError } = momentsAt(asSummary(summary), 0, 4);
        return (1.96 * meanStandardError) / mean;
      });
    expect([512, 1_024]).toContain(job.replicatesDone);
    expect(Math.max(...(await halfWidths(job.replicatesDone)))).toBeLessThan(0.0401);
    const earlier = await halfWidths(job.replicatesDone / 2);
    expect(Math.max(...earlier)).toBeGreaterThan(0.0399);
    expect(Math.min(...earlier)).toBeLessThan(0.0399);
    expect(await replicatesByPoint(bench, job)).toEqual(births.map(() => job.replicatesDone));
    await expectReconciled(bench, job);
  });

  it('survives stops at any moment, and is extended at all points: the results of one job of all its replicates', async () => {
    const bench = await makeBench();
    const whole = await letRun(await prepare(bench, 64, { ...asked, replicates: 450 }));
    const id = await prepare(bench, 25, asked);
    for (const done of [0, 50, 51, 200]) {
      stop = await startJobs(inProcessExecutor());
      await whenJob(id, ({ replicatesDone }) => replicatesDone >= done);
      await halt();
      forget(id);
    }
    expect((await letRun(id)).state).toBe('done');
    const extend = async (more: ReturnType<typeof sweepOf>, replicates = 150) => {
      const { id: quoteId, microcredits } = await quote(bench, { ...asked, ...more, replicates });
      const cap = { capMicrocredits: 2 * microcredits.high };
      return extendJob({ actor: bench.actors.modeller, team: bench.team.slug, job: id, quoteId, ...cap });
    };
    for (const others of [
      [5, 20],
      [5, 20, 41],
      [20, 5, 40],
    ])
      expect(await extend(sweepOf(others))).toMatchObject({ ok: false, code: 'invalid_input' });
    // With the 300 there are, 3,333,200 more at each of three points are over ten million.
    expect(await extend(sweepOf(births), 3_333_200)).toMatchObject({
      ok: false,
      detail: expect.stringContaining('over all points') as string,
    });
    value(await extend(sweepOf(births)));
    await replan(id, 31);
    const job = await letRun(id);
    expect(job).toMatchObject({ state: 'done', replicatesDone: 450, events: whole.events });
    expect(job.resultsDigest).toBe(whole.resultsDigest);
    expect(await replicatesByPoint(bench, job)).toEqual(births.map(() => 450));
    await expectReconciled(bench, job);
  });
});
