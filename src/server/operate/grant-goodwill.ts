/** An operator gives a team credits: a new grant lot, with a reason that stands in the team's ledger. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Team } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { newId } from '../ids.ts';
import { grantCredits } from '../ledger/grant-credits.ts';
import { recordAct } from './record-act.ts';
import { requireOperator } from './require-operator.ts';

export async function grantGoodwill(options: {
  actor: Actor;
  team: string;
  microcredits: number;
  reason: string;
}): Promise<Result<{ transactionId: string }>> {
  const { team: slug, microcredits, reason } = options;
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  return inWriteTransaction(async () => {
    const team = await Team.findOne({ where: { slug } });
    if (!team) {
      const message = `There is no team “${slug}”. The name is that in the address of its pages.`;
      return refuse('invalid_input', message, { errors: [{ path: 'team', code: 'not_found', message }] });
    }
    const grantId = newId('act');
    const { userId } = operator.value;
    const granted = await grantCredits({ teamId: team.id, amountMicrocredits: microcredits, reason, grantId, userId });
    const { transactionId: subjectId } = granted;
    await recordAct({ userId, act: 'grant_goodwill', teamId: team.id, subjectId, details: { microcredits, reason } });
    return accept(granted);
  });
}
