/**
 * Gives batches to the executor, fairly, and settles what comes back; finishes jobs whose end is settled.
 *
 * All it knows is read from the database when a job is opened, so a crash at any point loses nothing but time.
 */
import PQueue from 'p-queue';
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Batch, Job } from '@db/models/jobs.ts';
import { FairTurns } from '@/domain/jobs/fair-turns.ts';
import { isFinal } from '@/domain/jobs/job-state.ts';
import { log } from '../log.ts';
import { advancePrefix, type Advance } from './advance-prefix.ts';
import { batchTask } from './batch-task.ts';
import { cutAtCap } from './cut-at-cap.ts';
import { endJob } from './end-job.ts';
import { executor } from './executor.ts';
import { finishJob } from './finish-job.ts';
import { lookAtPrecision } from './look-at-precision.ts';
import { announceJobChange, onWake } from './job-changes.ts';
import { OpenJob, type WaitingBatch } from './open-job.ts';
import { runBatch } from './run-batch.ts';
import { settleBatch } from './settle-batch.ts';
import { storedBatch } from './stored-batch.ts';

/** A batch lost that often ends its job: the prefix is delivered and the failure is called ours. */
const attemptsMost = 5;
const defaultRetryMs = (attempts: number): number => Math.min(30_000, 100 * 4 ** attempts);

export class Dispatcher {
  readonly #jobs = new Map<string, OpenJob>();
  readonly #opening = new Map<string, Promise<void>>();
  readonly #turns = new FairTurns();
  readonly #running: PQueue;
  readonly #timers = new Set<NodeJS.Timeout>();
  readonly #stopListening: () => void;
  readonly #retryMs: (attempts: number) => number;
  #stopped = false;

  /** `retryMs`: how long to wait after so many lost attempts; tests wait less. */
  constructor({ retryMs = defaultRetryMs }: { retryMs?: (attempts: number) => number } = {}) {
    this.#retryMs = retryMs;
    this.#running = new PQueue({ concurrency: executor().capacity });
    this.#stopListening = onWake((jobId) => void this.#wake(jobId));
  }

  /** Takes up every job that is not over, oldest first. */
  async resume(): Promise<void> {
    const jobs = await Job.findAll({ where: { state: { [Op.in]: ['queued', 'running'] } }, order: [['id', 'ASC']] });
    for (const job of jobs) await this.#wake(job.id);
  }

