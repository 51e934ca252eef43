/** Settings, state, saved card and latest attempts of automatic top-up. */
import type { AutomaticTopUpDocument } from '@/contracts/automatic-top-up.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { presentAutomaticTopUp } from './present-automatic-top-up.ts';

export async function readAutomaticTopUp(options: {
  actor: Actor;
  team: string;
}): Promise<Result<{ automaticTopUp: AutomaticTopUpDocument }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  return accept({ automaticTopUp: await presentAutomaticTopUp(authorised.value.team) });
}
