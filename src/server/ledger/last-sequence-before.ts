/** Where a moment cuts the ledger of a team. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';

/** The last transaction of the team before `at` (RFC 3339), by its place in the chain; 0 when there is none. */
export async function lastSequenceBefore(teamId: string, at: string): Promise<number> {
  const [last] = await database().query<{ sequence: number }>(
    `SELECT sequence FROM ledgerTransactions WHERE teamId = $teamId AND occurredAt < $at
     ORDER BY occurredAt DESC, sequence DESC LIMIT 1`,
    { type: QueryTypes.SELECT, bind: { teamId, at } },
  );
  return last?.sequence ?? 0;
}
