/** An operator says that what a team owes after a lost dispute has been paid, or will never be. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Receivable } from '@db/models/cards.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { recordAct } from './record-act.ts';
import { requireOperator } from './require-operator.ts';

/** Deciding the same again changes nothing; launching is free once nothing of the team is open. */
export async function decideReceivable(options: {
  actor: Actor;
  receivableId: string;
  outcome: 'settled' | 'written_off';
  reason: string;
}): Promise<Result<{ state: 'settled' | 'written_off' }>> {
  const { actor, receivableId, outcome, reason } = options;
  const operator = requireOperator(actor);
  if (!operator.ok) return operator;
  const { userId } = operator.value;
  return inWriteTransaction(async () => {
    const row = await Receivable.findByPk(receivableId);
    if (!row) return refuse('not_found', 'There is no such receivable.');
    if (row.state === outcome) return accept({ state: outcome });
    if (row.state !== 'open')
      return refuse(
        'invalid_input',
        `This has been ${row.state === 'settled' ? 'settled' : 'written off'} already. A decision stays.`,
      );
    await row.update({ state: outcome, decidedAt: nowText(), decidedBy: userId, reason });
    await recordAct({
      userId,
      act: outcome === 'settled' ? 'settle_receivable' : 'write_off_receivable',
      teamId: row.teamId,
      subjectId: row.id,
      details: { money: `${row.currency} ${(row.totalMinor / 100).toFixed(2)}`, reason },
    });
    return accept({ state: outcome });
  });
}
