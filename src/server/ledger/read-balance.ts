/** The balances of a team's accounts, from the newest posting of each. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { accounts, emptyBalances, type Account, type Balances } from '@/domain/ledger/accounts.ts';

/** Sources (`bought`, `granted`, `earned`) are zero or negative, holdings zero or positive; all sum to zero. */
export async function readBalance(teamId: string): Promise<Balances> {
  const newest = accounts.map(
    (account) =>
      `SELECT * FROM (SELECT account, balanceMicrocredits FROM ledgerPostings
       WHERE teamId = $teamId AND account = '${account}' ORDER BY transactionSequence DESC LIMIT 1)`,
  );
  const rows = await database().query<{ account: Account; balanceMicrocredits: number }>(newest.join(' UNION ALL '), {
    type: QueryTypes.SELECT,
    bind: { teamId },
  });
  const balances = emptyBalances();
  for (const { account, balanceMicrocredits } of rows) balances[account] = balanceMicrocredits;
  return balances;
}
