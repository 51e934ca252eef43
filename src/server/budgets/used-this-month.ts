/** What jobs launched in a month have spent and still hold: what budgets count. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';

export interface LaunchUse {
  segmentId: string;
  projectCodeId: string | null;
  /** Of the hold. */
  occurredAt: string;
  heldMicrocredits: number;
  spentMicrocredits: number;
}

/** One row for each launch and extension whose hold was placed from `startsAt` on, in order. */
export const launchesSince = (teamId: string, startsAt: string): Promise<LaunchUse[]> =>
  database().query<LaunchUse>(
    `SELECT hold.segmentId, jobs.projectCodeId, hold.occurredAt,
       last.segmentHeldMicrocredits AS heldMicrocredits, last.segmentSpentMicrocredits AS spentMicrocredits
     FROM ledgerTransactions AS hold
     JOIN ledgerTransactions AS last ON last.sequence = (
       SELECT max(sequence) FROM ledgerTransactions WHERE segmentId = hold.segmentId)
     LEFT JOIN jobs ON jobs.id = hold.jobId
     WHERE hold.teamId = $teamId AND hold.kind = 'hold' AND hold.occurredAt >= $startsAt
     ORDER BY hold.occurredAt, hold.sequence`,
    { type: QueryTypes.SELECT, bind: { teamId, startsAt } },
  );

export const useOf = (launches: readonly LaunchUse[]): number =>
  launches.reduce((sum, { heldMicrocredits, spentMicrocredits }) => sum + heldMicrocredits + spentMicrocredits, 0);