  /** Ends all work within moments; what was out is computed again at the next start. */
  async stop(): Promise<void> {
    this.#stopped = true;
    this.#stopListening();
    for (const timer of this.#timers) clearTimeout(timer);
    for (const open of this.#jobs.values()) open.stop();
    await this.#running.onIdle();
    await Promise.all([...this.#jobs.values()].map((open) => open.turn.onIdle()));
  }

  /** The batches of a job that are out with the executor now. */
  batchesOut(jobId: string): ReadonlySet<string> {
    return new Set(this.#jobs.get(jobId)?.out.keys());
  }

  async #wake(jobId: string): Promise<void> {
    if (this.#stopped) return;
    const before = this.#opening.get(jobId) ?? Promise.resolve();
    const opening = before.then(() => this.#look(jobId));
    this.#opening.set(jobId, opening);
    await opening.catch((error: unknown) => {
      log().error({ err: error, jobId }, 'job could not be taken up');
      this.#later(5_000, () => void this.#wake(jobId));
    });
    if (this.#opening.get(jobId) === opening) this.#opening.delete(jobId);
  }

  async #look(jobId: string): Promise<void> {
    const job = await Job.findByPk(jobId);
    if (!job || isFinal(job.state)) return;
    let open = this.#jobs.get(jobId);
    if (!open) {
      open = await OpenJob.load(job);
      this.#jobs.set(jobId, open);
    }
    if (job.ending) open.stop();
    this.#settleTurn(open, () => inWriteTransaction(() => this.#advance(jobId)));
    this.#pump();
  }

  async #advance(jobId: string): Promise<Advance> {
    return advancePrefix((await Job.findByPk(jobId))!);
  }

  /** Keeps the executor busy and no busier. */
  #pump(): void {
    while (!this.#stopped && this.#running.pending + this.#running.size < this.#running.concurrency) {
      const lookAhead = 2 * this.#running.concurrency + 2;
      const candidates = [...this.#jobs.values()].filter((open) => open.hasBatchWithin(lookAhead));
      const open = this.#turns.next(candidates);
      if (!open) return;
      const batch = open.waiting.shift()!;
      this.#turns.serve(open, Math.max(0.01, batch.replicateCount * open.secondsPerReplicate));
      void this.#running.add(() => this.#run(open, batch));
    }
  }

  async #run(open: OpenJob, batch: WaitingBatch): Promise<void> {
    const controller = new AbortController();
    open.out.set(batch.id, controller);
    try {
      const answer = await runBatch({ open, batch, signal: controller.signal });
      this.#settleTurn(open, () =>
        settleBatch({ jobId: open.jobId, batchId: batch.id, ordinal: batch.ordinal, answer }),
      );
    } catch (error) {
      if (!controller.signal.aborted) await this.#lost(open, batch, error);
    } finally {
      open.out.delete(batch.id);
      // After the queue has counted this one as over.
      setImmediate(() => this.#pump());
    }
  }

  /** One settling step of a job after the other; what fails is tried again, since it is our failure and not the model's. */
  #settleTurn(open: OpenJob, step: () => Promise<Advance>, attempt = 0): void {
    void open.turn.add(async () => {
      if (open.over) return;
      try {
        await this.#follow(open, await step());
      } catch (error) {
        if (this.#stopped) return;
        log().error({ err: error, jobId: open.jobId, attempt }, 'settling failed; trying again');
        this.#later(this.#retryMs(Math.min(attempt, 4)), () => this.#settleTurn(open, step, attempt + 1));
      }
    });
  }

  async #follow(open: OpenJob, advance: Advance): Promise<void> {
    if (advance.kind === 'at_cap') {
      // The rest lies past the cap.
      open.stop();
      await this.#cut(open, advance);
      await finishJob(open.jobId);
    } else if (advance.kind === 'look') {
      const next = await lookAtPrecision(open.jobId, advance.replicates);
      return this.#follow(open, next);
    } else if (advance.kind === 'ending') {
      open.stop();
      await finishJob(open.jobId);
    } else {
      const unjoined = { jobId: open.jobId, state: { [Op.in]: ['planned', 'done'] } };
      open.firstUnjoined = await Batch.min<number, Batch>('ordinal', { where: unjoined });
      this.#pump();
      return;
    }
    open.over = true;
    this.#jobs.delete(open.jobId);
    // Extended the moment it was over: look again.
    void this.#wake(open.jobId);
    this.#pump();
  }

  async #cut(open: OpenJob, { batch, segment }: Extract<Advance, { kind: 'at_cap' }>): Promise<void> {
    const job = (await Job.findByPk(open.jobId))!;
    await cutAtCap({
      batch,
      segment,
      content: await storedBatch(job, batch),
      runShortened: (replicates) =>
        executor().run(
          batchTask({
            job,
            networks: open.networks,
            firstReplicate: batch.firstReplicate,
            replicateCount: replicates,
          }),
        ),
    });
  }

  /** A lost worker or a full queue: try again later, a limited number of times. */
  async #lost(open: OpenJob, batch: WaitingBatch, error: unknown): Promise<void> {
    const attempts = batch.attempts + 1;
    log().warn({ err: error, jobId: open.jobId, batchId: batch.id, attempts }, 'batch lost');
    await inWriteTransaction(() => Batch.update({ attempts }, { where: { id: batch.id } }));
    if (attempts < attemptsMost) {
      this.#later(this.#retryMs(attempts), () => {
        if (open.ending) return;
        open.waiting.unshift({ ...batch, attempts });
        open.waiting.sort((a, b) => a.ordinal - b.ordinal);
        this.#pump();
      });
      return;
    }
    this.#settleTurn(open, () =>
      inWriteTransaction(async () => {
        const job = (await Job.findByPk(open.jobId))!;
        if (!job.ending)
          await endJob(job, {
            state: 'failed',
            reason: 'our_failure',
            detail:
              'A batch was lost on our side again and again. The replicates complete so far were kept and charged, nothing else was. ' +
              'We have been told; launch the job again, or write to us.',
            failure: null,
          });
        return { kind: 'ending' } as const;
      }),
    );
    announceJobChange(open.jobId);
  }

  #later(ms: number, act: () => void): void {
    const timer = setTimeout(() => {
      this.#timers.delete(timer);
      if (!this.#stopped) act();
    }, ms);
    this.#timers.add(timer);
  }
}
