/** Revokes an API token at once: one's own, or as an owner anybody's of the team. Again changes nothing. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ApiToken } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { authorise } from './authorise.ts';
import { tokensOf } from './list-tokens.ts';

export async function revokeToken(options: { actor: Actor; team: string; token: string }): Promise<Result<null>> {
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'tokens:manage' });
    if (!authorised.ok) return authorised;
    const row = await ApiToken.findOne({ where: { ...tokensOf(authorised.value), id: options.token } });
    if (!row) return refuse('not_found', 'There is no such token here.');
    if (!row.revokedAt) await row.update({ revokedAt: nowText() });
    return accept(null);
  });
}
