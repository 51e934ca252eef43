/** Gives back what a charge segment holds and will not spend: held → available. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { freezeReleased } from '../billing/freeze-released.ts';
import { findTransaction } from './find-transaction.ts';
import { postTransaction } from './post-transaction.ts';
import { readSegment } from './read-segment.ts';

export interface ReleaseHold {
  teamId: string;
  jobId: string;
  segmentId: string;
  /** Absent: all that is left. */
  amountMicrocredits?: number;
  /** Names this release; the same one again changes nothing. */
  releaseId: string;
}

/**
 * Throws when the segment holds less than the amount. Releasing nothing writes nothing. What comes back while a payment
 * is disputed is frozen at once. Joins the caller's write transaction.
 */
export async function releaseHold(options: ReleaseHold): Promise<{ releasedMicrocredits: number }> {
  const { teamId, jobId, segmentId, releaseId } = options;
  const transactionKey = `release:${releaseId}`;
  return inWriteTransaction(async () => {
    const segment = await readSegment(segmentId);
    const earlier = await findTransaction({
      transactionKey,
      teamId,
      postings: flows.release(teamId, options.amountMicrocredits ?? 0),
      anyAmount: options.amountMicrocredits === undefined,
    });
    if (earlier) return { releasedMicrocredits: amountOf(earlier.postings) };
    const amountMicrocredits = options.amountMicrocredits ?? segment.heldMicrocredits;
    if (amountMicrocredits > segment.heldMicrocredits)
      throw new Error(
        `Segment ${segmentId} holds ${segment.heldMicrocredits} microcredits, not ${amountMicrocredits}.`,
      );
    if (amountMicrocredits === 0) return { releasedMicrocredits: 0 };
    await postTransaction({
      transactionKey,
      kind: 'release',
      teamId,
      segment: {
        jobId,
        segmentId,
        heldMicrocredits: segment.heldMicrocredits - amountMicrocredits,
        spentMicrocredits: segment.spentMicrocredits,
      },
      postings: flows.release(teamId, amountMicrocredits),
    });
    await freezeReleased({ teamId, releasedMicrocredits: amountMicrocredits, occasion: transactionKey });
    return { releasedMicrocredits: amountMicrocredits };
  });
}

const amountOf = (postings: string): number =>
  (JSON.parse(postings) as { amountMicrocredits: number }[]).reduce(
    (sum, { amountMicrocredits }) => sum + Math.max(0, amountMicrocredits),
    0,
  );
