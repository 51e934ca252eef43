/** Runs jobs inside a test: a team with credits and a model, the engine in this process, and ways to wait. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Batch, Job } from '@db/models/jobs.ts';
import { isFinal } from '@/domain/jobs/job-state.ts';
import { writeResults } from '@/archives/write-results.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import type { Result } from '@/domain/refusals.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { runPoints, type PointsTask } from '@/engine/run-points.ts';
import { newId } from '@/server/ids.ts';
import { createQuote } from '@/server/jobs/create-quote.ts';
import type { QuoteRequest } from '@/server/jobs/check-quote-request.ts';
import { Dispatcher } from '@/server/jobs/dispatcher.ts';
import { setExecutor, type Executor } from '@/server/jobs/executor.ts';
import { onJobChange } from '@/server/jobs/job-changes.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { setResultsWriter } from '@/server/jobs/results-writer.ts';
import { forgetPrefix } from '@/server/jobs/prefix-ensemble.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { createModel } from '@/server/network/create-model.ts';
import { protocolVersion, type RunBatchAnswer } from '@workers/protocol.ts';
import { makeTeam, type MadeTeam } from '../factories/people.ts';

/** Births at a constant rate, deaths in proportion: the count at equilibrium is Poisson with mean birth / death. */
export const immigrationDeath = (birth = 20, death = 1): NetworkDocument => ({
  timeUnit: 's',
  species: [{ id: 'X', initialCount: 0 }],
  parameters: [
    { id: 'birth', value: birth },
    { id: 'death', value: death },
  ],
  reactions: [
    { id: 'arrive', equation: '∅ → X', rateLaw: { kind: 'massAction', constant: 'birth' } },
    { id: 'leave', equation: 'X → ∅', rateLaw: { kind: 'massAction', constant: 'death' } },
  ],
});

export const value = <T>(result: Result<T>): T => {
  if (!result.ok) throw new Error(`${result.code}: ${result.detail} ${JSON.stringify(result.errors ?? [])}`);
  return result.value;
};

export interface Bench extends MadeTeam {
  modelVersionId: string;
}

/** A team with credits and one model. */
export async function makeBench(options: { credits?: number; network?: NetworkDocument } = {}): Promise<Bench> {
  const made = await makeTeam();
  const { credits = 1_000, network = immigrationDeath() } = options;
  if (credits > 0)
    await grantCredits({
      teamId: made.team.id,
      amountMicrocredits: Math.round(credits * 1_000_000),
      reason: 'for a test',
      grantId: newId('transaction'),
    });
  const stored = value(
    await createModel({ actor: made.actors.owner, team: made.team.slug, name: 'Test model', network, note: '' }),
  );
  return { ...made, modelVersionId: stored.version.id };
}

export const quoteRequest = (bench: Bench, more: Partial<QuoteRequest> = {}): QuoteRequest => ({
  modelVersionId: bench.modelVersionId,
  replicates: 1_000,
  horizon: 10,
  gridIntervals: 20,
  method: 'exact',
  seed: '7',
  lane: 'steady',
  ...more,
});

export async function quote(bench: Bench, more: Partial<QuoteRequest> = {}) {
  const request = quoteRequest(bench, more);
  return value(await createQuote({ actor: bench.actors.modeller, team: bench.team.slug, request })).quote;
}

/** Under a cap of twice the upper estimate unless another is given: the quote's own would stop one job in forty. */
export async function launch(bench: Bench, more: Partial<QuoteRequest> = {}, cap?: number) {
  const { id, microcredits } = await quote(bench, more);
  const capMicrocredits = cap ?? 2 * microcredits.high;
  const launched = await launchJob({
    actor: bench.actors.modeller,
    team: bench.team.slug,
    quoteId: id,
    name: 'A test job',
    capMicrocredits,
  });
  return value(launched).job;
}

/** Cuts what a job has left to do into other batches: any plan must give the same results and the same charge. */
export async function replan(jobId: string, replicatesPerBatch: number): Promise<void> {
  await inWriteTransaction(async () => {
    const rows = await Batch.findAll({ where: { jobId, state: 'planned' }, order: [['ordinal', 'ASC']] });
    const first = rows[0]!;
    const end = rows.at(-1)!.firstReplicate + rows.at(-1)!.replicateCount;
    await Batch.destroy({ where: { jobId, state: 'planned' } });
    let { ordinal, firstReplicate } = first;
    for (; firstReplicate < end; firstReplicate += replicatesPerBatch, ordinal++)
      await Batch.create({
        ...first.get(),
        id: newId('batch'),
        ordinal,
        firstReplicate,
        replicateCount: Math.min(replicatesPerBatch, end - firstReplicate),
      });
  });
}

/** The engine in this thread. `around` may lose, delay or count batches. */
export function inProcessExecutor(
  options: {
    capacity?: number;
    around?: (task: PointsTask, run: () => Promise<RunBatchAnswer>) => Promise<RunBatchAnswer>;
  } = {},
): Executor {
  const compute = async (task: PointsTask): Promise<RunBatchAnswer> => {
    const started = performance.now();
    const { points, ...result } = await runPoints(task);
    const seconds = (performance.now() - started) / 1000;
    const encoded = points.map((point) => ({ ...point, summary: point.summary.encode() }));
    return { version: protocolVersion, engineVersion, ...result, points: encoded, seconds };
  };
  const { around = (_, run) => run() } = options;
  return {
    capacity: options.capacity ?? 2,
    async run(task, { signal } = {}) {
      // As a thread would: it starts later, and an abort is noticed.
      await new Promise((resolve) => setImmediate(resolve));
      signal?.throwIfAborted();
      const answer = await around(task, () => compute(task));
      signal?.throwIfAborted();
      return answer;
    },
    close: async () => undefined,
  };
}

/** Starts dispatching; resolves to what stops it. `write` stands for the thread that writes results. */
export async function startJobs(executor: Executor, write = writeResults): Promise<() => Promise<void>> {
  setExecutor(executor);
  setResultsWriter({ write, close: async () => undefined });
  const dispatcher = new Dispatcher({ retryMs: () => 1 });
  await dispatcher.resume();
  return () => dispatcher.stop();
}

/** Waits until `holds` of the job's row, looking after each change. */
export async function whenJob(jobId: string, holds: (job: Job) => boolean): Promise<Job> {
  for (;;) {
    let wake = (): void => undefined;
    const changed = new Promise<void>((resolve) => (wake = resolve));
    const stop = onJobChange(jobId, wake);
    try {
      const job = (await Job.findByPk(jobId))!;
      if (holds(job)) return job;
      await changed;
    } finally {
      stop();
    }
  }
}

export const whenOver = (jobId: string): Promise<Job> => whenJob(jobId, ({ state }) => isFinal(state));

/** What a new process would know: nothing. */
export const forget = forgetPrefix;
