/** An open job as the dispatcher holds it: what is left to dispatch, what is out, and its turn to settle. */
import PQueue from 'p-queue';
import { Batch, Job } from '@db/models/jobs.ts';
import type { TurnCandidate } from '@/domain/jobs/fair-turns.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { networkOf } from './batch-task.ts';

export interface WaitingBatch {
  id: string;
  segmentId: string;
  ordinal: number;
  point: number;
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
  /** Dispatched or computed, but not yet part of the prefix. */
  pending = 0;
  /** No more batches are dispatched. */
  ending = false;
  /** Finished: steps that still queue are dropped. */
  over = false;

  constructor(
    readonly jobId: string,
    readonly teamId: string,
    readonly userId: string,
    readonly lane: Job['lane'],
    readonly network: ResolvedNetwork,
    readonly secondsPerReplicate: number,
    waiting: WaitingBatch[],
    done: number,
  ) {
    this.waiting = waiting;
    this.pending = done;
  }

  static async load(job: Job): Promise<OpenJob> {
    const rows = await Batch.findAll({
      where: { jobId: job.id, state: ['planned', 'done'] },
      attributes: ['id', 'segmentId', 'ordinal', 'point', 'firstReplicate', 'replicateCount', 'attempts', 'state'],
      order: [['ordinal', 'ASC']],
      raw: true,
    });
    const waiting = rows.filter(({ state }) => state === 'planned');
    return new OpenJob(
      job.id,
      job.teamId,
      job.userId,
      job.lane,
      await networkOf(job),
      job.secondsPerReplicate,
      waiting,
      rows.length - waiting.length,
    );
  }

  /** Stops dispatching and ends what is out. */
  stop(): void {
    this.ending = true;
    this.waiting.length = 0;
    for (const controller of this.out.values()) controller.abort();
  }
}
