/** Brand, last four digits and expiry of the team's saved card. */
import type { CardAnswer } from '@/contracts/cards.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { presentCard } from './present-card.ts';

export async function readCard(options: { actor: Actor; team: string }): Promise<Result<CardAnswer>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  return authorised.ok ? accept(await presentCard(authorised.value.team.id)) : authorised;
}
