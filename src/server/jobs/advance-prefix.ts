/**
 * Extends the complete prefix of a job by the batches that are in, and moves the charge of what joined it.
 *
 * Always inside the write transaction that changed a batch, so that a crash leaves a batch joined and charged, or
 * neither. A batch that does not fit under the cap is left for `cut-at-cap.ts`, which has to read its file first.
 */
import { Op } from 'sequelize';
import { Batch, Job, Segment } from '@db/models/jobs.ts';
import { describeFailure } from '@/domain/jobs/job-inputs.ts';
import { isLook } from '@/domain/jobs/precision.ts';
import { chargeOfJoining, eventsWithinCap } from '@/domain/jobs/longest-prefix.ts';
import { settleCharge } from '../ledger/settle-charge.ts';
import { endJob } from './end-job.ts';

/** What the dispatcher does next about the job. */
export type Advance =
  | { kind: 'waiting' }
  /** The next batch is in but does not fit whole under the cap of its segment. */
  | { kind: 'at_cap'; batch: Batch; segment: Segment }
  /** The prefix is one that a precision target looks at. */
  | { kind: 'look'; replicates: number }
  /** Nothing more joins: write the results. */
  | { kind: 'ending' };

/** `looked`: the prefix that was looked at already and was not precise enough. */
export async function advancePrefix(job: Job, looked = 0): Promise<Advance> {
  for (;;) {
    if (job.ending) return { kind: 'ending' };
    if (job.replicatesDone !== looked && (await wantsLook(job)))
      return { kind: 'look', replicates: job.replicatesDone };
    const batch = await Batch.findOne({
      where: { jobId: job.id, state: { [Op.in]: ['planned', 'done'] } },
      order: [['ordinal', 'ASC']],
    });
    if (!batch) {
      await endJob(job, {
        state: 'done',
        reason: 'replicates_reached',
        detail: `All ${job.replicatesPlanned.toLocaleString('en')} replicates are complete.`,
        failure: null,
      });
      return { kind: 'ending' };
    }
    if (batch.state !== 'done') return { kind: 'waiting' };
    const segment = (await Segment.findByPk(batch.segmentId))!;
    if (!fitsWhole(batch, segment)) return { kind: 'at_cap', batch, segment };
    await joinBatch({ job, segment, batch, replicates: batch.completeReplicates, events: batch.events });
    if (batch.failure) await endJob(job, failedEnding(batch));
  }
}

/** Only the launch stops by precision: an extension was asked for in replicates. */
const wantsLook = async (job: Job): Promise<boolean> =>
  job.inputs.stopping !== undefined &&
  isLook(job.replicatesDone) &&
  (await Segment.count({ where: { jobId: job.id } })) === 1;

/** A batch that its event budget cut short, without a fault of the model, was cut because the cap was in sight. */
function fitsWhole(batch: Batch, segment: Segment): boolean {
  if (batch.completeReplicates < batch.replicateCount && !batch.failure) return false;
  const most = eventsWithinCap(segment.capMicrocredits, segment.microcreditsPerMillionEvents);
  return most === null || BigInt(segment.events) + BigInt(batch.events) <= most;
}

function failedEnding(batch: Batch) {
  const failure = batch.failure!;
  return { state: 'failed' as const, reason: failure.kind, detail: describeFailure(failure), failure };
}

/** Adds the first `replicates` of a batch, `events` in all, to the prefix and charges them. Idempotent by the batch's id. */
export async function joinBatch(options: {
  job: Job;
  segment: Segment;
  batch: Batch;
  replicates: number;
  events: number;
  absorbedEvents?: number;
}): Promise<void> {
  const { job, segment, batch, replicates, events, absorbedEvents = 0 } = options;
  const charge = chargeOfJoining({
    segmentEvents: segment.events,
    events,
    microcreditsPerMillionEvents: segment.microcreditsPerMillionEvents,
  });
  await settleCharge({
    teamId: job.teamId,
    jobId: job.id,
    segmentId: segment.id,
    settlementId: batch.id,
    chargeMicrocredits: charge,
    memo: {
      events: String(events),
      absorbedEvents: String(absorbedEvents),
      replicates,
      firstReplicate: batch.firstReplicate,
    },
  });
  await segment.update({
    events: segment.events + events,
    chargedMicrocredits: segment.chargedMicrocredits + charge,
  });
  await batch.update({ state: 'joined', completeReplicates: replicates, events, absorbedEvents });
  const secondsPerReplicate =
    replicates > 0 ? 0.8 * job.secondsPerReplicate + (0.2 * batch.seconds) / replicates : job.secondsPerReplicate;
  await job.update({
    replicatesDone: job.replicatesDone + replicates,
    events: job.events + events,
    chargedMicrocredits: job.chargedMicrocredits + charge,
    heldMicrocredits: job.heldMicrocredits - charge,
    secondsPerReplicate,
  });
}
