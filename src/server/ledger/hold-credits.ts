/** Sets credits aside for a charge segment of a job: available → held. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { findTransaction } from './find-transaction.ts';
import { postTransaction } from './post-transaction.ts';
import { readBalance } from './read-balance.ts';

export interface HoldCredits {
  teamId: string;
  jobId: string;
  /** One hold per segment: asking again for the same amount changes nothing. */
  segmentId: string;
  /** The cap; positive. */
  amountMicrocredits: number;
  userId: string | null;
}

/** Refuses with `insufficient_credits` when less is available. Joins the caller's write transaction. */
export async function holdCredits(options: HoldCredits): Promise<Result<{ transactionId: string }>> {
  const { teamId, jobId, segmentId, amountMicrocredits, userId } = options;
  if (amountMicrocredits <= 0) throw new Error('A hold is positive.');
  const transactionKey = `hold:${segmentId}`;
  const postings = flows.hold(teamId, amountMicrocredits);
  return inWriteTransaction(async () => {
    const earlier = await findTransaction({ transactionKey, teamId, postings });
    if (earlier) return accept({ transactionId: earlier.id });
    const { available } = await readBalance(teamId);
    if (available < amountMicrocredits)
      return refuse(
        'insufficient_credits',
        `This needs ${creditsText(amountMicrocredits)}; the team has ${creditsText(available)} available. Nothing was started. Lower the cap, or buy credits.`,
      );
    const transaction = await postTransaction({
      transactionKey,
      kind: 'hold',
      teamId,
      userId,
      segment: { jobId, segmentId, heldMicrocredits: amountMicrocredits, spentMicrocredits: 0 },
      postings,
    });
    return accept({ transactionId: transaction.id });
  });
}
