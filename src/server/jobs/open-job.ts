/** An open job as the dispatcher holds it: what is left to dispatch, what is out, and its turn to settle. */
import PQueue from 'p-queue';
import { Batch, Job } from '@db/models/jobs.ts';
import type { TurnCandidate } from '@/domain/jobs/fair-turns.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { networksOfJob } from './batch-task.ts';

export interface WaitingBatch {
  id: string;
  segmentId: string;
  ordinal: number;
  firstReplicate: number;
  replicateCount: number;
  attempts: number;
}

export class OpenJob implements TurnCandidate {
  /** In order; the next one to dispatch first. */
  readonly waiting: WaitingBatch[];
  /** Batches out with the executor. */
  readonly out = new Map<string, AbortController>();
  /** Settling, cutting and finishing happen one at a time. */
  readonly turn = new PQueue({ concurrency: 1 });
  /** The ordinal of the first batch that is not part of the prefix yet; dispatching never runs far ahead of it. */
  firstUnjoined: number;
  /** No more batches are dispatched. */
  ending = false;
  /** Finished: steps that still queue are dropped. */
  over = false;

  constructor(
    readonly jobId: string,
    readonly teamId: string,
    readonly userId: string,
    readonly lane: Job['lane'],
    /** By point. */
    readonly networks: ResolvedNetwork[],
    readonly secondsPerReplicate: number,
    waiting: WaitingBatch[],
    firstUnjoined: number,
  ) {
    this.waiting = waiting;
    this.firstUnjoined = firstUnjoined;
  }

  /** Whether a batch can be given out now; the one that the prefix waits for always can. */
  hasBatchWithin(lookAhead: number): boolean {
    const next = this.waiting[0];
    return !this.ending && next !== undefined && next.ordinal < this.firstUnjoined + lookAhead;
  }

  static async load(job: Job): Promise<OpenJob> {
    const rows = await Batch.findAll({
      where: { jobId: job.id, state: ['planned', 'done'] },
      attributes: ['id', 'segmentId', 'ordinal', 'firstReplicate', 'replicateCount', 'attempts', 'state'],
      order: [['ordinal', 'ASC']],
      raw: true,
    });
    const waiting = rows.filter(({ state }) => state === 'planned');
    return new OpenJob(
      job.id,
      job.teamId,
      job.userId,
      job.lane,
      await networksOfJob(job),
      job.secondsPerReplicate,
      waiting,
      rows[0]?.ordinal ?? 0,
    );
  }

  /** Stops dispatching and ends what is out. */
  stop(): void {
    this.ending = true;
    this.waiting.length = 0;
    for (const controller of this.out.values()) controller.abort();
  }
}
