/** One top-up of the team, as our own database has it. */
import { TopUp } from '@db/models/billing.ts';
import type { TopUpDocument } from '@/contracts/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { describeTopUps } from './describe-top-up.ts';

export async function readTopUp(options: {
  actor: Actor;
  team: string;
  topUpId: string;
}): Promise<Result<{ topUp: TopUpDocument }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const row = await TopUp.findOne({ where: { id: options.topUpId, teamId: authorised.value.team.id } });
  const [topUp] = row ? await describeTopUps([row]) : [];
  return topUp ? accept({ topUp }) : refuse('not_found', 'This team has no such top-up.');
}
