/** Removes the team's saved card; automatic top-up goes off with it. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { AutomaticTopUp, SavedCard } from '@db/models/cards.ts';
import type { CardAnswer } from '@/contracts/cards.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { authorise } from '../teams/authorise.ts';
import { discardCard } from './discard-card.ts';
import { presentCard } from './present-card.ts';

/** Removing again changes nothing. A top-up that is on its way is not called back. */
export async function removeCard(options: { actor: Actor; team: string }): Promise<Result<CardAnswer>> {
  const authorised = await authorise({ ...options, permission: 'billing:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  await inWriteTransaction(async () => {
    const card = await SavedCard.findOne({ where: { teamId: team.id, removedAt: null } });
    if (!card) return;
    await discardCard(card);
    await AutomaticTopUp.update(
      { state: 'off', problem: null, updatedAt: nowText(), updatedBy: userId },
      { where: { teamId: team.id } },
    );
  });
  return accept(await presentCard(team.id));
}
