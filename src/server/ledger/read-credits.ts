/** What a member may see of the team's credits. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import type { CreditsAnswer } from '@/contracts/ledger.ts';
import { monthStartMs } from '@/domain/billing/month-start.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowMs } from '../clock.ts';
import { authorise } from '../teams/authorise.ts';
import { readBalance } from './read-balance.ts';

export async function readCredits(options: { actor: Actor; team: string }): Promise<Result<CreditsAnswer>> {
  const authorised = await authorise({ ...options, permission: 'credits:read' });
  if (!authorised.ok) return authorised;
  const { team } = authorised.value;
  const balance = await readBalance(team.id);
  const monthStartedAt = new Date(monthStartMs(nowMs(), team.timeZone)).toISOString();
  return accept({
    availableMicrocredits: balance.available,
    heldMicrocredits: balance.held,
    frozenMicrocredits: balance.frozen,
    spentMicrocredits: balance.spent,
    returnedMicrocredits: balance.returned,
    boughtMicrocredits: 0 - balance.bought,
    grantedMicrocredits: 0 - balance.granted,
    earnedMicrocredits: 0 - balance.earned,
    spentThisMonthMicrocredits: balance.spent - (await spentBefore(team.id, monthStartedAt)),
    monthStartedAt,
  });
}

/** What the team had spent when `at` came. */
async function spentBefore(teamId: string, at: string): Promise<number> {
  const [row] = await database().query<{ spent: number | null }>(
    `SELECT (SELECT balanceMicrocredits FROM ledgerPostings
             WHERE teamId = $teamId AND account = 'spent' AND transactionSequence <= (
               SELECT sequence FROM ledgerTransactions WHERE teamId = $teamId AND occurredAt < $at
               ORDER BY occurredAt DESC, sequence DESC LIMIT 1)
             ORDER BY transactionSequence DESC LIMIT 1) AS spent`,
    { type: QueryTypes.SELECT, bind: { teamId, at } },
  );
  return row?.spent ?? 0;
}
