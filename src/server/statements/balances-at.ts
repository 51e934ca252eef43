/** What a team's accounts held at a moment, from the running balances of the postings: two look-ups an account, however long the ledger. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { accounts, emptyBalances, type Account, type Balances } from '@/domain/ledger/accounts.ts';
import { lastSequenceBefore } from '../ledger/last-sequence-before.ts';

export interface Cut {
  /** The last transaction of the team before the moment; 0 when there is none. */
  sequence: number;
  balances: Balances;
}

/** `at` is RFC 3339; what happened exactly then comes after the cut. */
export async function cutAt(teamId: string, at: string): Promise<Cut> {
  const sequence = await lastSequenceBefore(teamId, at);
  const newest = accounts.map(
    (account) =>
      `SELECT * FROM (SELECT account, balanceMicrocredits FROM ledgerPostings
       WHERE teamId = $teamId AND account = '${account}' AND transactionSequence <= $sequence
       ORDER BY transactionSequence DESC LIMIT 1)`,
  );
  const rows = await database().query<{ account: Account; balanceMicrocredits: number }>(newest.join(' UNION ALL '), {
    type: QueryTypes.SELECT,
    bind: { teamId, sequence },
  });
  const balances = emptyBalances();
  for (const { account, balanceMicrocredits } of rows) balances[account] = balanceMicrocredits;
  return { sequence, balances };
}
