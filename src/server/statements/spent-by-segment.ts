/** What each charge segment was charged between two cuts of the ledger. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import type { Lane } from '@/domain/pricing/price-book.ts';

export interface SegmentSpending {
  segmentId: string;
  jobId: string;
  jobName: string | null;
  ordinal: number | null;
  projectCodeId: string | null;
  projectCode: string | null;
  userId: string | null;
  member: string | null;
  lane: Lane | null;
  charges: number;
  lastSequence: number;
  spentMicrocredits: number;
}

/**
 * Newest launch first. The sum over all is what left the team's holdings into `spent`. Charges of nothing (all of a
 * batch's work was absorbed) make no line.
 */
export async function spentBySegment(
  teamId: string,
  range: { from: number; to: number },
  page: { before?: string | undefined; count?: number } = {},
): Promise<SegmentSpending[]> {
  return database().query<SegmentSpending>(
    `WITH charged AS (
       SELECT own.segmentId, own.jobId, count(*) AS charges, max(own.sequence) AS lastSequence,
         sum(posting.amountMicrocredits) AS spentMicrocredits
       FROM ledgerPostings AS posting JOIN ledgerTransactions AS own ON own.sequence = posting.transactionSequence
       WHERE posting.teamId = $teamId AND posting.account = 'spent'
         AND posting.transactionSequence > $from AND posting.transactionSequence <= $to
       GROUP BY own.segmentId, own.jobId)
     SELECT charged.*, jobs.name AS jobName, segments.ordinal, jobs.projectCodeId, projectCodes.code AS projectCode,
       segments.userId, users.name AS member, quotes.inputs ->> 'lane' AS lane
     FROM charged
     LEFT JOIN segments ON segments.id = charged.segmentId
     LEFT JOIN jobs ON jobs.id = charged.jobId
     LEFT JOIN quotes ON quotes.id = segments.quoteId
     LEFT JOIN users ON users.id = segments.userId
     LEFT JOIN projectCodes ON projectCodes.id = jobs.projectCodeId
     WHERE $before IS NULL OR charged.segmentId < $before
     ORDER BY charged.segmentId DESC LIMIT $count`,
    {
      type: QueryTypes.SELECT,
      bind: { teamId, from: range.from, to: range.to, before: page.before ?? null, count: page.count ?? -1 },
    },
  );
}
