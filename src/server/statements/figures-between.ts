/** The figures of a statement between two cuts of the ledger. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import type { StatementFigures } from '@/contracts/statements.ts';
import type { Cut } from './balances-at.ts';

const owned = ({ balances }: Cut): number => balances.available + balances.held + balances.frozen;

export async function figuresBetween(teamId: string, from: Cut, to: Cut): Promise<StatementFigures> {
  // Sources fall as credits come in.
  const received = (account: 'bought' | 'granted' | 'earned') => from.balances[account] - to.balances[account];
  const returned = to.balances.returned - from.balances.returned;
  const takenBack = returned === 0 ? 0 : await takenBackBetween(teamId, from, to);
  return {
    openingMicrocredits: owned(from),
    boughtMicrocredits: received('bought'),
    grantedMicrocredits: received('granted'),
    earnedMicrocredits: received('earned'),
    spentMicrocredits: to.balances.spent - from.balances.spent,
    refundedMicrocredits: returned - takenBack,
    takenBackMicrocredits: takenBack,
    closingMicrocredits: owned(to),
  };
}

async function takenBackBetween(teamId: string, from: Cut, to: Cut): Promise<number> {
  const [row] = await database().query<{ amount: number | null }>(
    `SELECT sum(amountMicrocredits) AS amount
     FROM ledgerTransactions AS own JOIN ledgerPostings ON transactionSequence = sequence AND account = 'returned'
     WHERE own.teamId = $teamId AND kind = 'dispute_lost' AND sequence > $from AND sequence <= $to`,
    { type: QueryTypes.SELECT, bind: { teamId, from: from.sequence, to: to.sequence } },
  );
  return row?.amount ?? 0;
}
